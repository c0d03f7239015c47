"""What a recording holds, and what it does to the venue: levels, percentiles, where it would clip, a button to use it."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QCloseEvent
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QProgressBar,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from app import words
from app.document import Document
from app.edits.recording import takes_recording, use_recording
from app.inks import Inks, font
from engine.signals import Programme, moments

from .levels_chart import LevelsChart
from .reader import Reader

SHOWN_MOMENTS = 5
NONE_CLIP = "Nothing behind this source clips with it, and no limiter works."


class RecordingPanel(QDialog):
    """One recording beside the window. `chosen` names the source it was asked for."""

    used = Signal(str)

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.programme: Programme | None = None
        self.path: Path | None = None
        self.reader = Reader(self)
        self.setWindowTitle("Recording")
        self.resize(640, 560)
        self.title = QLabel("")
        self.title.setFont(font(16, strong=True))
        self.facts = QLabel("")
        self.facts.setProperty("quiet", True)
        self.bar = QProgressBar()
        self.bar.setTextVisible(False)
        self.bar.setMaximumHeight(6)
        self.stop_button = QPushButton("Stop reading")
        self.chart = LevelsChart(inks)
        self.numbers = QGridLayout()
        self.effect = QLabel("")
        self.effect.setWordWrap(True)
        self.source = QComboBox()
        self.source.setAccessibleName("Source that the recording is for")
        self.use_button = QPushButton("Use as its programme")
        self.use_button.setProperty("primary", True)
        self._arrange()
        self.reader.progress.connect(lambda share: self.bar.setValue(round(share * 100.0)))
        self.reader.done.connect(self._show)
        self.reader.failed.connect(self._fail)
        self.stop_button.clicked.connect(self._stop)
        self.use_button.clicked.connect(self.use)
        self.source.currentIndexChanged.connect(lambda _: self._hold_against())
        document.solved.connect(lambda _: self._hold_against())
        self._set_reading(False)

    def _arrange(self) -> None:
        reading = QHBoxLayout()
        reading.addWidget(self.bar, 1)
        reading.addWidget(self.stop_button)
        last = QHBoxLayout()
        last.addWidget(self.source, 1)
        last.addWidget(self.use_button)
        body = QVBoxLayout(self)
        body.setContentsMargins(20, 16, 20, 16)
        body.setSpacing(8)
        body.addWidget(self.title)
        body.addWidget(self.facts)
        body.addLayout(reading)
        body.addWidget(self.chart, 1)
        body.addLayout(self.numbers)
        body.addWidget(self.effect)
        body.addLayout(last)

    def read(self, path: Path, source: str | None = None) -> None:
        """Read a recording, for a source where one was meant."""
        self.path, self.programme = path, None
        self.title.setText(path.name)
        self.facts.setText("reading …")
        self._list_sources(source)
        self._set_reading(True)
        self.reader.read(path)

    def use(self) -> None:
        """Put the recording's programme in the chosen source's place, as one undo step."""
        key = self.source.currentData()
        if self.programme is None or self.path is None or key is None:
            return
        name = self.document.project.stage[key].name
        try:
            self.document.edit(
                f"Use {self.path.name} at {name}",
                use_recording(self.document.project, key, self.programme, self.path.name),
            )
        except ValueError as reason:
            self.effect.setText(str(reason))
            return
        self.document.flush()
        self.used.emit(key)

    def _list_sources(self, wanted: str | None) -> None:
        self.source.clear()
        for key in self.document.project.topology.order:
            if takes_recording(self.document.project, key):
                self.source.addItem(self.document.project.stage[key].name, key)
        place = self.source.findData(wanted)
        self.source.setCurrentIndex(max(0, place))

    def _show(self, path: Path, programme: Programme) -> None:
        self.programme = programme
        channels = "1 channel" if programme.channels == 1 else f"{programme.channels} channels"
        minutes, seconds = divmod(round(programme.seconds), 60)
        self.facts.setText(f"{minutes} min {seconds} s, {channels}, {programme.rate_hz / 1000:g} kHz")
        self.chart.show_programme(programme)
        self._show_numbers(programme)
        self._set_reading(False)
        self._hold_against()

    def _show_numbers(self, programme: Programme) -> None:
        while (item := self.numbers.takeAt(0)) is not None:
            if (old := item.widget()) is not None:
                old.deleteLater()
        percentiles = programme.percentiles_dbfs
        facts = (
            ("rms", words.level(_finite(programme.rms_dbfs), "dBFS")),
            ("crest factor", words.margin(programme.crest_db)),
            ("sample peak", words.level(_finite(programme.sample_peak_dbfs), "dBFS")),
            ("true peak", words.level(_finite(programme.true_peak_dbfs), "dBFS")),
            ("half the time under", words.level(_finite(percentiles[50]), "dBFS")),
            ("95 % of the time under", words.level(_finite(percentiles[95]), "dBFS")),
        )
        for place, (label, value) in enumerate(facts):
            quiet, strong = QLabel(label), QLabel(value)
            quiet.setProperty("quiet", True)
            strong.setFont(font(12, strong=True))
            self.numbers.addWidget(quiet, place // 2, place % 2 * 2)
            self.numbers.addWidget(strong, place // 2, place % 2 * 2 + 1, Qt.AlignmentFlag.AlignLeft)

    def _hold_against(self) -> None:
        """Say where the recording would clip behind the chosen source, or drive a limiter."""
        key = self.source.currentData()
        if self.programme is None or key is None or key not in self.document.project.stage:
            self.effect.setText("" if key is not None else "No source in this project takes a recording yet.")
            self.chart.show_ceiling(None)
            self.use_button.setEnabled(False)
            return
        self.use_button.setEnabled(True)
        found = moments(self.document.outcome, key, self.programme)
        lines = []
        for each in found[:SHOWN_MOMENTS]:
            doing = "clips" if each.sort == "clip" else "limits"
            times = "once" if each.runs == 1 else f"{each.runs} times"
            lines.append(
                f"{each.name}, {each.section}: {doing} {times}, {each.seconds:.1f}{words.THIN}s together."
            )
        self.effect.setText("\n".join(lines) or NONE_CLIP)
        self.chart.show_ceiling(found[0].ceiling_dbfs if found else None)

    def _fail(self, path: Path, reason: str) -> None:
        self._set_reading(False)
        self.facts.setText("")
        self.effect.setText(reason)

    def _stop(self) -> None:
        self.reader.stop()
        self._set_reading(False)
        self.facts.setText("stopped")

    def _set_reading(self, reading: bool) -> None:
        self.bar.setVisible(reading)
        self.bar.setValue(0)
        self.stop_button.setVisible(reading)
        self.use_button.setEnabled(self.programme is not None)

    def closeEvent(self, event: QCloseEvent) -> None:
        self.reader.stop()
        super().closeEvent(event)


def _finite(value: float) -> float | None:
    return value if abs(value) != float("inf") else None
