"""The right side: the stage card, the chart by band under it, and what the tool has noticed."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QSplitter, QVBoxLayout, QWidget

from .card import StageCard
from .document import Document
from .findings_list import FindingsList
from .inks import Inks

WIDTH_PX = 300
CHART_SHARE, FINDINGS_SHARE = 0.2, 0.24  # of the height; the card has the rest


class Side(QWidget):
    """Card, chart and findings; the chart comes when the first frame is painted, for it takes long to load."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document, self._inks = document, inks
        self.card = StageCard(document, inks)
        self.findings = FindingsList(document, inks)
        self.chart: QWidget | None = None
        self.shared_out = False  # a hand has set how the height is shared
        self.splitter = QSplitter(Qt.Orientation.Vertical)
        self.splitter.setHandleWidth(1)
        self.splitter.setChildrenCollapsible(False)
        self.splitter.addWidget(self.card)
        self.splitter.addWidget(self.findings)
        self.splitter.setStretchFactor(0, 1)
        self.splitter.setStretchFactor(1, 0)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.splitter)
        self.splitter.splitterMoved.connect(self._shared_by_hand)
        self.setMinimumWidth(240)

    def sizeHint(self) -> QSize:
        return QSize(WIDTH_PX, 600)

    def add_chart(self) -> None:
        """Load the chart by band and set it between card and findings."""
        if self.chart is not None:
            return
        from .charts import BandChart

        self.chart = BandChart(self._document, self._inks)
        self.splitter.insertWidget(1, self.chart)
        self.splitter.setStretchFactor(1, 0)
        self.chart.show()
        self.share_out()

    def share_out(self) -> None:
        """Give card, chart and findings their shares of the height; not where a hand has set them."""
        if self.shared_out:
            return
        whole = self.splitter.height()
        chart, findings = round(CHART_SHARE * whole), round(FINDINGS_SHARE * whole)
        parts = [findings] if self.chart is None else [chart, findings]
        self.splitter.setSizes([whole - sum(parts), *parts])

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.share_out()

    def _shared_by_hand(self) -> None:
        self.shared_out = True

    def set_touch(self, on: bool) -> None:
        """Make everything large enough for fingers, or not."""
        self.card.set_touch(on)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self._inks = inks
        self.card.set_inks(inks)
        self.findings.set_inks(inks)
        if self.chart is not None:
            self.chart.set_inks(inks)  # type: ignore[attr-defined]
