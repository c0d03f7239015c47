"""Where the excess gain goes: scenarios S01, S02, S27-like faults of amplifiers that are too sensitive."""

from __future__ import annotations

import pytest

from engine.outcome import Outcome, evaluate
from engine.units import v_from_dbu
from tests.scenarios.build import (
    DB,
    SHARE,
    SILENT,
    TENTH,
    amplifier,
    bare,
    line,
    loudspeaker,
    moved,
    seat,
    solved,
)


def hissing_system(**amp: float) -> Outcome:
    """S01: a mixer, a processor at unity, an amplifier that needs 1.0 V, a loudspeaker, a seat at 3 m."""
    return solved(
        line(level="1 V", crest="3.01 dB"),
        bare("mix_bus", "mixer", max_output_v="10 V", residual="-86 dBu unweighted"),
        bare(
            "processor", "processor", input_range_db="199 dB unweighted", output_range_db="110 dB unweighted"
        ),
        amplifier(sensitivity_v="1.0 V", noise="103 dB re rated unweighted", **amp),
        loudspeaker(sensitivity_spl="98 dB 1 W/1 m"),
        seat(),
        distance="3 m",
    )


def excess_db(outcome: Outcome, mixer: str = "mixer") -> float:
    """How much sooner than the mixer something on its path clips."""
    return outcome.node(mixer, "out").peak_margin - outcome.narrowest.margin_db


def test_s01_how_far_down_do_the_amplifiers_go():
    """S01: attenuate 20.0 dB; the hiss falls 15.8 dB from 30.3 to 14.5, not 20 (worked by hand with the usual formulas)."""
    before = hissing_system()
    assert before.node("amp", "in").level == pytest.approx(2.218, abs=DB)
    assert before.node("amp", "out").level - before.node("amp", "in").level == pytest.approx(36.02, abs=DB)
    assert v_from_dbu(before.node("amp", "out").clip) == pytest.approx(63.25, rel=SHARE)
    assert excess_db(before) == pytest.approx(20.0, abs=DB)
    assert before.node("amp", "in").noise == pytest.approx(-82.99, abs=DB)
    assert before.node("amp", "out").noise == pytest.approx(
        -46.90, abs=DB
    )  # −46.97 from upstream, and its own
    assert before.seats[0].hiss == pytest.approx(30.31, abs=DB)
    after = moved(before, "amp", attenuator_db=-20.0)
    assert excess_db(after) == pytest.approx(0.0, abs=DB)
    assert after.seats[0].hiss == pytest.approx(14.49, abs=DB)
    assert before.seats[0].hiss - after.seats[0].hiss == pytest.approx(15.8, abs=TENTH)


def test_s01_who_owns_the_hiss():
    """S01: upstream noise makes 39.78 dB of 39.85 at 1 m before, 19.78 of 24.03 after, when the amplifier's own leads."""
    before = hissing_system()
    after = moved(before, "amp", attenuator_db=-20.0)
    assert after.node("box", "out").noise == pytest.approx(24.03, abs=DB)
    assert before.node("box", "out").noise == pytest.approx(39.85, abs=DB)
    own = {share.stage: share for share in after.seats[0].budget}
    assert own["amp"].hiss == pytest.approx(21.99 - 9.54, abs=DB)
    assert after.seats[0].budget[0].stage == "amp"
    assert before.seats[0].budget[0].stage in ("mixer", "processor")


def test_s01_average_programme_and_its_distance_from_the_noise():
    """S01: average 6.32 V, 5 W, 105.0 dB at 1 m; average to noise 65.1 dB, after 81.0 dB; or the mixer averages 0.1 V."""
    after = moved(hissing_system(), "amp", attenuator_db=-20.0)
    (load,) = after.loudspeakers
    assert load.volts == pytest.approx(6.32, rel=SHARE)
    assert load.average_w == pytest.approx(5.0, rel=SHARE)
    at_1_m = after.node("box", "out")
    assert at_1_m.level == pytest.approx(105.0, abs=TENTH)
    assert at_1_m.snr == pytest.approx(81.0, abs=TENTH)
    quiet = moved(hissing_system(), "mixer", fader_db=-20.0)
    assert quiet.node("mixer", "out").level == pytest.approx(-17.8, abs=TENTH)
    assert quiet.node("box", "out").level == pytest.approx(105.0, abs=TENTH)
    assert quiet.node("box", "out").snr == pytest.approx(65.1, abs=TENTH)


def quiet_choice(pad: str | None = None, gain: str | None = None, **at: dict[str, float]) -> Outcome:
    """S02: console, converters of 110 dB, amplifier of 1000 W into 4 ohm, horn of 108 dB at 2.83 V, seat at 3 m."""
    ranges = {} if gain is None else {"range_gains_db": [gain]}
    stages = [
        line(level="+4 dBu", crest="23.01 dB"),
        bare("mix_bus", "console", max_output_v="+24 dBu", residual="-84 dBu unweighted", **at.get("console", {})),
        bare(
            "processor", "processor", input_range_db="110 dB unweighted", output_range_db="110 dB unweighted",
            **at.get("processor", {}),
        ),
        *([bare("pad", "pad", loss_db=pad)] if pad else []),
        amplifier(
            rated_power_w=["1000 W @ 4 ohm"], sensitivity_v="+4 dBu", noise="105 dB re rated unweighted", max_input_v="+24 dBu",
            **ranges, **at.get("amp", {}),
        ),
        loudspeaker("horn", sensitivity_spl="108 dB 2.83 V/1 m", z_ohm="4 ohm"),
        seat(),
    ]  # fmt: skip
    return solved(*stages, distance="3 m")


CHOICES = {
    "ride the console low": (quiet_choice, {"console": {"fader_db": -20.0}}, 41.0),
    "processor digital trim": (quiet_choice, {"processor": {"trim_1_db": -20.0}}, 35.7),
    "26 dB amplifier and digital trim": (
        quiet_choice,
        {"gain": "26 dB", "processor": {"trim_1_db": -11.76}},
        28.6,
    ),
    "26 dB amplifier and pad": (quiet_choice, {"gain": "26 dB", "pad": "11.76 dB"}, 23.7),
    "pad": (quiet_choice, {"pad": "20 dB"}, 23.7),
    "amplifier knob": (quiet_choice, {"amp": {"attenuator_db": -20.0}}, 23.7),
}


@pytest.mark.parametrize("name", CHOICES)
def test_s02_which_is_quietest(name):
    """S02: hiss at 3 m, unweighted, of six ways to lose 20 dB: 41.0, 35.7, 28.6, 23.7, 23.7, 23.7 dB SPL."""
    build, given, hiss = CHOICES[name]
    outcome = build(**given)
    assert outcome.seats[0].hiss == pytest.approx(hiss, abs=TENTH)
    # Each of them makes the console's and the amplifier's clip points meet.
    assert outcome.narrowest.margin_db == pytest.approx(0.0, abs=TENTH) or name == "ride the console low"


def test_s02_the_excess_and_the_noise_at_the_amplifier():
    """S02: the amplifier clips at +4 dBu, 20 dB too soon; noise at its input −80.46 (A), −85.89 (B), −100.46 dBu (C)."""
    open_wide = quiet_choice()
    assert excess_db(open_wide, "console") == pytest.approx(20.0, abs=DB)
    assert open_wide.node("amp", "in").noise == pytest.approx(-80.46, abs=DB)
    digital = quiet_choice(processor={"trim_1_db": -20.0})
    assert digital.node("amp", "in").noise == pytest.approx(-85.89, abs=DB)
    assert quiet_choice(pad="20 dB").node("amp", "in").noise == pytest.approx(-100.46, abs=DB)
    assert quiet_choice(gain="26 dB", processor={"trim_1_db": -11.76}).node(
        "amp", "in"
    ).noise == pytest.approx(-85.31, abs=DB)


def test_s02_the_knob_needs_an_input_stage_that_takes_it():
    """S02: with the amplifier's knob its input stage sees +24 dBu: one that takes +21 clips first, 3 dB early."""
    weak = quiet_choice(amp={"attenuator_db": -20.0})
    assert weak.node("amp", "in").peak_margin == pytest.approx(0.0, abs=DB)
    stage = weak.project.stage["amp"].with_fields(max_input_v={"text": "+21 dBu"})
    weaker = evaluate(weak.project.with_changes({"amp": (weak.project.stage["amp"], stage)}))
    assert weaker.narrowest.section == "input stage"
    assert weaker.narrowest.margin_db == pytest.approx(-3.0, abs=DB)


def test_silence_is_out_of_the_way():
    """What the scenarios leave out makes 100 dB less than what they name."""
    outcome = solved(line(), bare("mix_bus", "mixer", residual=SILENT), amplifier(gain_db="26 dB"))
    assert outcome.node("amp", "out").noise < -150.0
