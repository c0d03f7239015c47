"""Powered loudspeakers: full level by input, hiss behind the level control."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import line, make, solved


def box(level: str = "+4 dBu", **fields):
    return solved(line(level), make("powered_loudspeaker", z_in_ohm="1000 M", **fields))


def test_full_level_at_its_sensitivity():
    node = box(sensitivity_v="+4 dBu", max_spl="122 dB SPL").node("powered_loudspeaker", "out")
    assert (node.level, node.clip) == pytest.approx((122.0, 122.0), abs=1e-6)


def test_level_control_and_range_switch_move_the_level_alone():
    """25 dB(A) of hiss at 1 m stays: it stands behind both."""
    for fields, expected in (
        ({"level_db": -10.0}, 112.0),
        ({"lower_by_db": ["20 dB"], "input_range": 1.0}, 102.0),
    ):
        node = box(noise_spl="25 dB(A)", **fields).node("powered_loudspeaker", "out")
        assert node.level == pytest.approx(expected, abs=1e-6)
        assert node.noise_a == pytest.approx(25.0, abs=0.02)


def test_its_input_clips_ahead_of_the_level_control():
    assert box("+24 dBu", max_input_v="+20 dBu", level_db=-30.0).node(
        "powered_loudspeaker", "in"
    ).headroom == pytest.approx(-4.0, abs=1e-6)
