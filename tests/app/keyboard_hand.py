"""Two hands on a keyboard: builds a whole project in a window with key events only.

What to press is planned from the project wanted and from what the window shows; nothing is set but by a key.
"""

from __future__ import annotations

from collections import deque
from copy import copy

from PySide6.QtCore import Qt
from PySide6.QtGui import QAction
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QComboBox, QLineEdit, QMenu, QPushButton, QSlider, QWidget

from app.card.scene import Part
from app.gestures import LinkKeys
from app.gestures.base import Target
from app.path_view import travel
from app.window import MainWindow
from engine.figures import Figure
from engine.project import Link, Project
from engine.stages import Setting, Stage

Key, Mod = Qt.Key, Qt.KeyboardModifier
ARROWS: dict[travel.Way, Qt.Key] = {
    "left": Key.Key_Left, "right": Key.Key_Right, "up": Key.Key_Up, "down": Key.Key_Down,
}  # fmt: skip
MOST_KEYS = 20_000


class Keyboard:
    """Presses keys wherever the keyboard is. `pressed` counts them."""

    def __init__(self, window: MainWindow) -> None:
        self.window, self.document = window, window.document
        self.pressed = 0

    # -- keys ------------------------------------------------------------------------------------------------
    def press(self, key: Qt.Key, modifiers: Qt.KeyboardModifier = Mod.NoModifier) -> None:
        assert self.pressed < MOST_KEYS, f"this leads nowhere: the keyboard is at {self.focused}"
        popup = QApplication.activePopupWidget()
        QTest.keyClick(popup or self.focused, key, modifiers)
        self.pressed += 1

    def type(self, text: str) -> None:
        QTest.keyClicks(self.focused, text)
        self.pressed += len(text)

    @property
    def focused(self) -> QWidget:
        found: QWidget | None = self.window.focusWidget()
        return self.window if found is None else found

    def go_to(self, pane: QWidget) -> None:
        """F6 until the keyboard is in this part of the window."""
        for _ in range(12):
            if pane is self.focused or pane.isAncestorOf(self.focused):
                return
            self.press(Key.Key_F6)
        raise AssertionError(f"F6 does not lead to {pane.accessibleName()}, but to {self.focused}")

    # -- building --------------------------------------------------------------------------------------------
    def build(self, wanted: Project) -> None:
        """Build a project whose stages have names of their own: stages, settings, links, distances, wiring."""
        stages = sorted(wanted.stages, key=lambda stage: (-stage.column, stage.row))
        for stage in stages:
            self.add(stage)
        for stage in stages:
            self.select(stage.name)
            self.fill_in(stage, {})
        for link in wanted.links:
            self.link(wanted, link)
        for stage in stages:
            distances = {
                wanted.stage[link.source].name: link.distance_m.text
                for link in wanted.topology.into[stage.id]
                if link.distance_m is not None
            }
            if distances:
                self.select(stage.name)
                self.fill_in(stage, distances)
        for link in wanted.links:
            if link.wiring != "balanced":
                self.wire(wanted, link)

    def add(self, stage: Stage) -> None:
        """Find a kind on the shelf, set it down unlinked, name it, take it to its place."""
        path = self.window.centre.path
        self.go_to(path)
        while self.document.selection:
            self.press(Key.Key_Escape)
        self.press(Key.Key_K, Mod.ControlModifier)
        self.type(stage.title)
        self.press(Key.Key_Down)  # to the list
        kinds = self.window.shelf.list
        while kinds.currentItem().text() != stage.title:
            self.press(Key.Key_Down)
        self.press(Key.Key_Return)
        self.go_to(path)
        self.press(Key.Key_F2)
        self.type(stage.name)
        self.press(Key.Key_Return)
        self.move(stage.column, stage.row)

    def move(self, column: int, row: int) -> None:
        """Take the current stage to a place: below all others, across, and up."""
        lowest = max(row, *(stage.row + 1 for stage in self.document.project.stages))
        here = self._here()
        if (here.column, here.row) == (column, row):
            return
        for way, reached in (
            ("down", lambda at: at.row >= lowest), ("right", lambda at: at.column >= column),
            ("up", lambda at: at.row <= row),
        ):  # fmt: skip
            while not reached(self._here()):
                self.press(ARROWS[way], Mod.AltModifier)
        here = self._here()
        assert (here.column, here.row) == (column, row), f"{here.name} stands at {here.column}, {here.row}"

    def _here(self) -> Stage:
        (key,) = self.document.selection
        return self.document.project.stage[key]

    def select(self, name: str) -> Stage:
        """Go to a stage along the path, by arrows."""
        path = self.window.centre.path
        self.go_to(path)
        wanted = next(stage.id for stage in self.document.project.stages if stage.name == name)
        self.press(Key.Key_Home)
        for way in self._way(path.current, wanted):
            self.press(ARROWS[way])
        assert self.document.selection == {wanted}
        return self.document.project.stage[wanted]

    def _way(self, start: str, end: str) -> list[travel.Way]:
        """The fewest arrows from one stage to another."""
        came: dict[str, list[travel.Way]] = {start: []}
        ahead = deque([start])
        while ahead:
            at = ahead.popleft()
            if at == end:
                return came[at]
            for way in ARROWS:
                after = travel.next_stage(self.window.centre.path.grid, at, way)
                if after is not None and after not in came:
                    came[after] = [*came[at], way]
                    ahead.append(after)
        raise AssertionError(f"no arrows lead from {start} to {end}")

    def link(self, wanted: Project, link: Link) -> None:
        """L, L again for another output, arrows to the input, Enter."""
        source, target = wanted.stage[link.source].name, wanted.stage[link.target].name
        self.select(source)
        self.press(Key.Key_L)
        path, count = self.window.centre.path, len(self.document.project.links)
        keys = path.hand.link_keys
        assert keys is not None
        for _ in range(80):
            if keys.output == link.output:
                break
            self.press(Key.Key_L)
        assert keys.output == link.output
        aim = next(stage.id for stage in self.document.project.stages if stage.name == target)
        for way in _way_to_port(keys, aim, link.input):
            self.press(ARROWS[way])
        self.press(Key.Key_Return)
        assert len(self.document.project.links) == count + 1, f"{source} to {target}: {path.note}"

    def wire(self, wanted: Project, link: Link) -> None:
        """Go to a link that leads straight on, and choose its wiring in the card."""
        self.select(wanted.stage[link.source].name)
        self.press(Key.Key_Right, Mod.ControlModifier)
        (key,) = self.document.selection
        self._round(lambda row: self._put(row, key, "wiring", link.wiring))

    # -- the card --------------------------------------------------------------------------------------------
    def fill_in(self, stage: Stage, distances: dict[str, str]) -> None:
        """Make everything on the card what it should be, going round with Tab until nothing differs."""
        here = self._here()
        for _ in range(4):
            before = self.document.project
            self._round(lambda row: self._mend(row, stage, distances))
            self._add_figures(here.id, stage)
            if self.document.project.same_as(before):
                return
            self.select(stage.name)

    def _round(self, mend: object) -> None:
        """Tab through the card once."""
        card = self.window.side.card
        self.go_to(card)
        seen: set[tuple[str, str]] = set()
        first: tuple[str, str] | None = None
        for _ in range(400):
            at = self.focused
            if not card.isAncestorOf(at):
                break
            row = _row_of(at)
            mark = (str(getattr(row, "name", "")) + str(getattr(row, "keys", "")), at.accessibleName())
            if mark == first and len(seen) > 3:
                break
            first = first or mark
            if row is not None and mark not in seen:
                seen.add(mark)
                mend(row)
            self.press(Key.Key_Tab)

    def _mend(self, row: Part, stage: Stage, distances: dict[str, str]) -> None:
        name, keys = getattr(row, "name", ""), getattr(row, "keys", ())
        if not keys or not name:
            return
        item = self.document.project.item(keys[0])
        if isinstance(item, Link):
            source = self.document.project.stage[item.source].name
            if name == "distance_m" and source in distances:
                self._put(row, keys[0], name, distances[source])
            return
        field, _, number = name.partition(".")
        value = getattr(stage, field)
        if number:
            value = value[int(number)] if int(number) < len(value) else None
        if isinstance(value, Figure):
            value = value.text
        self._put(row, keys[0], name, value)

    def _put(self, row: Part, key: str, name: str, wanted: object) -> None:
        """Make one field what it should be, where the keyboard is on it."""
        field, _, number = name.partition(".")
        item = self.document.project.item(key)
        have = getattr(item, field)
        if number:
            have = have[int(number)] if int(number) < len(have) else None
        if (have.text if isinstance(have, Figure) else have) == wanted:
            return
        at = self.focused
        if isinstance(wanted, Setting) and isinstance(have, Setting):
            if have.value != wanted.value:
                self._set_control(at, row, wanted)
        elif isinstance(at, QPushButton | QComboBox):
            self._choose(at, row, str(wanted))
        elif isinstance(at, QLineEdit) and "tolerance" not in at.accessibleName():
            self._write(str(wanted if wanted is not None else ""))

    def _set_control(self, at: QWidget, row: Part, wanted: Setting) -> None:
        ranged = row._declared()[1]
        if ranged.choices:
            name = next(text for text, value in ranged.choices if value == wanted.value)
            self._choose(at, row, name)
        elif isinstance(at, QSlider):
            self.type("0")  # a number begun on a slider goes on in its field
            self._write("off" if wanted.value is None else f"{wanted.value:g}")

    def _write(self, text: str) -> None:
        self.press(Key.Key_A, Mod.ControlModifier)
        if text:
            self.type(text)
        else:
            self.press(Key.Key_Delete)
        self.press(Key.Key_Return)

    def _choose(self, at: QWidget, row: Part, wanted: str) -> None:
        """Arrow along buttons or a list until the wanted name is there."""
        for key in (*[Key.Key_Up] * 12, *[Key.Key_Down] * 12):
            at = self.focused
            shown = (
                at.currentText()
                if isinstance(at, QComboBox)
                else at.text()
                if isinstance(at, QPushButton)
                else ""
            )
            if shown.lower() == wanted.lower():
                if isinstance(at, QPushButton) and not at.isChecked():
                    self.press(Key.Key_Space)
                return
            if not isinstance(at, QPushButton | QComboBox) or "adjustable" in at.accessibleName():
                return
            self.press(key)

    def _add_figures(self, key: str, stage: Stage) -> None:
        """Open figures that the card does not show yet, from its menu, and type them."""
        for name, spec in stage.figure_specs().items():
            value, have = getattr(stage, name), getattr(self.document.project.stage[key], name)
            texts = [figure.text for figure in value] if spec.many else [value.text] if value else []
            start = len(have) if spec.many else (1 if have is not None else 0)
            for text in texts[start:]:
                if stage.in_use(name):
                    self._add_figure(spec.label, text)

    def _add_figure(self, label: str, text: str) -> None:
        self.go_to(self.window.side.card)
        for _ in range(400):
            if self.focused.accessibleName() == "Add a figure":
                break
            self.press(Key.Key_Tab)
        self.press(Key.Key_Space)
        menu = QApplication.activePopupWidget()
        assert isinstance(menu, QMenu), f"no menu offers {label}"
        for _ in range(60):
            self.press(Key.Key_Down)
            action: QAction | None = menu.activeAction()
            if action is not None and action.text() == label:
                break
        self.press(Key.Key_Return)
        self.window.activateWindow()  # as a window manager does when a menu closes
        QApplication.processEvents()
        self._write(text)
        QApplication.processEvents()


def _row_of(widget: QWidget) -> Part | None:
    at: QWidget | None = widget
    while at is not None and not (isinstance(at, Part) and hasattr(at, "name")):
        at = at.parentWidget()
    return at


def _way_to_port(keys: LinkKeys, stage: str, port: str) -> list[travel.Way]:
    """The fewest arrows that bring a link drawn by key to an input."""
    probe = copy(keys)
    came: dict[Target, list[travel.Way]] = {keys.target: []}
    ahead = deque([keys.target])
    while ahead:
        at = ahead.popleft()
        if (at.id, at.port) == (stage, port):
            return came[at]
        for way in ARROWS:
            probe.target = at
            probe.step(way)
            if probe.target not in came:
                came[probe.target] = [*came[at], way]
                ahead.append(probe.target)
    raise AssertionError(f"no arrows lead to {stage}, {port}")
