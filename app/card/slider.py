"""A slider on a control's real positions: dragged, wheeled, or stepped by keys; one hold of it is one gesture."""

from __future__ import annotations

import math
import time
from collections.abc import Callable

import numpy as np
from PySide6.QtCore import QPointF, QRectF, QSize, Qt, QTimer, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QMouseEvent, QPainter, QPaintEvent, QPen, QWheelEvent
from PySide6.QtWidgets import QSizePolicy, QSlider

from app.inks import Inks, blend
from engine.stages.declare import ControlRange, ControlSpec

HANDLE_PX = 6.0  # its radius
FINE = 0.1  # of the hand's way, with shift
WHEEL_STEP = 120.0
WHEEL_REST_MS = 200  # a pause as long ends the gesture
SCROLL_REST_S = 0.4  # a wheel that scrolled the card so lately means to go on scrolling
USUAL_DB, FINE_DB, PAGE_DB = 1.0, 0.1, 6.0
PAGE_STEPS = 10
_STEPS = {Qt.Key.Key_Up: 1, Qt.Key.Key_Right: 1, Qt.Key.Key_Down: -1, Qt.Key.Key_Left: -1,
          Qt.Key.Key_PageUp: 6, Qt.Key.Key_PageDown: -6}  # fmt: skip


class StepSlider(QSlider):
    """Stands on one of a control's positions, by index. What it shows is set by `show_place`; a hand only asks."""

    asked = Signal(int)  # the position wanted
    let_go = Signal()
    typing = Signal(str)  # a number was begun on it

    def __init__(self, name: str, inks: Inks, may_wheel: Callable[[], bool]) -> None:
        super().__init__(Qt.Orientation.Horizontal)
        self.setAccessibleName(name)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self._inks, self._may_wheel = inks, may_wheel
        self._positions = np.zeros(1)
        self._range: ControlRange | None = None
        self._spec: ControlSpec | None = None
        self._from: tuple[float, float] | None = None  # where the hand took it: x, place
        self._start = 0
        self._wheel = 0.0
        self._keys = False
        self._rest = QTimer(self, singleShot=True, interval=WHEEL_REST_MS)
        self._rest.timeout.connect(self.let_go)

    # -- what it shows ---------------------------------------------------------------------------------------
    @property
    def positions(self) -> np.ndarray[tuple[int, ...], np.dtype[np.float64]]:
        """Every position in the control's unit, ascending; minus infinity is off."""
        return self._positions

    def show_place(self, spec: ControlSpec, ranged: ControlRange, value: float | None) -> None:
        """Show a value among the positions of a range."""
        self._spec = spec
        if ranged != self._range:
            self._range, self._positions = ranged, ranged.positions
            self.setRange(0, len(self._positions) - 1)
            self.update()
        place = self.place_of(-math.inf if value is None else value)
        if place != self.value():
            self.setValue(place)

    def place_of(self, value: float) -> int:
        """The index of the position nearest to a value."""
        if value == -math.inf:
            return 0
        return int(np.argmin(np.abs(np.where(np.isfinite(self._positions), self._positions, -1e9) - value)))

    def stepped(self, hand: int, *, fine: bool = False) -> int:
        """Where a step of a hand leads: 1 dB, finely 0.1 dB, by page 6 dB, or the control's own step where larger."""
        here, step = self.value(), 0.0 if self._range is None or self._range.choices else self._range.step
        way = 1 if hand > 0 else -1
        count = PAGE_STEPS if abs(hand) > 1 and step else 1
        if self._spec is not None and self._spec.unit.startswith("dB") and step > 0.0:
            wanted = PAGE_DB if abs(hand) > 1 else FINE_DB if fine else USUAL_DB
            count = max(1, round(wanted / step))
        elif fine:
            count = 1
        return min(self.maximum(), max(0, here + way * count))

    # -- mouse -----------------------------------------------------------------------------------------------
    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() != Qt.MouseButton.LeftButton:
            event.ignore()
            return
        x = event.position().x()
        self._end_wheel()
        self._start = self.value()
        if abs(x - self._x(self.value())) > HANDLE_PX + 4:
            self.asked.emit(round(self._place(x)))
        self._from = (x, float(self.value()))
        self.setSliderDown(True)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        if self._from is None:
            return
        x, place = self._from
        way = (event.position().x() - x) / self._place_px()
        if event.modifiers() & Qt.KeyboardModifier.ShiftModifier:
            way *= FINE
        self.asked.emit(min(self.maximum(), max(0, round(place + way))))

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if self._from is not None and event.button() == Qt.MouseButton.LeftButton:
            self._from = None
            self.setSliderDown(False)
            self.let_go.emit()

    def wheelEvent(self, event: QWheelEvent) -> None:
        """Turn a control that is pointed at, but not one that only comes by while the card scrolls."""
        turn = event.angleDelta().y() or event.angleDelta().x()
        if not self.isEnabled() or not turn or not (self.hasFocus() or self._may_wheel()):
            event.ignore()
            return
        self._wheel += turn / WHEEL_STEP
        notches = int(self._wheel)
        self._wheel -= notches
        fine = bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)
        for _ in range(abs(notches)):
            self.asked.emit(self.stepped(1 if notches > 0 else -1, fine=fine))
        self._rest.start()
        event.accept()

    # -- keys ------------------------------------------------------------------------------------------------
    def keyPressEvent(self, event: QKeyEvent) -> None:
        key, text = event.key(), event.text()
        if key == Qt.Key.Key_Escape and self._from is not None:
            self._from = None
            self.asked.emit(self._start)
            self.setSliderDown(False)
            self.let_go.emit()
        elif key in _STEPS:
            self._keys = True
            fine = bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)
            self.asked.emit(self.stepped(_STEPS[Qt.Key(key)], fine=fine))
        elif key in (Qt.Key.Key_Home, Qt.Key.Key_End):
            self._keys = True
            self.asked.emit(0 if key == Qt.Key.Key_Home else self.maximum())
        elif text and text in "0123456789+-−.,":
            self.typing.emit(text)
        else:
            event.ignore()

    def keyReleaseEvent(self, event: QKeyEvent) -> None:
        if self._keys and not event.isAutoRepeat():
            self._keys = False
            self.let_go.emit()
        else:
            event.ignore()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self._end_wheel()
        if self._keys:
            self._keys = False
            self.let_go.emit()

    def _end_wheel(self) -> None:
        if self._rest.isActive():
            self._rest.stop()
            self.let_go.emit()

    # -- painting --------------------------------------------------------------------------------------------
    def sizeHint(self) -> QSize:
        return QSize(120, super().sizeHint().height())

    def paintEvent(self, event: QPaintEvent) -> None:
        inks, middle = self._inks, self.height() / 2.0
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        x, first, last = self._x(self.value()), self._x(0), self._x(self.maximum())
        live = inks.accent if self.isEnabled() else inks.muted
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(inks.hairline)
        painter.drawRoundedRect(QRectF(first, middle - 1.5, last - first, 3.0), 1.5, 1.5)
        self._paint_marks(painter, middle)
        painter.setBrush(live)
        painter.drawRoundedRect(QRectF(first, middle - 1.5, x - first, 3.0), 1.5, 1.5)
        if self.hasFocus():
            painter.setBrush(blend(inks.accent, inks.paper, 0.25))
            painter.drawEllipse(QPointF(x, middle), HANDLE_PX + 4.0, HANDLE_PX + 4.0)
        painter.setPen(QPen(live, 2.0))
        painter.setBrush(
            live if self.isSliderDown() or (self.underMouse() and self.isEnabled()) else inks.raised
        )
        painter.drawEllipse(QPointF(x, middle), HANDLE_PX, HANDLE_PX)
        painter.end()

    def _paint_marks(self, painter: QPainter, middle: float) -> None:
        """The range a hand should find a fader in as a bar under the groove, and zero as a tick."""
        spec, inks = self._spec, self._inks
        if spec is None or self._range is None:
            return
        if spec.work_low is not None and spec.work_high is not None:
            low, high = (self._x(self.place_of(end)) for end in (spec.work_low, spec.work_high))
            painter.setBrush(blend(inks.accent, inks.paper, 0.45))
            painter.drawRect(QRectF(low, middle + 8.0, high - low, 2.0))
        if spec.unit.startswith("dB") and self._range.low < 0.0 < self._range.high:
            painter.setBrush(inks.muted)
            painter.drawRect(QRectF(self._x(self.place_of(0.0)) - 0.5, middle + 5.0, 1.0, 5.0))

    def _x(self, place: float) -> float:
        return HANDLE_PX + 2.0 + place * self._place_px()

    def _place(self, x: float) -> float:
        return min(float(self.maximum()), max(0.0, (x - HANDLE_PX - 2.0) / self._place_px()))

    def _place_px(self) -> float:
        return max(1e-9, (self.width() - 2.0 * HANDLE_PX - 4.0) / max(1, self.maximum()))


class WheelGate:
    """Whether a wheel over a slider means the slider: not while the card it stands in is being scrolled."""

    def __init__(self) -> None:
        self._scrolled_s = -math.inf

    def scrolled(self) -> None:
        """The card was scrolled now."""
        self._scrolled_s = time.monotonic()

    def is_open(self) -> bool:
        """Whether the card has been at rest."""
        return time.monotonic() - self._scrolled_s > SCROLL_REST_S
