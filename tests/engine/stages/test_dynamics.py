"""Dynamics: static curves, their noise, their headroom."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import NO_LOAD, NO_OHM, SILENT, end, line, make, solved

UNIT = {"z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM, "noise": SILENT}


def out(level: str, **fields):
    return solved(
        line(level, noise="-90 dBu unweighted"), make("dynamics", **{**UNIT, **fields}), end()
    ).node("dynamics", "out")


def test_ten_more_in_come_out_as_two_and_a_half_more():
    """Issue: 4:1 above the threshold: +10 dB in is +2.5 dB out, headroom falls as much, noise ahead of it by the new gain."""
    low, high = (out(level, threshold_dbu=-10.0, ratio=4.0) for level in ("0 dBu", "+10 dBu"))
    assert low.level == pytest.approx(-7.5, abs=1e-6)
    assert high.level - low.level == pytest.approx(2.5, abs=1e-6)
    assert high.headroom - low.headroom == pytest.approx(-2.5, abs=1e-6)
    assert high.noise - low.noise == pytest.approx(-7.5, abs=1e-6)


def test_below_the_threshold_only_make_up_counts():
    node = out("-20 dBu", threshold_dbu=-10.0, make_up_db=6.0)
    assert (node.level, node.noise) == pytest.approx((-14.0, -84.0), abs=1e-3)


def test_limiter_by_rms_and_by_peak():
    """Programme +4 dBu, crest 12 dB, so peaks +12.99: an rms limit at 0 takes both down 4 dB, a peak limit at +8 the peak alone."""
    rms = out("+4 dBu", mode="limiter", detector="rms", threshold_dbu=0.0)
    assert (rms.level, rms.peak) == pytest.approx((0.0, 8.99), abs=0.005)
    peak = out("+4 dBu", mode="limiter", detector="peak", threshold_dbu=8.0)
    assert (peak.level, peak.peak) == pytest.approx((4.0, 8.0), abs=0.005)


def test_bypassed_it_passes_everything():
    for mode in ("compressor", "limiter"):
        node = out("+10 dBu", mode=mode, detector="peak", threshold_dbu=-30.0, make_up_db=10.0, inserted=0.0)
        assert node.level == pytest.approx(10.0, abs=1e-6)


def test_in_a_digital_path_the_threshold_is_dbfs():
    stage = make("dynamics", signal="digital", mode="limiter", threshold_dbfs=-20.0)
    node = solved(make("digital_source", level_dbfs="-14 dBFS"), stage, make("feed", signal="digital")).node(
        "dynamics", "out"
    )
    assert node.level == pytest.approx(-20.0, abs=1e-6)
    assert "threshold_dbu" not in [name for name, _, _ in stage.controls()]
