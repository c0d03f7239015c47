"""The live chart by one-third-octave band, at the selected stage's output or at a seat. Imported after the first frame."""

from __future__ import annotations

import math

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLabel, QVBoxLayout, QWidget

from app.document import Document
from app.inks import Inks, font
from engine.bands import BAND_MID_HZ
from engine.levels import UNIT, BandLevels
from engine.outcome import Outcome
from engine.sections.base import Domain

TICKS_HZ = (31.5, 125, 500, 2000, 8000)
SPAN_DB = 20.0


class BandChart(QWidget):
    """Level, noise and the room's own curve over frequency. Items are made once; ranges keep still while a hand moves."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document, self.inks = document, inks
        self.title = QLabel()
        self.title.setFont(font(11))
        self.title.setProperty("quiet", True)
        self.plot = pg.PlotWidget()
        self.plot.setMenuEnabled(False)
        self.plot.setMouseEnabled(x=False, y=False)
        self.plot.hideButtons()
        self.plot.setAccessibleName("Level and noise by band")
        self.plot.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.level = self.plot.plot()
        self.noise = self.plot.plot()
        self.room = self.plot.plot()
        self._x = np.log10(BAND_MID_HZ)
        self.plot.setXRange(self._x[0], self._x[-1], padding=0.02)
        self.plot.getAxis("bottom").setTicks(
            [[(math.log10(hz), f"{hz / 1000:g}k" if hz >= 1000 else f"{hz:g}") for hz in TICKS_HZ]]
        )
        column = QVBoxLayout(self)
        column.setContentsMargins(20, 8, 12, 4)
        column.setSpacing(2)
        column.addWidget(self.title)
        column.addWidget(self.plot, 1)
        self.set_inks(inks)
        document.solved.connect(self.refresh)
        document.selection_changed.connect(lambda _: self.refresh(document.outcome))
        self.refresh(document.outcome)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours; lines stay told apart by weight and dash."""
        self.inks = inks
        self.plot.setBackground(inks.paper)
        for name in ("left", "bottom"):
            axis = self.plot.getAxis(name)
            axis.setPen(pg.mkPen(inks.hairline))
            axis.setTextPen(pg.mkPen(inks.muted))
            axis.setStyle(tickFont=font(11), tickLength=-4)
        self.plot.getAxis("left").setWidth(34)
        self.plot.getAxis("bottom").setHeight(20)
        self.level.setPen(pg.mkPen(inks.level, width=1))
        self.noise.setPen(pg.mkPen(inks.noise, width=1, style=Qt.PenStyle.DotLine))
        self.room.setPen(pg.mkPen(inks.muted, width=1, style=Qt.PenStyle.DashLine))

    def refresh(self, outcome: Outcome) -> None:
        """Show the selected stage's bands, or the first seat's."""
        shown = self._choose(outcome)
        if shown is None:
            self.title.setText("By band: nothing to show yet")
            for item in (self.level, self.noise, self.room):
                item.setData([], [])
            return
        stage, direction = shown
        node = outcome.node(stage, direction)
        bands = outcome.band_levels(node)
        side = {"in": "input", "out": "output"}[direction]
        seat = next((s for s in outcome.seats if s.stage == stage), None)
        where = node.name if seat else f"{node.name} {side}"
        self.title.setText(
            f"{where} by band, {UNIT[Domain(node.domain)]}: level, noise{', room' if seat else ''}"
        )
        self.level.setData(self._x, _finite(bands.level_db))
        self.noise.setData(self._x, _finite(bands.noise_db))
        if seat is not None and seat.ambient is not None and seat.ambient.octave_hz:
            # An octave's level spread evenly over its three bands stands 4.77 dB lower in each.
            octave = np.array(seat.ambient.octave_db) - 10.0 * math.log10(3.0)
            self.room.setData(np.log10(np.array(seat.ambient.octave_hz)), octave)
        else:
            self.room.setData([], [])
        if not self.document.gesture_open:
            self._fit(bands)

    def _choose(self, outcome: Outcome) -> tuple[str, str] | None:
        project = outcome.project
        chosen = [key for key in sorted(self.document.selection) if key in project.stage]
        if not chosen:
            chosen = [seat.stage for seat in outcome.seats][:1]
        for key in chosen:
            stage = project.stage[key]
            if stage.outputs():
                return key, "out"
            if stage.inputs():
                return key, "in"
        return None

    def _fit(self, bands: BandLevels) -> None:
        levels = np.concatenate((bands.level_db, bands.noise_db))
        levels = levels[np.isfinite(levels)]
        if levels.size:
            low = math.floor(float(levels.min()) / SPAN_DB) * SPAN_DB
            high = math.ceil(float(levels.max()) / SPAN_DB + 0.2) * SPAN_DB
            self.plot.setYRange(low, high, padding=0.0)


def _finite(levels: np.ndarray) -> np.ndarray:
    """Bands with nothing in them leave a gap."""
    return np.where(np.isfinite(levels), levels, np.nan)
