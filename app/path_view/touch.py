"""Fingers: one presses, carries and lets go like a mouse, pans on empty ground, and asks for the menu by staying;
two pinch to zoom."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPoint, QTimer
from PySide6.QtGui import QTouchEvent

from app.gestures.base import Point

if TYPE_CHECKING:
    from .view import PathView

LONG_PRESS_MS = 600
SLACK_PX = 12.0
TOUCHES = (
    QEvent.Type.TouchBegin,
    QEvent.Type.TouchUpdate,
    QEvent.Type.TouchEnd,
    QEvent.Type.TouchCancel,
)


class Touch:
    """Turns touch events into what the view's hand does."""

    def __init__(self, view: PathView) -> None:
        self._view = view
        self._start: Point | None = None
        self._last: Point = (0.0, 0.0)
        self._spread = 0.0
        self._pans = False
        self._long = QTimer(view, singleShot=True, interval=LONG_PRESS_MS)
        self._long.timeout.connect(self._stayed)

    def handle(self, event: QEvent) -> bool:
        """Take a touch event; says whether it was one."""
        if not isinstance(event, QTouchEvent):
            return False
        points = [(point.position().x(), point.position().y()) for point in event.points()]
        match event.type():
            case QEvent.Type.TouchBegin:
                self._begin(points[0])
            case QEvent.Type.TouchUpdate if len(points) > 1:
                self._pinch(points[0], points[1])
            case QEvent.Type.TouchUpdate:
                self._move(points[0])
            case QEvent.Type.TouchEnd:
                self._end()
            case _:
                self._start = None
                self._long.stop()
                self._view.cancel()
        event.accept()
        return True

    def _begin(self, at: Point) -> None:
        self._start = self._last = at
        self._spread = 0.0
        self._pans = self._view.hit(*at, reach=14.0).what in ("empty", "link")
        self._view.setFocus()
        self._view.hand.press(*at, touch=True)
        self._long.start()

    def _move(self, at: Point) -> None:
        if self._start is None or self._spread:
            return
        if math.dist(self._start, at) > SLACK_PX:
            self._long.stop()
            if self._pans:
                self._view.pan(at[0] - self._last[0], at[1] - self._last[1])
            else:
                self._view.hand.move(*at)
        self._last = at

    def _pinch(self, first: Point, second: Point) -> None:
        self._long.stop()
        self._view.cancel()
        spread = math.dist(first, second)
        if self._spread and spread:
            self._view.columns.zoom_by(spread / self._spread, (first[0] + second[0]) / 2.0)
        self._spread = spread

    def _end(self) -> None:
        self._long.stop()
        panned = self._pans and self._start is not None and math.dist(self._start, self._last) > SLACK_PX
        if panned or self._spread:
            self._view.cancel()
        elif self._start is not None:
            self._view.hand.release()
        self._start = None

    def _stayed(self) -> None:
        """The finger rests: the menu of what lies under it."""
        if self._start is not None:
            x, y = self._start
            self._start = None
            self._view.cancel()
            self._view.open_menu(x, y, self._view.mapToGlobal(QPoint(round(x), round(y))))
