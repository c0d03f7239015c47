"""The level diagram in the window: it redraws while a hand moves, and a hand can take a level in it."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import (
    QFocusEvent,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPen,
    QPixmap,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QSizePolicy, QWidget

from app import words
from app.columns import Columns
from app.document import Document
from app.inks import Inks, font
from engine.outcome import Outcome

from . import readout
from .geometry import Geometry, Look, Request, View, build
from .hand import Grip, grip
from .metrics import text_width
from .paint import paint_moving, paint_still
from .readout_box import paint_readout
from .scale import Unit
from .traces import Place

REACH_PX = 7.0
WHEEL_STEP = 120.0


class DiagramView(QWidget):
    """Shows the levels along one path of a document, on the columns it shares with the signal path."""

    said = Signal(str)  # what the hand holds, or why it holds nothing
    path_changed = Signal(object)  # the stages of the path that is shown

    def __init__(
        self, document: Document, columns: Columns, inks: Inks, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self.document, self.columns, self.inks = document, columns, inks
        self.look = Look()
        self.path: tuple[str, ...] = ()
        self.held: Outcome | None = None
        self.geometry_: Geometry | None = None
        self.paints = 0  # counted for the tests
        self._still: QPixmap | None = None
        self._hover: Place | None = None
        self._current = 0  # the node the keyboard is at
        self._grip: Grip | None = None
        self._grip_y = 0.0
        self._grip_note = ""
        self.setMouseTracking(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setAccessibleName("Level diagram")
        document.solved.connect(self._solved)
        document.selection_changed.connect(self._selected)
        columns.changed.connect(self._rebuild)
        self._choose_path()

    def minimumSizeHint(self) -> QSize:
        return QSize(320, 180)

    # -- what is shown -----------------------------------------------------------------------------------------
    def set_inks(self, inks: Inks) -> None:
        """Draw in another scheme."""
        self.inks = inks
        self._still = None
        self._rebuild()

    def set_unit(self, unit: Unit) -> None:
        """Show electrical levels in dBu, dBV or volts."""
        self.look = replace(self.look, unit=unit)
        self._rebuild()

    def set_view(self, view: View) -> None:
        """Show levels, or everything referred to the clip point."""
        self.look = replace(self.look, view=view, range=None)
        self._fit_scales()
        self._rebuild()

    def hold(self, on: bool) -> None:
        """Keep the present trace for comparison, or let it go."""
        self.held = self.document.outcome if on else None
        self._fit_scales()
        self._rebuild()

    def show_path(self, stage: str) -> None:
        """Show the path that leads through a stage."""
        if stage in self.document.project.stage:
            self._set_path(self.document.outcome.path_through(stage))

    def _set_path(self, path: tuple[str, ...]) -> None:
        if path != self.path:
            self.path = path
            self._current = 0
            self._fit_scales()
            self.path_changed.emit(path)
        self._rebuild()

    def _choose_path(self) -> None:
        """Keep the path while its stages are linked; else the one through the selection, else the first."""
        project = self.document.project
        selected = [key for key in self.document.selection if key in project.stage]
        if selected and not (set(selected) & set(self.path) and self._path_stands()):
            self._set_path(self.document.outcome.path_through(min(selected)))
        elif not self._path_stands():
            anchor = next((key for key in self.path if key in project.stage), None)
            found = (
                self.document.outcome.path_through(anchor)
                if anchor
                else next(iter(self.document.outcome.paths()), ())
            )
            self._set_path(found)
        else:
            self._rebuild()

    def _path_stands(self) -> bool:
        topology = self.document.project.topology
        if not self.path or any(key not in topology.into for key in self.path):
            return False
        pairs = zip(self.path, self.path[1:], strict=False)
        ends = topology.into[self.path[0]] or topology.out_of[self.path[-1]]
        return not ends and all(any(link.target == b for link in topology.out_of[a]) for a, b in pairs)

    def _solved(self, outcome: object) -> None:
        if self._grip is None and not self.document.gesture_open:
            self._fit_scales()
        self._choose_path()

    def _selected(self, ids: object) -> None:
        self._choose_path()

    def _fit_scales(self) -> None:
        """Choose the scales anew: never while a hand moves. A range that still holds everything is kept."""
        before = self.look.range
        self.look = replace(self.look, range=None, shift_db=None)
        fresh = build(self._request())
        keep = (
            before is not None
            and before.holds(fresh.scale.range)
            and before.high - before.low <= (fresh.scale.range.high - fresh.scale.range.low + 30.0)
        )
        self.look = replace(self.look, range=before if keep else fresh.scale.range, shift_db=fresh.shift_db)
        self._still = None

    # -- geometry ----------------------------------------------------------------------------------------------
    def _request(self) -> Request:
        outcome = self.document.outcome
        path = tuple(key for key in self.path if key in outcome.project.stage)
        narrowest = outcome.narrowest.stage if outcome.narrowest else None
        seat = next((s for s in outcome.seats if path and s.stage == path[-1]), None)
        held = self.held.trace([k for k in path if k in self.held.project.stage]) if self.held else ()
        return Request(
            trace=outcome.trace(path), column_of={key: outcome.project.stage[key].column for key in path},
            columns=self.columns, width=float(self.width()), height=float(self.height()), text_width=text_width,
            look=replace(self.look, selected=self.document.selection, narrowest=narrowest), seat=seat, held=held,
            left_px=self.columns.left_px, right_px=self.columns.right_px,
        )  # fmt: skip

    def _rebuild(self) -> None:
        before = self.geometry_
        self.geometry_ = build(self._request())
        if before is None or (before.ticks, before.right_ticks, before.plot) != (
            self.geometry_.ticks, self.geometry_.right_ticks, self.geometry_.plot
        ):  # fmt: skip
            self._still = None
        if self._hover is not None:
            self._hover = self._same_place(self._hover)
        self.update()

    def _same_place(self, old: Place) -> Place | None:
        assert self.geometry_ is not None
        key = (old.node.stage, old.node.direction, old.node.port)
        return next(
            (p for p in self.geometry_.places if (p.node.stage, p.node.direction, p.node.port) == key), None
        )

    # -- painting ----------------------------------------------------------------------------------------------
    def paintEvent(self, event: QPaintEvent) -> None:
        self.paints += 1
        if self.geometry_ is None:
            return
        painter = QPainter(self)
        painter.drawPixmap(0, 0, self._still_pixmap())
        paint_moving(painter, self.geometry_, self.inks)
        if self.hasFocus() and self.geometry_.places:
            self._paint_current(painter)
        if self._grip_note:
            self._paint_note(painter)
        elif self._hover is not None:
            paint_readout(painter, self._hover, self.geometry_, self.inks, self.rect())
        painter.end()

    def _still_pixmap(self) -> QPixmap:
        if self._still is None:
            ratio = self.devicePixelRatioF()
            made = QPixmap(round(self.width() * ratio), round(self.height() * ratio))
            made.setDevicePixelRatio(ratio)
            made.fill(self.inks.paper)
            painter = QPainter(made)
            assert self.geometry_ is not None
            paint_still(painter, self.geometry_, self.inks)
            painter.setFont(font(11))
            painter.setPen(self.inks.muted)
            painter.drawText(QPointF(8.0, 12.0), self.geometry_.left_title)
            if self.geometry_.right_title:
                painter.drawText(QPointF(self.geometry_.plot.right + 8.0, 12.0), self.geometry_.right_title)
            painter.end()
            self._still = made
        return self._still

    def _paint_current(self, painter: QPainter) -> None:
        geometry = self.geometry_
        assert geometry is not None
        place = geometry.places[min(self._current, len(geometry.places) - 1)]
        y = geometry.y_of(place, "level")
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(self.inks.accent, 2.0))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawEllipse(QPointF(place.x, y if y is not None else geometry.plot.bottom), 6.0, 6.0)

    def _paint_note(self, painter: QPainter) -> None:
        painter.setFont(font(12, strong=True))
        width = painter.fontMetrics().horizontalAdvance(self._grip_note) + 16.0
        point = self.mapFromGlobal(self.cursor().pos()) if self._hover is None else None
        x = point.x() if point else (self._hover.x if self._hover else 0.0)
        left = min(max(4.0, x + 12.0), self.width() - width - 4.0)
        box = QRectF(left, max(4.0, self._grip_y - 34.0), width, 24.0)
        painter.setPen(QPen(self.inks.hairline, 1.0))
        painter.setBrush(self.inks.raised)
        painter.drawRoundedRect(box, 5.0, 5.0)
        painter.setPen(self.inks.accent if self._grip else self.inks.muted)
        painter.drawText(box, Qt.AlignmentFlag.AlignCenter, self._grip_note)

    # -- a hand ------------------------------------------------------------------------------------------------
    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() is not Qt.MouseButton.LeftButton or self.geometry_ is None:
            return
        place = self.geometry_.near(event.position().x())
        if place is None:
            return
        y = self.geometry_.y_of(place, "level")
        self._current = self.geometry_.places.index(place)
        if (
            y is None
            or abs(y - event.position().y()) > REACH_PX * 1.5
            or abs(place.x - event.position().x()) > REACH_PX * 1.5
        ):
            self.document.select([place.node.stage])
            return
        self._grip = grip(self.document.outcome, self.path, place.node)
        self._grip_y = event.position().y()
        self._grip_start_y = event.position().y()
        self._hover = place
        if self._grip is None:
            self._say("No control at or ahead of this node is free to move.")
        else:
            value = words.gain(self._grip.start)
            self._say(f"{self._grip.label}: {value}")
        self.update()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        geometry = self.geometry_
        if geometry is None:
            return
        if self._grip is not None:
            self._grip_y = event.position().y()
            by_db = (self._grip_start_y - event.position().y()) / geometry.scale.db_px
            changes, value = self._grip.moved(self.document.project, by_db)
            self.document.edit(
                f"Move {self._grip.label}", changes, gesture=("diagram", self._grip.stage, self._grip.control)
            )
            self._say(f"{self._grip.label}: {words.gain(value)}")
            self.update()
            return
        if event.buttons() == Qt.MouseButton.NoButton:
            hover = geometry.near(event.position().x())
            if hover is not self._hover:
                self._hover = hover
                self.update()
            at_level = (
                hover is not None
                and (y := geometry.y_of(hover, "level")) is not None
                and (
                    abs(y - event.position().y()) <= REACH_PX * 1.5
                    and abs(hover.x - event.position().x()) <= REACH_PX * 1.5
                )
            )
            self.setCursor(Qt.CursorShape.SizeVerCursor if at_level else Qt.CursorShape.ArrowCursor)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if self._grip is not None:
            self._grip = None
            self.document.end_gesture()
        self._say("")
        self.update()

    def leaveEvent(self, event: QEvent) -> None:
        self._hover = None
        self.update()

    def wheelEvent(self, event: QWheelEvent) -> None:
        steps = event.angleDelta().y() / WHEEL_STEP
        if event.modifiers() & Qt.KeyboardModifier.ControlModifier:
            self.columns.zoom_by(1.15**steps, event.position().x())
        else:
            across = event.angleDelta().x() / WHEEL_STEP
            self.columns.scroll_by(-(across or steps) * self.columns.pitch_px)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        geometry = self.geometry_
        if geometry is None or not geometry.places:
            return super().keyPressEvent(event)
        last = len(geometry.places) - 1
        moves = {Qt.Key.Key_Left: -1, Qt.Key.Key_Right: 1, Qt.Key.Key_Home: -last, Qt.Key.Key_End: last}
        key = Qt.Key(event.key())
        if key in moves:
            self._current = min(max(0, self._current + moves[key]), last)
            place = geometry.places[self._current]
            self._hover = place
            self.document.select([place.node.stage])
            self.setAccessibleDescription(readout.sentence(place.node))
            self.columns.reveal(self.document.project.stage[place.node.stage].column)
            self.update()
        elif key in (Qt.Key.Key_Up, Qt.Key.Key_Down):
            fine = event.modifiers() & Qt.KeyboardModifier.ShiftModifier
            self._nudge((1.0 if key == Qt.Key.Key_Up else -1.0) * (0.1 if fine else 1.0))
        elif key == Qt.Key.Key_Escape and self._hover is not None:
            self._hover = None
            self.update()
        else:
            return super().keyPressEvent(event)
        return None

    def _nudge(self, by_db: float) -> None:
        """Move the level of the node the keyboard is at."""
        assert self.geometry_ is not None
        place = self.geometry_.places[min(self._current, len(self.geometry_.places) - 1)]
        held = grip(self.document.outcome, self.path, place.node)
        if held is None:
            self.said.emit("No control at or ahead of this node is free to move.")
            return
        changes, value = held.moved(self.document.project, by_db)
        self.document.edit(f"Move {held.label}", changes, gesture=("diagram key", held.stage, held.control))
        self.document.flush()
        self.said.emit(f"{held.label}: {words.gain(value)}")

    def focusInEvent(self, event: QFocusEvent) -> None:
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        self.update()

    def resizeEvent(self, event: QResizeEvent) -> None:
        self._still = None
        self._rebuild()

    def _say(self, text: str) -> None:
        self._grip_note = text
        if text:
            self.said.emit(text)
