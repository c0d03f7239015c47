"""Preamplifiers: gain, pad, clip ahead of and behind the gain, EIN and residual."""

from __future__ import annotations

import numpy as np
import pytest

from engine.units import dbu_from_v2
from tests.engine.stages.alone import NO_LOAD, NO_OHM, end, line, make, row, solved

QUIET = {"z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM, "residual": None, "pad_db": "20 dB"}


def test_pad_or_not_for_a_loud_condenser():
    """S06: +2.24 dBu in, maximum +8 dBu in and +24 dBu out: at 35 dB over by 13.24 dB; with the 20 dB pad 6.8 dB left."""
    loud = line("+2.24 dBu")
    for pad, level, left in ((0.0, 37.24, -13.24), (1.0, 17.24, 6.76)):
        out = solved(loud, make("preamplifier", gain_db=35.0, pad=pad, **QUIET), end())
        assert out.node("preamplifier", "out").level == pytest.approx(level, abs=1e-6)
        assert out.node("preamplifier", "out").headroom == pytest.approx(left, abs=1e-6)
    assert out.node("preamplifier", "in").clip == pytest.approx(28.0, abs=1e-6)  # pad in: +8 dBu and 20 dB


def test_the_input_clips_ahead_of_the_gain():
    """No gain setting helps where +12.2 dBu meets +8 dBu at the input."""
    for gain in (0.0, 40.0):
        out = solved(line("+12.2 dBu"), make("preamplifier", gain_db=gain, **QUIET), end())
        assert out.node("preamplifier", "in").headroom == pytest.approx(-4.2, abs=1e-6)


def test_ein_without_its_source_and_the_real_source_again():
    """A 150 ohm source and EIN −127 dBu (150 ohm): output noise at 60 dB is −67 dBu, thermal part counted once."""
    source = line("-60 dBu", z_out_ohm="150 ohm", noise=None)
    out = solved(
        source, make("preamplifier", gain_db=60.0, ein_v=["-127 dBu, 150 ohm, unweighted"], **QUIET), end()
    )
    assert out.node("preamplifier", "out").noise == pytest.approx(-67.0, abs=0.005)


def test_condenser_into_a_preamplifier():
    """S05: microphone −108.78 and preamplifier −129.05 dBu(A) come to −108.74: the preamplifier costs 0.04 dB."""
    mic = make("microphone", sensitivity_v_per_pa="-35 dBV/Pa", self_noise_spl="18 dB(A)", z_ohm="150 ohm")
    out = solved(
        make("sound_source"),
        mic,
        make("preamplifier", gain_db=55.0, ein_v=["-127 dBu, 150 ohm, unweighted"], **QUIET),
        end(),
    )
    added = out.node("preamplifier", "out").noise_a - 55.0 - out.node("microphone", "out").noise_a
    assert added == pytest.approx(0.04, abs=0.02)


def test_residual_leads_at_low_gain():
    """The residual at lowest gain holds EIN's share: what reaches the output there is the residual itself."""
    source = line("-20 dBu", z_out_ohm="150 ohm", noise=None)
    stage = make("preamplifier", gain_db=0.0, **{**QUIET, "residual": "-95 dBu unweighted"})
    assert solved(source, stage, end()).node("preamplifier", "out").noise == pytest.approx(-95.0, abs=0.005)


def test_ein_over_gain_is_interpolated():
    """−127 dBu at 60 dB and −107 dBu at 20 dB (both far above thermal of a short): −117 dBu at 40 dB."""
    points = ["-107 dBu, 0 ohm, unweighted", "-87 dBu, 0 ohm, unweighted @ 20 dB"]
    stage = make("preamplifier", gain_db=40.0, ein_v=points, **QUIET)
    assert solved(line("-60 dBu"), stage, end()).node("preamplifier", "out").noise == pytest.approx(
        -97.0 + 40.0, abs=0.01
    )


def test_with_the_pad_in_ein_still_holds():
    """The pad's own resistances stand where the source did: input noise behind the pad stays EIN."""
    source = line("-20 dBu", z_out_ohm="150 ohm", noise=None)
    out = solved(source, make("preamplifier", gain_db=60.0, pad=1.0, **QUIET), end())
    assert out.node("preamplifier", "out").noise == pytest.approx(-67.0, abs=0.005)


def test_ein_below_its_own_source_is_refused():
    """R87: 150 ohm alone make −130.92 dBu (4kTRB, 20 Hz to 20 kHz, 20 °C)."""
    stage = make("preamplifier", ein_v=["-132 dBu, 150 ohm, unweighted"])
    reason = next(stage.check(stage.values(), row(stage).axis()))
    assert "150 ohm alone make −130.9\u202fdBu of thermal noise" in reason
    a_weighted = make("preamplifier", ein_v=["-132 dBu(A), 150 ohm"])
    assert list(a_weighted.check(a_weighted.values(), row(stage).axis())) == []  # −129.95 unweighted


def test_lowest_gain_above_highest_is_refused():
    stage = make("preamplifier", gain_min_db="10 dB", gain_max_db="60 dB", gain_db=20.0)
    numbers = stage.values().replaced({"gain_min_db": 70.0})
    assert any("is above its highest" in why for why in stage.check(numbers, row(stage).axis()))


def test_thermal_noise_of_the_pad_never_beats_the_source():
    """In a batch of pad positions the broadcast holds: [2, F] noise, and padded noise is not lower than the stage's own."""
    stage = make("preamplifier", **QUIET)
    values = stage.values().replaced({"temperature_k": 293.15, "pad": np.array([[0.0], [1.0]])})
    answer = stage.sections(values, row(stage).axis())
    noise = answer.sections[0].noise_behind
    assert noise.shape[0] == 2
    assert np.all(noise[1] >= noise[0])
    assert dbu_from_v2(np.asarray(answer.sections[0].clip_in).ravel()) == pytest.approx([8.0, 28.0])
