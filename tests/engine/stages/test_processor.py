"""Processors: where each trim lives, converters, crossover outputs, limiters, range switch."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from tests.engine.stages.alone import NO_LOAD, NO_OHM, end, line, make, solved, tone

BOX = {
    "z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM, "input_full_scale_v": "+24 dBu", "output_full_scale_v": "+24 dBu",
    "input_range_db": "110 dB unweighted", "output_range_db": "110 dB unweighted",
}  # fmt: skip


def out(level: str = "0 dBu", **fields):
    return solved(line(level), make("processor", **{**BOX, **fields}), end())


def test_both_converters_hiss():
    """C12: +24 dBu − 110 dB = −86 dBu each; together −82.99 dBu."""
    assert out().node("processor", "out").noise == pytest.approx(-82.99, abs=0.005)


def test_a_digital_trim_leaves_the_da_converters_noise():
    """S02 B: 20 dB of digital trim ahead of the D/A: −86 ⊕ −106 dBu = −85.96 dBu, 20 dB less level."""
    node = out(trim_1_db=-20.0).node("processor", "out")
    assert node.level == pytest.approx(-20.0, abs=1e-6)
    assert node.noise == pytest.approx(-85.957, abs=0.005)


def test_the_range_switch_behind_it_takes_both():
    """The same 20 dB behind the D/A converter: noise −102.99 dBu, and its clip point falls too."""
    node = out(lower_by_db=["20 dB"], output_range=1.0).node("processor", "out")
    assert (node.level, node.noise, node.clip) == pytest.approx((-20.0, -102.99, 4.0), abs=0.005)


def test_a_weighted_dynamic_range_is_2_05_db_worse_unweighted():
    node = out(input_range_db="200 dB unweighted", output_range_db="110 dB(A)").node("processor", "out")
    assert node.noise == pytest.approx(-86.0 + 2.05, abs=0.02)


def test_input_trim_cannot_mend_the_ad_converters_clip():
    """It clips at full scale ahead of every digital trim."""
    for trim in (0.0, -20.0):
        node = out("+20 dBu", input_trim_db=trim).node("processor", "in")
        assert (node.clip, node.headroom) == pytest.approx((24.0, 4.0), abs=1e-6)


def test_digital_gain_is_caught_by_the_da_converter():
    """+12 dB of trim: the D/A converter's input passes full scale 12 dB earlier."""
    assert out("+10 dBu", trim_1_db=12.0).node("processor", "in").ceiling == pytest.approx(
        24.0 - 12.0 - (12.0 - 3.0103), abs=1e-3
    )


def test_crossover_outputs_have_their_own_filters_and_trims():
    """24 dB/oct Linkwitz–Riley at 100 Hz: both outputs −6.02 dB there; each trim moves its own output only."""
    stage = make(
        "processor", outputs_fitted=2, low_pass_1_hz="100 Hz", high_pass_2_hz="100 Hz", trim_2_db=-3.0, **BOX
    ).with_fields(column=1)
    assert [port.name for port in stage.outputs()] == ["out", "out_2"]
    ends = (end("low").with_fields(column=2), end("high").with_fields(column=2))
    links = (
        Link(id="a", source="source", target="processor"), Link(id="b", source="processor", target="low"),
        Link(id="c", source="processor", output="out_2", target="high"),
    )  # fmt: skip
    outcome = evaluate(Project(stages=(line("0 dBu"), stage, *ends), links=links), tone_hz=100.0)
    assert outcome.node("low", "in").level == pytest.approx(-6.02, abs=0.005)
    assert outcome.node("high", "in").level == pytest.approx(-9.02, abs=0.005)


def test_peak_limiter_cuts_the_peaks_alone():
    """+12 dBu with 12 dB of crest peaks at +21; a limit at −10 dBFS (+14 dBu) cuts the peak lane there, the programme passes."""
    node = out("+12 dBu", limiter_1=1.0, limit_peak_1_dbfs=-10.0).node("processor", "out")
    assert (node.level, node.peak) == pytest.approx((12.0, 14.0), abs=1e-3)


def test_rms_limiter_holds_the_programme():
    """S09's threshold of −16.77 dBFS on +20 dBu of full scale is +3.23 dBu, whatever comes in."""
    fields = {
        "limiter_1": 1.0,
        "limit_rms_1_dbfs": -16.8,
        "input_full_scale_v": "+20 dBu",
        "output_full_scale_v": "+20 dBu",
    }
    for level in ("+10 dBu", "+16 dBu"):
        assert out(level, **fields).node("processor", "out").level == pytest.approx(3.2, abs=1e-3)


def test_limiters_out_of_circuit_do_nothing():
    assert out("+12 dBu", limiter_1=0.0, limit_rms_1_dbfs=-40.0).node(
        "processor", "out"
    ).level == pytest.approx(12.0, abs=1e-6)


def test_equaliser_and_controls_in_signal_order():
    stage = make("processor", outputs_fitted=2, lower_by_db=["6 dB"])
    names = [name for name, _, _ in stage.controls()]
    assert names[0] == "input_trim_db"
    assert names[-1] == "output_range"
    assert names.index("bell_1_db") < names.index("trim_1_db") < names.index("limiter_2")
    assert "trim_3_db" not in names
    level = (
        tone(1000.0, line("0 dBu"), make("processor", bell_1_hz="1 kHz", bell_1_db=6.0, **BOX), end())
        .node("processor", "out")
        .level
    )
    assert level == pytest.approx(6.0, abs=1e-6)


def test_a_digital_input_has_no_converter_of_its_own():
    stage = make("processor", input_signal="digital", **BOX)
    outcome = solved(make("digital_source", level_dbfs="-20 dBFS"), stage, end())
    assert outcome.node("processor", "out").level == pytest.approx(4.0, abs=1e-6)
    assert outcome.node("processor", "out").noise == pytest.approx(-86.0, abs=1e-3)
    assert "input_full_scale_v" not in [name for name, _, _ in stage.figures()]
