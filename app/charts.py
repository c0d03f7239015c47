"""The chart by one-third-octave band of what is selected: level, noise, and at a seat the room's own noise.

Loads pyqtgraph: import it after the first frame.
"""

from __future__ import annotations

import pyqtgraph as pg
from PySide6.QtCore import QEvent, QPointF, QSize, Qt
from PySide6.QtGui import (
    QColor,
    QFocusEvent,
    QFontMetrics,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QPen,
)
from PySide6.QtWidgets import QVBoxLayout, QWidget

from . import words
from .band_data import BANDS_HZ, BandData, band_data
from .card.pieces import Elided
from .document import Document
from .inks import Inks, font
from .style import PADDING_PX

TICKS = {5: "63", 11: "250", 17: "1 k", 23: "4 k", 29: "16 k"}
AXIS_PX = 36
LINES = (("level", Qt.PenStyle.SolidLine), ("noise", Qt.PenStyle.DotLine), ("room", Qt.PenStyle.DashLine))


class BandChart(QWidget):
    """Follows a document's selection and outcome; hover or arrow keys read a band."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document, self._inks = document, inks
        self.data: BandData | None = None
        self.band: int | None = None
        self._ends: tuple[float, float] = (0.0, 0.0)
        self.title = Elided("", 12, strong=True)
        self.reading = Elided("", 11, quiet=True)
        self.key = Key(inks)
        self.plot = pg.PlotWidget(enableMenu=False)
        self._build()
        self.reading.hide()
        head = QVBoxLayout()
        head.setContentsMargins(PADDING_PX, 6, PADDING_PX, 0)
        head.setSpacing(2)
        for part in (self.title, self.key, self.reading):
            head.addWidget(part)
        body = QVBoxLayout(self)
        body.setContentsMargins(0, 0, 0, 0)
        body.setSpacing(0)
        body.addLayout(head)
        body.addWidget(self.plot, 1)
        self.setMinimumHeight(120)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("By one-third-octave band")
        document.solved.connect(self._solved)
        document.selection_changed.connect(self._selected)
        self.set_inks(inks)
        self._show(may_scale=True)

    def sizeHint(self) -> QSize:
        return QSize(300, 180)

    def _build(self) -> None:
        plot = self.plot
        plot.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        plot.setMouseEnabled(x=False, y=False)
        plot.hideButtons()
        plot.setFrameShape(pg.QtWidgets.QFrame.Shape.NoFrame)
        plot.getViewBox().disableAutoRange()
        plot.setXRange(-0.5, len(BANDS_HZ) - 0.5, padding=0)
        bottom, left = plot.getAxis("bottom"), plot.getAxis("left")
        bottom.setTicks([list(TICKS.items())])
        bottom.setHeight(20)
        left.setWidth(AXIS_PX)
        for axis in (bottom, left):
            axis.setStyle(tickLength=0, tickFont=font(11), hideOverlappingLabels=False)
        plot.setContentsMargins(0, 0, 0, 0)
        plot.getPlotItem().layout.setContentsMargins(8, 4, PADDING_PX - 6, 4)
        self.lines = {name: pg.PlotCurveItem(connect="finite", antialias=True) for name, _ in LINES}
        self.rules = pg.PlotCurveItem(connect="pairs")
        self.mark = pg.PlotCurveItem()
        for item in (self.rules, self.mark, *self.lines.values()):
            plot.addItem(item, ignoreBounds=True)
        plot.viewport().setMouseTracking(True)
        plot.viewport().installEventFilter(self)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self._inks = inks
        self.key.set_inks(inks)
        self.plot.setBackground(inks.paper)
        for name, dash in LINES:
            pen = QPen(_ink(inks, name), 1.6 if name == "level" else 1.2, dash)
            pen.setCosmetic(True)
            self.lines[name].setPen(pen)
        self.rules.setPen(pg.mkPen(inks.hairline, width=1))
        self.mark.setPen(pg.mkPen(inks.accent, width=1))
        for axis in ("bottom", "left"):
            self.plot.getAxis(axis).setPen(pg.mkPen(inks.paper))
            self.plot.getAxis(axis).setTextPen(pg.mkPen(inks.muted))

    # -- following -------------------------------------------------------------------------------------------
    def _solved(self, _outcome: object) -> None:
        self._show(may_scale=not self._document.gesture_open)

    def _selected(self, _selection: object) -> None:
        self._show(may_scale=True)

    def _show(self, *, may_scale: bool) -> None:
        if not self._document.outcome.project.same_as(self._document.project):
            may_scale = may_scale and self.data is None
        self.data = band_data(self._document.outcome, self._document.selection)
        if self.data is None:
            self.title.show_text("By band")
            self.key.show_names(())
            for line in self.lines.values():
                line.setData([], [])
            self._read(None)
            return
        data = self.data
        self.title.show_text(f"{data.name}, {data.unit} by band")
        self.key.show_names(tuple(name for name, _ in LINES if data.line(name) is not None))
        for name, line in self.lines.items():
            values = data.line(name)
            line.setData([], []) if values is None else line.setData(data.places, values)
        if may_scale or self._ends == (0.0, 0.0):
            self._scale(*data.ends)
        self._read(self.band)

    def _scale(self, low: float, high: float) -> None:
        """Ranges move with the selection, never under a moving hand."""
        if (low, high) == self._ends:
            return
        self._ends = (low, high)
        step = 20 if high - low <= 100 else 40
        first = int(-(-low // step) * step)
        at = list(range(first, int(high) + 1, step))
        self.plot.setYRange(low, high, padding=0)
        self.plot.getAxis("left").setTicks([[(level, str(level).replace("-", words.MINUS)) for level in at]])
        self.rules.setData(
            [x for _ in at for x in (-0.5, len(BANDS_HZ) - 0.5)], [level for level in at for _ in range(2)]
        )

    # -- reading a band --------------------------------------------------------------------------------------
    def _read(self, band: int | None) -> None:
        self.band = band
        data = self.data
        if data is None:
            self.reading.show_text("Select a stage or a seat to see it by band.")
            self.mark.setData([], [])
            self.reading.show()
            self.key.hide()
            return
        self.reading.show_text(data.about if band is None else data.reading(band))
        self.mark.setData(*(([], []) if band is None else ([band, band], list(self._ends))))
        self.reading.setVisible(band is not None)
        self.key.setVisible(band is None)
        self.setToolTip(data.about)
        self.setAccessibleDescription(f"{data.name}. {self.reading.text()}")

    def eventFilter(self, watched: object, event: QEvent) -> bool:
        """A pointer over the plot reads the band under it."""
        if isinstance(event, QMouseEvent) and event.type() == QEvent.Type.MouseMove and self.data is not None:
            where = self.plot.getViewBox().mapSceneToView(QPointF(event.position()))
            self._read(min(len(BANDS_HZ) - 1, max(0, round(where.x()))))
        elif event.type() == QEvent.Type.Leave:
            self._read(None)
        return event.type() == QEvent.Type.Wheel

    def keyPressEvent(self, event: QKeyEvent) -> None:
        step = {Qt.Key.Key_Left: -1, Qt.Key.Key_Right: 1}.get(Qt.Key(event.key()))
        if step is None:
            super().keyPressEvent(event)
        else:
            middle = 17 if self.band is None else self.band + step
            self._read(min(len(BANDS_HZ) - 1, max(0, middle)))

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self._read(None)
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setPen(self._inks.accent if self.hasFocus() else self._inks.hairline)
        painter.drawLine(0, 0, self.width(), 0)
        painter.end()


class Key(QWidget):
    """Which line is which: a sample of each, and its name."""

    SAMPLE_PX, GAP_PX = 16, 10

    def __init__(self, inks: Inks) -> None:
        super().__init__()
        self._inks = inks
        self.names: tuple[str, ...] = ()
        self.setFont(font(11))
        self.setFixedHeight(QFontMetrics(font(11)).height())

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self._inks = inks
        self.update()

    def show_names(self, names: tuple[str, ...]) -> None:
        """Show the lines that there are."""
        if names != self.names:
            self.names = names
            self.setAccessibleName(", ".join(names))
            self.update()

    def _wide(self, name: str) -> int:
        return self.SAMPLE_PX + 4 + self.fontMetrics().horizontalAdvance(name) + self.GAP_PX

    def paintEvent(self, event: QPaintEvent) -> None:
        painter, x = QPainter(self), 0
        for name, dash in LINES:
            if name in self.names:
                painter.setPen(QPen(_ink(self._inks, name), 2 if name == "level" else 1, dash))
                painter.drawLine(x, self.height() // 2, x + self.SAMPLE_PX, self.height() // 2)
                painter.setPen(self._inks.muted)
                painter.drawText(
                    x + self.SAMPLE_PX + 4, 0, 80, self.height(), Qt.AlignmentFlag.AlignVCenter, name
                )
                x += self._wide(name)
        painter.end()


def _ink(inks: Inks, name: str) -> QColor:
    return {"level": inks.level, "noise": inks.noise, "room": inks.muted}[name]
