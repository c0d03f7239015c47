"""Equalisers, transformers and crossovers: S25, S26, S30."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from tests.scenarios.build import DB, TENTH, bare, chain, line, project, solved


def boosted():
    """S25: +6 dB of shelf and +4 dB of bell at 80 Hz."""
    return chain(
        line(level="+4 dBu"),
        bare(
            "equaliser", "equaliser", max_v="+24 dBu", low_shelf_hz="250 Hz", low_shelf_db=6.0, bell_1_hz="80 Hz", bell_1_q="2",
            bell_1_db=4.0,
        ),
    )  # fmt: skip


def test_s25_boost_takes_headroom_where_it_boosts():
    """S25: +10 dB at 80 Hz: at that frequency the input takes +14 dBu, while at 1 kHz it takes +24."""
    at_80, at_5k = (evaluate(boosted(), tone_hz=hertz) for hertz in (80.0, 5000.0))
    assert at_80.node("equaliser", "out").level - at_80.node("equaliser", "in").level == pytest.approx(
        10.0, abs=TENTH
    )
    assert at_80.node("equaliser", "in").ceiling == pytest.approx(14.0, abs=TENTH)
    assert at_5k.node("equaliser", "in").ceiling == pytest.approx(24.0, abs=DB)


def test_s25_the_meters_hardly_move():
    """S25: on pink noise shelf and bell together raise the level by some 4 dB, while the clip point at 80 Hz drops by 10."""
    outcome = evaluate(boosted())
    rise = outcome.node("equaliser", "out").level - outcome.node("equaliser", "in").level
    assert 2.8 < rise < 4.2


@pytest.mark.parametrize(
    ("hertz", "most_dbu"), [(20.0, 13.98), (25.0, 15.92), (31.5, 17.93), (40.0, 20.0), (50.0, 21.94)]
)
def test_s26_a_core_takes_less_at_low_frequencies(hertz, most_dbu):
    """S26: +20 dBu at 40 Hz, 6 dB per octave: +13.98 at 20 Hz, +15.92 at 25, +17.93 at 31.5, +21.94 at 50 Hz."""
    drive = chain(
        line(level="+18 dBu", crest="3.01 dB"),
        bare("direct_box", "transformer", loss_db="0 dB", max_level_v="+20 dBu @ 40 Hz"),
    )
    outcome = evaluate(drive, tone_hz=hertz)
    assert outcome.node("transformer", "in").ceiling == pytest.approx(most_dbu, abs=DB)
    assert outcome.narrowest.stage == "transformer" or hertz > 40.0
    if hertz == 25.0:
        assert outcome.narrowest.margin_db == pytest.approx(-2.08, abs=DB)


def sub_and_top(sub_db: float, hertz: float) -> tuple[float, float]:
    """S30: levels of the sub and the top output of a 24 dB Linkwitz–Riley crossover at 90 Hz, the sub's send off by some dB."""
    stages = [
        line(level="+4 dBu"),
        bare(
            "processor", "processor", outputs_fitted=2, crossover_slope="24 dB/oct Linkwitz–Riley", low_pass_1_hz="90 Hz",
            high_pass_2_hz="90 Hz", trim_1_db=sub_db,
        ),
        bare("feed", "sub"), bare("feed", "top"),
    ]  # fmt: skip
    links = ["source > processor", "processor.out > sub", "processor.out_2 > top"]
    outcome = evaluate(project(stages, links), tone_hz=hertz)
    return float(outcome.node("sub", "in").level), float(outcome.node("top", "in").level)


@pytest.mark.parametrize(("sub_db", "hertz"), [(0.0, 90.0), (-5.0, 77.9), (6.0, 107.0)])
def test_s30_a_sub_off_its_unity_moves_the_crossover(sub_db, hertz):
    """S30: the levels meet at 90 Hz; with the sub at −5 dB at 78 Hz, at +6 dB at 107 Hz (w⁴ = g)."""
    sub, top = sub_and_top(sub_db, hertz)
    assert sub == pytest.approx(top, abs=0.1)


def test_s25_a_boost_one_octave_wide():
    """S25: pink noise through a step of +10 dB over one octave of ten: 10 log((9 + 10)/10) = +2.79 dB.

    A real bell of one octave has skirts in place of the step's edges: within 0.5 dB of it, so meters do not warn.
    """
    outcome = solved(
        line(level="+4 dBu"),
        bare("equaliser", "equaliser", bell_1_hz="80 Hz", bell_1_q="1.41", bell_1_db=10.0),
    )
    rise = outcome.node("equaliser", "out").level - outcome.node("equaliser", "in").level
    assert rise == pytest.approx(2.79, abs=0.5)
