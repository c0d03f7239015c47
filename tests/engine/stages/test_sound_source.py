"""Sound sources: level, crest factor, distance, spectrum."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import make, row, solved


def test_level_and_peak():
    """85 dB SPL with a crest of 18 dB: the peak stands 18 − 3.01 dB higher (sine-scaled, C29)."""
    node = solved(make("sound_source", level_spl="85 dB SPL", crest_db="18 dB")).node("sound_source", "out")
    assert node.level == pytest.approx(85.0, abs=1e-9)
    assert node.peak == pytest.approx(85.0 + 18.0 - 3.0103, abs=1e-4)


def test_moving_from_0_6_to_0_15_m_gives_12_db():
    """S05: inverse square, 20 log 4 = 12.04 dB."""
    talker = make("sound_source", level_spl="72 dB SPL", stated_at_m="0.6 m")
    near, far = (
        solved(talker, make("microphone"), microphone=d).node("microphone", "in").level
        for d in ("0.15 m", "0.6 m")
    )
    assert far == pytest.approx(72.0, abs=1e-9)
    assert near - far == pytest.approx(12.04, abs=0.01)


def test_a_level_at_the_microphone_needs_no_distance():
    out = solved(make("sound_source", level_spl="94 dB"), make("microphone"), microphone="5 m")
    assert out.node("microphone", "in").level == pytest.approx(94.0, abs=1e-9)


def test_a_weighted_level_is_what_that_weighting_reads():
    """A source of 80 dB(A) reads 80 dB(A) at its output, and pink noise 2.86 dB more unweighted (integral of IEC 61672-1)."""
    source = make("sound_source", level_spl="80 dB(A)", spectrum="pink")
    seat = solved(source, make("seat")).seats[0]
    assert seat.level_a == pytest.approx(80.0, abs=1e-9)
    assert seat.level == pytest.approx(82.86, abs=0.03)


def test_a_test_tone_is_a_sine():
    """Crest 3.01 dB whatever the figure says: peak equals level."""
    node = solved(make("sound_source", spectrum="test tone", crest_db="20 dB")).node("sound_source", "out")
    assert node.peak == pytest.approx(node.level, abs=1e-9)


def test_own_bands_must_fit_the_bands():
    stage = make("sound_source", spectrum="own bands", own_bands_db=["60 dB"] * 5)
    assert list(stage.check(stage.values(), row(stage).axis())) == [
        "Own bands of Sound source hold 5 levels: give 31, 10 or 8"
    ]
