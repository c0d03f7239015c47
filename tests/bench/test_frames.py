"""From a control's move to the painted frame, printed beside its goal and beside a bare painter's floor."""

from __future__ import annotations

import time

import numpy as np
import pytest
from PySide6.QtCore import QLineF
from PySide6.QtGui import QColor, QImage, QPainter, QPen
from PySide6.QtWidgets import QApplication

from app.ask import Dialogs
from app.document import Document
from app.window import MainWindow
from tests.app.diagram.chains import chain

KINDS = (
    "sound_source", "microphone", "line_cable", "preamplifier", *["mixer_channel"] * 3, "mix_bus", *["equaliser"] * 3,
    *["mixer_channel"] * 4, "processor", "power_amplifier", "speaker_line", "loudspeaker", "seat",
)  # fmt: skip
MOVES = 200


class Leaving(Dialogs):
    """Leaves without saving when the window closes."""

    def save_first(self, name):
        return "discard"


@pytest.fixture
def window(qtbot):
    shown = MainWindow(Document(chain(KINDS)), ask=Leaving())
    qtbot.addWidget(shown)
    shown.resize(1400, 700)
    shown.show()
    qtbot.waitExposed(shown)
    qtbot.wait(1500)  # the chart comes after the first frame
    return shown


def test_control_move_to_painted_frame(window, capsys):
    """20 stages at 1400×700: goal median 8 ms, 99th percentile 16 ms. Floor: the same strokes with a bare painter."""
    document = window.document
    key = next(s.id for s in document.project.stages if s.kind == "preamplifier")
    document.select([key])
    QApplication.processEvents()
    took = []
    for move in range(MOVES):
        stage = document.project.stage[key]
        began = time.perf_counter()
        document.edit(
            "Gain", {key: (stage, stage.with_control("gain_db", 30.0 + move % 20))}, gesture="bench"
        )
        document.flush()
        QApplication.processEvents()  # every part that the move has made dirty paints here
        took.append((time.perf_counter() - began) * 1e3)
    document.end_gesture()
    median, p99 = np.percentile(took[10:], [50, 99])
    floor = bare_strokes_ms(window)
    with capsys.disabled():
        print(
            f"\ncontrol move to painted frame: median {median:.1f} ms (goal 8), 99th {p99:.1f} ms (goal 16), strokes alone {floor:.1f} ms"
        )


def bare_strokes_ms(window: MainWindow) -> float:
    """The diagram's own strokes drawn by a bare painter."""
    geometry = window.centre.diagram.geometry_
    image = QImage(window.centre.diagram.size(), QImage.Format.Format_RGB32)
    lines = [QLineF(*span) for spans in geometry.spans.values() for span in spans]
    began = time.perf_counter()
    for _ in range(20):
        painter = QPainter(image)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(QColor("#1B4F9C"), 2.0))
        painter.drawLines(lines)
        painter.end()
    return (time.perf_counter() - began) / 20.0 * 1e3
