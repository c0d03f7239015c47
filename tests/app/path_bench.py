"""A shelf beside a path, and the hand that works on them: real widgets, real events."""

from __future__ import annotations

from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QHBoxLayout, QListWidgetItem, QWidget

from app.columns import Columns
from app.document import Document
from app.inks import LIGHT
from app.path_view import PathView, add_kind
from app.shelf import Shelf
from engine.project import Project

LEFT = Qt.MouseButton.LeftButton
NONE = Qt.KeyboardModifier.NoModifier


class Bench:
    """Shelf and path in one window, with what a test wants to do to them."""

    def __init__(self, qtbot, *, width: int = 1366, height: int = 480) -> None:
        self.document = Document()
        self.columns = Columns()
        self.window = QWidget()
        self.path = PathView(self.document, self.columns, LIGHT)
        self.shelf = Shelf(self.document, LIGHT, self.path)
        self.shelf.setFixedWidth(164)
        row = QHBoxLayout(self.window)
        row.setContentsMargins(0, 0, 0, 0)
        row.addWidget(self.shelf)
        row.addWidget(self.path, 1)
        self.window.resize(width, height)
        qtbot.addWidget(self.window)
        self.window.show()
        qtbot.waitExposed(self.window)
        self.window.activateWindow()

    @property
    def project(self) -> Project:
        return self.document.project

    @property
    def selected(self) -> frozenset[str]:
        return self.document.selection

    def build(self, *kinds: str) -> Bench:
        """A chain, each kind behind the last; nothing selected and nothing to undo."""
        for kind in kinds:
            add_kind(self.document, kind)
        self.document.select(())
        self.document.undo_stack.clear()
        self.path.setFocus()
        return self

    # -- where things are ------------------------------------------------------------------------------------
    def middle(self, key: str) -> QPoint:
        left, top, width, height = self.path.grid.box(key)
        return QPoint(round(left + width / 2), round(top + height / 2))

    def right_half(self, key: str) -> QPoint:
        return self.middle(key) + QPoint(20, 8)

    def output(self, key: str, name: str = "out") -> QPoint:
        return QPointF(*self.path.grid.port(key, name, is_output=True)).toPoint() + QPoint(3, 0)

    def input(self, key: str, name: str = "in") -> QPoint:
        return QPointF(*self.path.grid.port(key, name, is_output=False)).toPoint() - QPoint(3, 0)

    def on_link(self, source: str, target: str) -> QPoint:
        link = next(each for each in self.project.links if (each.source, each.target) == (source, target))
        return QPointF(*self.path.grid.middle_of_line(link)).toPoint()

    def cell(self, column: int, row: int) -> QPoint:
        left, top, width, height = self.path.grid.cell(column, row)
        return QPoint(round(left + width / 2), round(top + height / 2))

    def entry(self, title: str) -> QPoint:
        item = self.item(title)
        self.shelf.list.scrollToItem(item)
        return self.shelf.list.visualItemRect(item).center()

    def item(self, title: str) -> QListWidgetItem:
        (item,) = self.shelf.list.findItems(title, Qt.MatchFlag.MatchExactly)
        return item

    # -- what a hand does ------------------------------------------------------------------------------------
    def take(self, title: str, to: QPoint) -> None:
        """Press a kind on the shelf and carry it over the path, without letting go."""
        view = self.shelf.list.viewport()
        start = self.entry(title)
        QTest.mousePress(view, LEFT, NONE, start)
        QTest.mouseMove(view, start + QPoint(12, 2))
        QTest.mouseMove(view, view.mapFromGlobal(self.path.mapToGlobal(to)))

    def let_go(self, to: QPoint) -> None:
        view = self.shelf.list.viewport()
        QTest.mouseRelease(view, LEFT, NONE, view.mapFromGlobal(self.path.mapToGlobal(to)))

    def drag_from_shelf(self, title: str, to: QPoint) -> None:
        self.take(title, to)
        self.let_go(to)

    def press_and_carry(self, start: QPoint, to: QPoint) -> None:
        QTest.mousePress(self.path, LEFT, NONE, start)
        QTest.mouseMove(self.path, start + QPoint(9, 9))
        QTest.mouseMove(self.path, to)

    def drag(self, start: QPoint, to: QPoint) -> None:
        self.press_and_carry(start, to)
        QTest.mouseRelease(self.path, LEFT, NONE, to)

    def click(self, at: QPoint, modifiers: Qt.KeyboardModifier = NONE) -> None:
        QTest.mouseClick(self.path, LEFT, modifiers, at)

    def key(self, *keys: Qt.Key, modifiers: Qt.KeyboardModifier = NONE, on: QWidget | None = None) -> None:
        for each in keys:
            QTest.keyClick(on or self.path, each, modifiers)
