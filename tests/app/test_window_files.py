"""The window and its file: saving, asking, what others do to the file, recovery."""

from __future__ import annotations

from pathlib import Path

import pytest

from app import edits, places, recovery
from app.document import Document
from app.memory import Memory
from app.recovery import Slot
from app.window import MainWindow
from engine import store
from engine.project import Project
from tests.app.window_hand import chain


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
