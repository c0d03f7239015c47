"""A recording read beside the window, held against the venue, and used as a source: driven by clicks and a drop."""

from __future__ import annotations

import numpy as np
import pytest
import soundfile
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtGui import QDragEnterEvent, QDropEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget

from app.columns import Columns
from app.document import Document
from app.edits.recording import takes_recording, use_recording
from app.inks import LIGHT
from app.path_view import PathView
from app.recording import RecordingPanel
from app.recordings import Recordings
from engine.signals import TestSignal, moments, read_programme, write_signal
from tests.app.diagram.chains import chain


@pytest.fixture
def show(tmp_path):
    path = tmp_path / "show.wav"
    write_signal(path, TestSignal("pink", -18.0, 6.0, crest_db=12.0))
    return path


@pytest.fixture
def panel(qtbot):
    document = Document(chain())
    shown = RecordingPanel(document, LIGHT)
    shown.keep = document
    qtbot.addWidget(shown)
    shown.show()
    return shown


def test_a_recording_changes_the_diagram_to_what_the_show_does(panel, qtbot, show):
    """Crest factor and bands of the recording stand in the source; one undo takes them back."""
    panel.read(show, "sound_source-0")
    qtbot.waitUntil(lambda: panel.programme is not None, timeout=10_000)
    before = panel.document.outcome.node("power_amplifier-6", "out")
    QTest.mouseClick(panel.use_button, Qt.MouseButton.LeftButton)
    stage = panel.document.project.stage["sound_source-0"]
    assert stage.crest_db.text == "12.00 dB"
    assert stage.crest_db.origin == "measured"
    assert len(stage.own_bands_db) == 31
    after = panel.document.outcome.node("power_amplifier-6", "out")
    assert after.peak - after.level == pytest.approx(12.0 - 3.01, abs=0.01)
    assert before.peak - before.level != pytest.approx(after.peak - after.level, abs=0.5)
    assert panel.document.undo_stack.count() == 1
    panel.document.undo()
    assert panel.document.project.stage["sound_source-0"].spectrum != "own bands"


def test_what_cannot_be_read_is_said_in_the_panel(panel, qtbot, tmp_path):
    broken = tmp_path / "broken.wav"
    broken.write_bytes(b"not a recording")
    panel.read(broken)
    qtbot.waitUntil(lambda: "cannot be read" in panel.effect.text(), timeout=10_000)
    assert panel.programme is None


def test_reading_is_stopped_by_its_button(panel, qtbot, tmp_path):
    long = tmp_path / "long.wav"
    soundfile.write(long, np.zeros(48000 * 600), 48000, subtype="PCM_16")
    panel.read(long)
    QTest.mouseClick(panel.stop_button, Qt.MouseButton.LeftButton)
    assert not panel.reader.is_reading
    assert panel.facts.text() == "stopped"


def test_a_silent_recording_is_refused(tmp_path):
    path = tmp_path / "silent.wav"
    soundfile.write(path, np.zeros(48000), 48000)
    project = chain()
    assert takes_recording(project, "sound_source-0")
    assert not takes_recording(project, "mix_bus-4")
    with pytest.raises(ValueError, match="silent"):
        use_recording(project, "sound_source-0", read_programme(path), "silent.wav")


def test_moments_count_what_passes_a_clip_point(show):
    """The source 40 dB too loud: something clips, and the first to clip comes first."""
    document = Document(chain())
    source = document.project.stage["sound_source-0"]
    louder = source.with_fields(level_spl={"text": "125 dB SPL"})
    document.edit("Louder", {source.id: (source, louder)})
    document.flush()
    found = moments(document.outcome, source.id, read_programme(show))
    assert found
    assert found[0].seconds > 0.0
    assert [each.ceiling_dbfs for each in found] == sorted(each.ceiling_dbfs for each in found)


def test_a_sound_file_dropped_on_a_source_is_read_for_it(qtbot, show):
    document, columns, window = Document(chain()), Columns(), QWidget()
    qtbot.addWidget(window)
    columns.set_extent(10, 1200.0)
    view = PathView(document, columns, LIGHT, window)
    view.resize(1200, 300)
    recordings = Recordings(document, view, None, window)
    window.show()
    stage = document.project.stage["sound_source-0"]
    left, right = columns.x_in(stage.column), columns.x_out(stage.column)
    row_y = next(y for y in range(5, 290, 3) if view.hit((left + right) / 2, y).id == stage.id)
    mime = QMimeData()
    mime.setUrls([QUrl.fromLocalFile(str(show))])
    at = QPointF((left + right) / 2, row_y)
    shared = (Qt.DropAction.CopyAction, mime, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier)
    QApplication.sendEvent(view, QDragEnterEvent(at.toPoint(), *shared))
    QApplication.sendEvent(view, QDropEvent(at, *shared))
    qtbot.waitUntil(
        lambda: recordings.panel is not None and recordings.panel.programme is not None, timeout=10_000
    )
    assert recordings.panel.source.currentData() == "sound_source-0"
    recordings.close()
