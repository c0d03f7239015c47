"""The window as a hand finds it: a chain is built, slid, undone, saved and opened again with real events."""

from __future__ import annotations

import gc
from collections.abc import Iterator, Sequence
from pathlib import Path

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QSlider, QWidget

from app import edits, places, recovery
from app.ask import Recovered, SaveFirst
from app.document import Document
from app.inks import SCHEMES
from app.memory import Memory
from app.recovery import Slot
from app.window import MainWindow
from engine import store
from engine.project import Link, Project
from engine.stages import template

Key = Qt.Key
Mod = Qt.KeyboardModifier


class Answers:
    """Stands for the person: what will be answered, and what was asked."""

    def __init__(self) -> None:
        self.asked: list[str] = []
        self.first: SaveFirst = "discard"
        self.recovered: Recovered = "later"
        self.yes = True
        self.path: Path | None = None

    def save_first(self, name: str) -> SaveFirst:
        self.asked.append(f"save first: {name}")
        return self.first

    def recover(self, text: str) -> Recovered:
        self.asked.append(f"recover: {text}")
        return self.recovered

    def confirm(self, title: str, text: str, yes: str) -> bool:
        self.asked.append(f"confirm: {title}")
        return self.yes

    def tell(self, title: str, text: str) -> None:
        self.asked.append(f"tell: {title} | {text}")

    def open_path(self, folder: Path) -> Path | None:
        self.asked.append("open path")
        return self.path

    def save_path(self, title: str, suggested: Path, kinds: Sequence[str]) -> Path | None:
        self.asked.append(f"save path: {suggested.name}")
        return self.path


@pytest.fixture
def answers() -> Answers:
    return Answers()


@pytest.fixture
def window(qtbot, answers: Answers) -> Iterator[MainWindow]:
    made = MainWindow(Document(), answers)
    qtbot.addWidget(made)
    made.resize(1366, 768)
    made.show()
    qtbot.waitExposed(made)
    yield made
    answers.first = "discard"


def chain() -> Project:
    return Project(
        stages=(
            template("sound_source", "talker", "Talker", column=0),
            template("microphone", "mic", "Lectern mic", column=1),
            template("preamplifier", "pre", "Preamp 3", column=2, gain_db={"value": 40.0}),
        ),
        links=(Link(id="l1", source="talker", target="mic"), Link(id="l2", source="mic", target="pre")),
    )


def keys(widget: QWidget | None, *pressed: Key, modifiers: Mod = Mod.NoModifier) -> None:
    assert widget is not None
    for key in pressed:
        QTest.keyClick(widget, key, modifiers)


def focused() -> QWidget:
    found = QApplication.focusWidget()
    assert found is not None
    return found


def add(window: MainWindow, title: str) -> None:
    """Add a kind as the keyboard does: to the shelf, type its name, Enter."""
    keys(focused(), Key.Key_K, modifiers=Mod.ControlModifier)
    QTest.keyClicks(focused(), title)
    keys(focused(), Key.Key_Return)


# -- the main job --------------------------------------------------------------------------------------------
def test_build_slide_undo_save_and_open_again(window, answers, tmp_path, qtbot):
    window.centre.path.setFocus()
    for title in ("Sound source", "Microphone", "Preamplifier"):
        add(window, title)
    document = window.document
    assert [stage.kind for stage in document.project.stages] == ["sound_source", "microphone", "preamplifier"]
    assert len(document.project.links) == 2

    pre = document.project.stages[2].id
    before = document.project
    document.flush()
    level = document.outcome.node(pre, "out").level
    document.select([pre])
    sliders = [slider for slider in window.side.card.findChildren(QSlider) if slider.isVisible()]
    assert sliders, "the card shows the preamplifier's gain as a slider"
    gain = next(slider for slider in sliders if "ain" in slider.accessibleName())
    gain.setFocus()
    for _ in range(6):
        keys(gain, Key.Key_Right)
    document.end_gesture()
    moved = document.project.stage[pre].gain_db.value - before.stage[pre].gain_db.value
    assert moved == pytest.approx(6.0)
    assert document.outcome.node(pre, "out").level == pytest.approx(level + 6.0, abs=1e-6)

    keys(window, Key.Key_Z, modifiers=Mod.ControlModifier)
    while document.project.stage[pre].gain_db != before.stage[pre].gain_db:
        assert document.undo_stack.canUndo()
        keys(window, Key.Key_Z, modifiers=Mod.ControlModifier)
    assert document.project.same_as(before)

    answers.path = tmp_path / "hall.gainwright"
    keys(window, Key.Key_S, modifiers=Mod.ControlModifier)
    assert not document.modified
    assert store.read(answers.path)[0].same_as(document.project)

    keys(window, Key.Key_N, modifiers=Mod.ControlModifier)
    assert document.project.stages == ()
    keys(window, Key.Key_O, modifiers=Mod.ControlModifier)
    assert document.project.same_as(before)
    assert document.path == answers.path


def test_a_kind_dragged_from_the_shelf_lands_on_the_path(window, qtbot):
    kinds = window.shelf.list
    item = kinds.item(1)
    start = kinds.visualItemRect(item).center()
    path = window.centre.path
    end = path.mapToGlobal(QPoint(path.width() // 3, path.height() // 3))
    viewport = kinds.viewport()
    QTest.mousePress(viewport, Qt.MouseButton.LeftButton, Mod.NoModifier, start)
    for step in (0.3, 0.6, 1.0):
        at = viewport.mapFromGlobal(end)
        QTest.mouseMove(
            viewport, start + QPoint(round((at.x() - start.x()) * step), round((at.y() - start.y()) * step))
        )
    QTest.mouseRelease(viewport, Qt.MouseButton.LeftButton, Mod.NoModifier, viewport.mapFromGlobal(end))
    assert len(window.document.project.stages) == 1


# -- the file ------------------------------------------------------------------------------------------------
def test_title_shows_file_and_modified_mark(window, answers, tmp_path):
    assert window.windowTitle() == "Untitled venue[*] – Gainwright"
    assert not window.isWindowModified()
    window.document.load(chain(), None)
    window.document.edit("Gain", edits.set_control(window.document.project, "pre", "gain_db", 12.0))
    assert window.isWindowModified()
    assert "not saved" in window.top.venue.accessibleName()
    answers.path = tmp_path / "hall.gainwright"
    window.files.save()
    assert window.windowTitle() == "hall[*] – Gainwright"
    assert not window.isWindowModified()
    window.document.undo()
    assert window.isWindowModified()


@pytest.mark.parametrize(("answer", "closes"), [("cancel", False), ("discard", True), ("save", True)])
def test_unsaved_work_is_asked_for_before_it_is_left(window, answers, tmp_path, answer, closes):
    window.document.load(chain(), None)
    window.document.edit("Gain", edits.set_control(window.document.project, "pre", "gain_db", 12.0))
    answers.first, answers.path = answer, tmp_path / "a.gainwright"
    assert window.close() is closes
    assert answers.asked[0] == "save first: Untitled venue"
    assert (tmp_path / "a.gainwright").exists() is (answer == "save")


def test_saving_that_is_called_off_keeps_the_window(window, answers):
    window.document.load(chain(), None, saved=Project())
    answers.first, answers.path = "save", None
    assert not window.close()


def test_a_file_that_cannot_be_opened_is_told_and_changes_nothing(window, answers, tmp_path):
    window.document.load(chain(), None)
    broken, newer = tmp_path / "broken.gainwright", tmp_path / "newer.gainwright"
    broken.write_text("{", encoding="utf-8")
    newer.write_text('{"format": "gainwright", "version": 99}', encoding="utf-8")
    for path, says in (
        (broken, "broken.gainwright cannot be opened | Line 1, column 2"),
        (newer, "version 99"),
        (tmp_path / "none.gainwright", "There is no such file"),
        (tmp_path, "is not a file"),
    ):
        assert not window.files.open(path)
        assert says in answers.asked[-1]
    assert "pre" in window.document.project.stage
    assert newer.read_text(encoding="utf-8") == '{"format": "gainwright", "version": 99}'


def test_unknown_fields_are_noted(window, tmp_path):
    file = tmp_path / "a.gainwright"
    file.write_text(
        store.to_text(chain()).replace('"name": "Talker",', '"name": "Talker", "mood": "calm",'),
        encoding="utf-8",
    )
    assert window.files.open(file)
    assert '"mood" is not known here; it is kept' in window.notice.text
    window.files.save()
    assert '"mood": "calm"' in file.read_text(encoding="utf-8")


def test_a_file_changed_by_someone_else_is_told_before_it_is_replaced(window, answers, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, chain())
    window.files.open(file)
    store.write(file, Project())
    answers.yes = False
    assert not window.files.save()
    assert answers.asked[-1] == "confirm: a.gainwright was changed elsewhere"
    assert store.read(file)[0].same_as(Project())
    answers.yes = True
    assert window.files.save()
    assert "pre" in store.read(file)[0].stage


def test_a_file_removed_while_open_is_saved_again(window, answers, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, chain())
    window.files.open(file)
    file.unlink()
    assert window.files.save()
    assert store.read(file)[0].same_as(window.document.project)


def test_a_folder_that_went_away_is_told_and_nothing_is_lost(window, answers, tmp_path):
    file = tmp_path / "stick" / "a.gainwright"
    file.parent.mkdir()
    store.write(file, chain())
    window.files.open(file)
    window.document.edit("Gain", edits.set_control(window.document.project, "pre", "gain_db", 12.0))
    file.unlink()
    file.parent.rmdir()
    assert not window.files.save()
    assert "a.gainwright was not saved | There is no such file or folder." in answers.asked[-1]
    assert window.document.modified
    answers.path = tmp_path / "b"
    assert window.files.save_as()
    assert window.document.path == tmp_path / "b.gainwright"


def test_the_second_window_on_a_file_is_told(window, answers, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, chain())
    other = recovery.hold(file)
    assert other is not None
    answers.yes = False
    assert not window.files.open(file)
    assert answers.asked[-1] == "confirm: a.gainwright is open elsewhere"
    assert window.document.path is None
    other.release()
    assert window.files.open(file)
    assert recovery.hold(file) is None
    window.files.new()
    free = recovery.hold(file)
    assert free is not None
    free.release()


def test_opening_the_open_file_again_asks_nothing(window, answers, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, chain())
    window.files.open(file)
    window.files.open(file)
    assert answers.asked == []
    assert recovery.hold(file) is None


def test_revert_goes_back_to_the_file(window, answers, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, chain())
    window.files.open(file)
    assert not window.actions_["revert"].isEnabled()
    window.document.edit("Gain", edits.set_control(window.document.project, "pre", "gain_db", 12.0))
    answers.yes = False
    window.actions_["revert"].trigger()
    assert window.document.modified
    answers.yes = True
    window.actions_["revert"].trigger()
    assert window.document.project.same_as(chain())


def test_recent_files_are_remembered_and_can_be_forgotten(window, tmp_path):
    for name in ("a", "b"):
        store.write(tmp_path / f"{name}.gainwright", chain())
        window.files.open(tmp_path / f"{name}.gainwright")
    window.files.open(tmp_path / "a.gainwright")
    assert [path.stem for path in Memory().recent] == ["a", "b"]
    (tmp_path / "b.gainwright").unlink()
    window.files.open(tmp_path / "b.gainwright")
    assert [path.stem for path in Memory().recent] == ["a"]
    window.memory.forget_recent()
    assert Memory().recent == ()


def test_samples_open_as_projects_of_ones_own(window):
    for sample in places.sample_projects():
        assert window.files.open_copy(sample)
        assert window.document.path is None
        assert window.document.project.stages


# -- recovery ------------------------------------------------------------------------------------------------
def orphaned(project: Project, origin: Path | None) -> None:
    slot = Slot()
    slot.keep(project, origin)
    slot._lock.release()


@pytest.mark.parametrize("answer", ["open", "later", "discard"])
def test_unsaved_work_is_offered_at_the_start(window, answers, tmp_path, answer):
    file = tmp_path / "a.gainwright"
    store.write(file, Project())
    orphaned(chain(), file)
    answers.recovered = answer
    window.offer_recovery()
    assert len(answers.asked) == 1
    assert f"from {file}" in answers.asked[0]
    assert ("pre" in window.document.project.stage) is (answer == "open")
    if answer == "open":
        assert window.document.path == file
        assert window.document.modified
        assert store.read(file)[0].same_as(Project())
    kept = list(places.recovery().glob("*.gainwright"))
    assert len(kept) == (0 if answer == "discard" else 1)


def test_a_clean_end_leaves_nothing_to_recover(window):
    window.document.load(chain(), None, saved=Project())
    assert window.rescue()
    assert len(list(places.recovery().glob("*.gainwright"))) == 1
    window.close()
    assert recovery.orphans() == []
    assert list(places.recovery().iterdir()) == []


def test_no_place_for_unsaved_work_is_said_and_the_window_opens(qtbot, answers, home):
    home.parent.mkdir(parents=True, exist_ok=True)
    home.write_text("a file where a folder should be", encoding="utf-8")
    window = MainWindow(Document(), answers)
    qtbot.addWidget(window)
    window.show()
    assert "Unsaved work cannot be kept aside" in window.notice.text
    assert not window.rescue()


# -- looking -------------------------------------------------------------------------------------------------
def test_path_and_diagram_share_columns_scroll_and_zoom(window, qtbot):
    stages = tuple(template("pad", f"pad-{n}", column=n) for n in range(30))
    window.document.load(Project(stages=stages), None)
    centre = window.centre
    centre.zoom(3.0)
    qtbot.waitUntil(centre.bar.isVisible)
    centre.bar.setValue(centre.bar.maximum())
    assert centre.columns.scroll_px == pytest.approx(centre.columns.most_scroll_px, abs=1.0)
    centre.fit()
    assert centre.columns.x_out(29) <= centre.path.width()
    left = centre.path.mapTo(window, QPoint(0, 0)).x()
    assert left == centre.diagram.mapTo(window, QPoint(0, 0)).x()
    assert centre.path.width() == centre.diagram.width()


def test_the_whole_path_stays_in_view_until_a_hand_zooms(window, qtbot):
    window.document.load(
        Project(stages=tuple(template("pad", f"pad-{n}", column=n) for n in range(14))), None
    )
    centre = window.centre
    centre.fit()
    for width in (1900, 1100, 1500):
        window.resize(width, 800)
        qtbot.waitUntil(lambda: abs(centre.columns.x_out(13) + 100 - centre.path.width()) < 40)
    centre.zoom(1.3)
    pitch = centre.columns.pitch_px
    window.resize(1300, 800)
    QApplication.processEvents()
    assert centre.columns.pitch_px == pitch


@pytest.mark.parametrize("scheme", list(SCHEMES))
def test_every_scheme_dresses_the_whole_window(window, scheme):
    window.actions_[f"scheme {scheme}"].trigger()
    inks = SCHEMES[scheme]
    shown = window.grab().toImage()
    ratio = shown.devicePixelRatio()
    for widget in (window.top, window.shelf, window.side, window.bottom):
        at = widget.mapTo(window, QPoint(2, widget.height() - 6))
        found = shown.pixelColor(round(at.x() * ratio), round(at.y() * ratio))
        assert found in (inks.paper, inks.raised), (
            f"{widget.objectName() or type(widget).__name__}: {found.name()}"
        )
    assert Memory().text("scheme") == scheme


def test_units_views_and_held_trace_reach_the_diagram(window):
    window.document.load(chain(), None)
    keys(window, Key.Key_3, modifiers=Mod.ControlModifier)
    assert window.centre.diagram.look.unit == "V"
    keys(window, Key.Key_5, modifiers=Mod.ControlModifier)
    assert window.centre.diagram.look.view == "to clip"
    keys(window, Key.Key_H, modifiers=Mod.ControlModifier)
    assert window.centre.diagram.held is window.document.outcome
    window.files.new()
    assert window.centre.diagram.held is None


def test_f6_goes_round_the_parts_of_the_window(window):
    window.document.load(chain(), None)
    window.document.select(["pre"])
    window.centre.path.setFocus()
    seen = []
    for _ in range(5):
        keys(focused(), Key.Key_F6)
        seen.append(
            next(pane for pane in window.panes() if pane is focused() or pane.isAncestorOf(focused()))
        )
    assert len(set(map(id, seen))) >= 4
    keys(focused(), Key.Key_F6, modifiers=Mod.ShiftModifier)
    assert focused() is not window


def test_the_chart_comes_after_the_first_frame(window, qtbot):
    qtbot.waitUntil(lambda: window.side.chart is not None, timeout=10_000)


def test_the_windows_place_is_remembered(qtbot, answers):
    first = MainWindow(Document(), answers)
    qtbot.addWidget(first)
    first.resize(1200, 700)  # the offscreen screen is narrower than any window of ours: the height tells
    first.show()
    first.close()
    second = MainWindow(Document(), answers)
    qtbot.addWidget(second)
    assert second.height() == 700


def test_a_damaged_memory_is_forgotten(qtbot, answers):
    places.data().mkdir(parents=True)
    (places.data() / "window.json").write_text(
        '{"recent": 5, "geometry": "%%%", "scheme": ["x"]}', encoding="utf-8"
    )
    window = MainWindow(Document(), answers)
    qtbot.addWidget(window)
    window.show()
    assert Memory().recent == ()
    (places.data() / "window.json").write_text("{", encoding="utf-8")
    assert Memory().text("scheme") == ""


def test_the_first_start_says_what_to_heed_once(window):
    window.greet()
    assert "start 20" in window.notice.text
    window.notice.hide()
    window.greet()
    assert window.notice.text == ""


def test_the_venue_is_edited_in_the_card(window):
    window.document.load(chain(), None)
    window.document.select(["pre"])
    keys(window, Key.Key_F4)
    assert window.document.selection == frozenset()
    name = next(
        field for field in window.side.card.findChildren(QLineEdit) if field.text() == "Untitled venue"
    )
    name.setFocus()
    name.selectAll()
    QTest.keyClicks(name, "Harbour Hall")
    keys(name, Key.Key_Return)
    assert window.document.project.header.name == "Harbour Hall"
    assert "Harbour Hall" in window.top.venue.accessibleName()


@pytest.mark.parametrize("name", ["about", "keys"])
def test_help_opens_beside_the_work(window, name, qtbot):
    window.actions_[name].trigger()
    from PySide6.QtWidgets import QDialog

    dialog = next(widget for widget in window.findChildren(QDialog) if widget.isVisible())
    dialog.close()


# -- paper ---------------------------------------------------------------------------------------------------
def test_sheets_and_diagram_are_written_where_the_person_says(window, answers, tmp_path):
    window.files.open_copy(places.sample_projects()[0])
    answers.path = tmp_path / "sheets.pdf"
    keys(window, Key.Key_E, modifiers=Mod.ControlModifier | Mod.ShiftModifier)
    assert answers.path.read_bytes().startswith(b"%PDF")
    assert str(answers.path) in window.notice.text
    answers.path = tmp_path / "levels.png"
    keys(window, Key.Key_E, modifiers=Mod.ControlModifier)
    assert answers.path.read_bytes().startswith(b"\x89PNG")
    answers.path = tmp_path / "gone" / "levels.png"
    window.actions_["diagram"].trigger()
    assert answers.asked[-1].startswith("tell: levels.png was not written")


def test_preview_and_print_dialog_stay_as_long_as_they_are_open(window, qtbot, monkeypatch):
    from PySide6.QtPrintSupport import QPrintDialog, QPrintPreviewDialog

    window.files.open_copy(places.sample_projects()[0])
    for name, kind in (("preview", QPrintPreviewDialog), ("print", QPrintDialog)):
        window.actions_[name].trigger()
        gc.collect()  # a printer that nobody keeps would be gone now, and the dialog crash
        dialog = window.findChild(kind)
        qtbot.waitUntil(dialog.isVisible)
        QApplication.processEvents()
        dialog.close()


def test_shortcuts_are_unique(window):
    taken: dict[str, str] = {}
    for name, action in window.actions_.items():
        for key in action.shortcuts():
            text = key.toString()
            assert text not in taken, f"{text}: {name} and {taken[text]}"
            taken[text] = name
