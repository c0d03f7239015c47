"""Level and peak of a recording over time, with the ceiling of what clips first drawn in."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QVBoxLayout, QWidget

from app.inks import Inks, font
from engine.signals import Programme

MOST_POINTS = 1500
FLOOR_DBFS = -80.0


class LevelsChart(QWidget):
    """Items are made once; a long recording is thinned by its loudest frames, so that no peak is lost."""

    def __init__(self, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.plot = pg.PlotWidget(enableMenu=False)
        self.plot.setMouseEnabled(x=False, y=False)
        self.plot.hideButtons()
        self.plot.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.plot.setAccessibleName("Level and peak over time")
        self.peak, self.level = self.plot.plot(), self.plot.plot()
        self.ceiling = pg.InfiniteLine(angle=0)
        self.plot.addItem(self.ceiling)
        body = QVBoxLayout(self)
        body.setContentsMargins(0, 0, 0, 0)
        body.addWidget(self.plot)
        self.setMinimumHeight(160)
        self.set_inks(inks)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours; peak dashed, level solid, ceiling heavy."""
        self.plot.setBackground(inks.raised)
        for name in ("left", "bottom"):
            axis = self.plot.getAxis(name)
            axis.setPen(pg.mkPen(inks.hairline))
            axis.setTextPen(pg.mkPen(inks.muted))
            axis.setStyle(tickFont=font(11))
        self.plot.getAxis("bottom").setLabel("min", color=inks.muted.name())
        self.plot.getAxis("left").setLabel("dBFS", color=inks.muted.name())
        self.level.setPen(pg.mkPen(inks.level, width=1))
        self.peak.setPen(pg.mkPen(inks.peak, width=1, style=Qt.PenStyle.DashLine))
        self.ceiling.setPen(pg.mkPen(inks.clip, width=2))

    def show_programme(self, programme: Programme) -> None:
        """Draw a recording's level and peak over time."""
        step = max(1, -(-programme.frame_rms_dbfs.size // MOST_POINTS))
        minutes = np.arange(0, programme.frame_rms_dbfs.size, step) * programme.frame_s / 60.0
        for item, frames in ((self.level, programme.frame_rms_dbfs), (self.peak, programme.frame_peak_dbfs)):
            padded = np.append(frames, np.full(-frames.size % step, -np.inf))
            item.setData(minutes, np.maximum(padded.reshape(-1, step).max(axis=1), FLOOR_DBFS))
        self.plot.setXRange(0.0, max(minutes[-1], 0.05), padding=0.01)
        self.plot.setYRange(max(FLOOR_DBFS, programme.rms_dbfs - 45.0), 6.0, padding=0.0)

    def show_ceiling(self, ceiling_dbfs: float | None) -> None:
        """Draw the ceiling in the recording at which something clips."""
        self.ceiling.setVisible(ceiling_dbfs is not None)
        if ceiling_dbfs is not None:
            self.ceiling.setPos(ceiling_dbfs)
