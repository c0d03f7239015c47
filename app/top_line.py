"""The line at the top: menus, which venue this is, undo and redo, and what goes onto paper."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QEvent, Qt, Signal
from PySide6.QtGui import QAction, QMouseEvent, QResizeEvent, QShowEvent
from PySide6.QtWidgets import QHBoxLayout, QLabel, QMenuBar, QSizePolicy, QToolButton, QWidget

from engine.project import Header

from .inks import font

HEIGHT_PX = 44


class VenueLabel(QWidget):
    """The venue's name, its revision and status, cut short where there is no room. A click asks to change them."""

    clicked = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._texts = ("", "")
        self._name, self._about = QLabel(), QLabel()
        self._name.setFont(font(16, strong=True))
        self._about.setFont(font(12))
        self._about.setProperty("quiet", True)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(14)
        for label in (self._name, self._about):
            label.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
            row.addWidget(label)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setToolTip("Venue, revision and conditions")

    def show_header(self, header: Header, *, modified: bool) -> None:
        """Show what the project says of itself."""
        edited = " · not saved" if modified else ""
        self._texts = (header.name, f"revision {header.revision} · {header.status}{edited}")
        self.setAccessibleName(f"{header.name}, {self._texts[1]}")
        self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange:
            self._fit()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton and self.rect().contains(event.position().toPoint()):
            self.clicked.emit()

    def _fit(self) -> None:
        """The name first; what it leaves goes to the rest."""
        room = self.width() - 14
        name, about = self._texts
        metrics = self._name.fontMetrics()
        wide = min(metrics.horizontalAdvance(name) + 2, room)
        self._name.setText(metrics.elidedText(name, Qt.TextElideMode.ElideRight, wide))
        self._name.setFixedWidth(max(0, wide))
        left = max(0, room - wide)
        self._about.setText(self._about.fontMetrics().elidedText(about, Qt.TextElideMode.ElideRight, left))
        self._about.setFixedWidth(left)


MENU_ITEM_PX = 22  # a menu title's padding


class TopLine(QWidget):
    """Menus left, the venue beside them, a few actions right."""

    def __init__(
        self, bar: QMenuBar, actions: Sequence[QAction | None], parent: QWidget | None = None
    ) -> None:
        """`actions` stand at the right in this order; None is a wider gap."""
        super().__init__(parent)
        self.setObjectName("topLine")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.setFixedHeight(HEIGHT_PX)
        self.venue = VenueLabel()
        bar.setSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Maximum)
        bar.setNativeMenuBar(False)
        row = QHBoxLayout(self)
        row.setContentsMargins(8, 0, 12, 0)
        row.setSpacing(4)
        self._bar = bar
        row.addWidget(bar, 0, Qt.AlignmentFlag.AlignVCenter)
        row.addSpacing(12)
        row.addWidget(self.venue, 1)
        for action in actions:
            if action is None:
                row.addSpacing(12)
                continue
            button = QToolButton()
            button.setDefaultAction(action)
            button.setProperty("flat", True)
            button.setToolButtonStyle(Qt.ToolButtonStyle.ToolButtonTextOnly)
            button.setFocusPolicy(Qt.FocusPolicy.TabFocus)
            row.addWidget(button)

    def showEvent(self, event: QShowEvent) -> None:
        """A menu bar asked for its size in a narrow parent folds up; now it is asked in the real one."""
        super().showEvent(event)
        metrics = self._bar.fontMetrics()
        titles = (action.text().replace("&", "") for action in self._bar.actions())
        self._bar.setMinimumWidth(
            sum(metrics.horizontalAdvance(title) + MENU_ITEM_PX for title in titles) + 24
        )
