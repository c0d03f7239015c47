"""The chart by band: its lines are the engine's bands, kept and only refilled; it can be read by pointer and by key."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QPointF, Qt
from PySide6.QtTest import QTest

from app.band_data import BANDS_HZ, band_data, room_line
from app.document import Document
from app.inks import DARK, LIGHT
from engine.ambient import make_ambient
from engine.bands import BAND_MID_HZ
from engine.project import Project
from tests.app.diagram.chains import chain


@pytest.fixture
def chart(qtbot):
    from app.charts import BandChart

    document = Document(chain())
    made = BandChart(document, LIGHT)
    made.document_ = document
    made.resize(300, 180)
    qtbot.addWidget(made)
    made.show()
    qtbot.waitExposed(made)
    return made


def test_nominal_frequencies_are_those_of_the_engines_bands():
    """IEC 61260-1: nominal mid-frequencies within 2.6 % of the exact base-10 ones."""
    assert np.array(BANDS_HZ) == pytest.approx(BAND_MID_HZ, rel=0.026)


def test_its_lines_are_the_selected_nodes_bands(chart):
    document = chart.document_
    document.select(["processor-5"])
    bands = document.outcome.band_levels(document.outcome.node("processor-5", "out"))
    _, level = chart.lines["level"].getData()
    _, noise = chart.lines["noise"].getData()
    for line, expected in ((level, bands.level_db), (noise, bands.noise_db)):
        sounds = np.isfinite(expected)
        assert line[sounds] == pytest.approx(expected[sounds], abs=1e-9)
        assert np.isnan(line[~sounds]).all()  # silence is a gap, not a fall


def test_a_seats_bands_sum_to_its_level():
    """The 31 bands as powers add up to the seat's level."""
    outcome = Document(chain()).outcome
    data = band_data(outcome, ["seat-9"])
    assert 10.0 * np.log10(np.nansum(10.0 ** (data.level / 10.0))) == pytest.approx(
        outcome.seats[0].level, abs=0.01
    )


def test_the_rooms_curve_gives_each_octave_back():
    """Three thirds of an octave's line add up to the octave level of NC-30 (ANSI/ASA S12.2): 35 dB at 500 Hz."""
    line = room_line(make_ambient(30.0, "NC"))
    middle = BANDS_HZ.index(500)
    assert 10.0 * np.log10(np.sum(10.0 ** (line[middle - 1 : middle + 2] / 10.0))) == pytest.approx(
        35.0, abs=1e-9
    )
    assert room_line(make_ambient(35.0, "A")) is None


def test_items_are_refilled_and_ranges_keep_still_while_a_hand_moves(chart):
    document = chart.document_
    document.select(["mixer_channel-3"])
    items = dict(chart.lines)
    before = chart.plot.viewRange()[1]
    levels = chart.lines["level"].getData()[1].copy()
    for step in range(8):
        stage = document.project.stage["mixer_channel-3"]
        document.edit(
            "Down", {stage.id: (stage, stage.with_control("fader_db", -40.0 - step))}, gesture="hand"
        )
        document.flush()
    assert chart.plot.viewRange()[1] == before
    assert chart.lines == items
    assert not np.allclose(chart.lines["level"].getData()[1], levels, equal_nan=True)
    document.end_gesture()
    assert chart.plot.viewRange()[1] != before


def test_a_band_is_read_by_pointer_and_by_key(chart):
    chart.document_.select(["processor-5"])
    view = chart.plot.getViewBox()
    spot = view.mapViewToScene(QPointF(17.0, sum(chart.plot.viewRange()[1]) / 2.0)).toPoint()
    QTest.mouseMove(chart.plot.viewport(), spot)
    assert chart.band == 17
    assert chart.reading.text().startswith("1\u202fkHz · level ")
    chart.setFocus()
    QTest.keyClick(chart, Qt.Key.Key_Right)
    assert chart.reading.text().startswith("1.25\u202fkHz")
    QTest.keyClick(chart, Qt.Key.Key_Left)
    assert chart.band == 17


def test_nothing_to_show_is_said_and_inks_can_change(qtbot):
    from app.charts import BandChart

    made = BandChart(Document(Project()), LIGHT)
    qtbot.addWidget(made)
    made.set_inks(DARK)
    assert made.data is None
    assert "Select" in made.reading.text()
    made.grab()
