"""Microphones, preamplifiers and open channels: S05, S06, S16, S38."""

from __future__ import annotations

import numpy as np
import pytest

from engine.acoustic_gain import acoustic_gain
from engine.outcome import Outcome, evaluate
from engine.units import v_from_dbu
from tests.scenarios.build import DB, SHARE, TENTH, WEIGHTED, bare, moved, project, solved


def presenter(sensitivity: str, self_noise: str | None) -> Outcome:
    """S05: 72 dB SPL at the microphone, a preamplifier of 60 dB at most with EIN −127 dBu (150 ohm)."""
    return solved(
        bare("sound_source", "presenter", level_spl="72 dB SPL"),
        bare(
            "microphone",
            "microphone",
            sensitivity_v_per_pa=sensitivity,
            self_noise_spl=self_noise,
            z_ohm="150 ohm",
        ),
        bare(
            "preamplifier", "preamplifier", ein_v="-127 dBu @ 150 ohm unweighted", residual=None, gain_db=60.0
        ),
    )


def test_s05_dynamic_microphone():
    """S05: −74.28 dBu (0.150 mV) asks for 74.3 dB; 60 dB fall 14.3 dB short of 0 dBu; S/N 52.7 dB."""
    outcome = presenter("-54.5 dBV/Pa", None)
    arriving = outcome.node("preamplifier", "in")
    assert arriving.level == pytest.approx(-74.28, abs=DB)
    assert v_from_dbu(arriving.level) == pytest.approx(0.150e-3, rel=SHARE)
    leaving = outcome.node("preamplifier", "out")
    assert leaving.level == pytest.approx(-14.28, abs=DB)
    assert leaving.snr == pytest.approx(52.7, abs=TENTH)


def test_s05_condenser_microphone():
    """S05: −54.78 dBu (1.41 mV); microphone noise −108.78 dBu(A), the preamplifier costs 0.04 dB; S/N 54.0 dB(A)."""
    outcome = moved(presenter("-35 dBV/Pa", "18 dB(A)"), "preamplifier", gain_db=55.0)
    arriving, leaving = outcome.node("preamplifier", "in"), outcome.node("preamplifier", "out")
    assert arriving.level == pytest.approx(-54.78, abs=DB)
    assert v_from_dbu(arriving.level) == pytest.approx(1.41e-3, rel=SHARE)
    assert leaving.level == pytest.approx(0.2, abs=0.3)  # 54.8 dB fit into 60
    assert arriving.noise_a == pytest.approx(-108.78, abs=DB)
    assert leaving.noise_a - 55.0 - arriving.noise_a == pytest.approx(0.04, abs=DB)
    assert leaving.level - leaving.noise_a == pytest.approx(54.0, abs=WEIGHTED)


def test_s05_moving_closer():
    """S05: from 0.6 m to 0.15 m gives +12.0 dB (inverse square)."""
    levels = []
    for distance in ("0.6 m", "0.15 m"):
        stages = [bare("sound_source", "presenter", stated_at_m="0.6 m"), bare("microphone", "microphone")]
        links = ["presenter > microphone"]
        levels.append(evaluate(project(stages, links, {links[0]: distance})).node("microphone", "in").level)
    assert levels[1] - levels[0] == pytest.approx(12.04, abs=DB)


def loud_source(pad: float, level: str = "128 dB SPL") -> Outcome:
    """S06: a condenser of 20 mV/Pa into a preamplifier of +8 dBu at lowest gain, +24 dBu out, gain found at 35 dB."""
    return solved(
        bare("sound_source", "drum", level_spl=level, crest_db="3.01 dB"),
        bare("microphone", "microphone", sensitivity_v_per_pa="20 mV/Pa", max_spl="138 dB SPL"),
        bare(
            "preamplifier",
            "preamplifier",
            max_input_v="+8 dBu",
            max_output_v="+24 dBu",
            pad_db="20 dB",
            pad=pad,
            gain_db=35.0,
        ),
    )


def test_s06_without_the_pad_it_clips():
    """S06: +2.24 dBu, so 21.76 dB at most; at 35 dB the output is over by 13.24 dB."""
    outcome = loud_source(pad=0.0)
    assert outcome.node("preamplifier", "in").level == pytest.approx(2.24, abs=DB)
    assert outcome.node("preamplifier", "out").peak_margin == pytest.approx(-13.24, abs=DB)
    assert outcome.narrowest.stage == "preamplifier"
    assert moved(outcome, "preamplifier", gain_db=21.76).node(
        "preamplifier", "out"
    ).peak_margin == pytest.approx(0.0, abs=DB)


def test_s06_with_the_pad_it_fits():
    """S06: −17.76 dBu behind the pad, 35 dB give +17.24 dBu, 6.8 dB left; 41.8 dB at most."""
    outcome = loud_source(pad=1.0)
    (padded, _) = outcome.sections("preamplifier")
    assert padded.level_out == pytest.approx(-17.76, abs=DB)
    assert outcome.node("preamplifier", "out").level == pytest.approx(17.24, abs=DB)
    assert outcome.node("preamplifier", "out").peak_margin == pytest.approx(6.8, abs=TENTH)
    assert moved(outcome, "preamplifier", gain_db=41.76).node(
        "preamplifier", "out"
    ).peak_margin == pytest.approx(0.0, abs=DB)


def test_s06_at_the_microphones_own_limit_no_gain_helps():
    """S06: at 138 dB it puts out +12.2 dBu, over the +8 dBu of the input whatever the gain, unless the pad is in."""
    at_limit = moved(loud_source(pad=0.0, level="138 dB SPL"), "preamplifier", gain_db=0.0)
    arriving = at_limit.node("preamplifier", "in")
    assert arriving.level == pytest.approx(12.24, abs=DB)
    assert arriving.peak_margin == pytest.approx(-4.24, abs=DB)
    assert moved(at_limit, "preamplifier", pad=1.0).node("preamplifier", "in").peak_margin == pytest.approx(
        15.76, abs=DB
    )


def open_microphones(count: int) -> float:
    """Noise at the mix of some open microphones alike."""
    stages = [
        bare("microphone", "microphones", count=count),
        bare("preamplifier", "preamplifiers", count=count, gain_db=50.0),
        bare("mix_bus", "mix", residual="-200 dBu unweighted"),
    ]
    outcome = evaluate(project(stages, ["microphones > preamplifiers", "preamplifiers > mix"]))
    return float(outcome.node("mix", "out").noise)


@pytest.mark.parametrize(("count", "rise_db"), [(2, 3.01), (4, 6.02), (8, 9.03), (12, 10.79)])
def test_s16_noise_of_open_microphones(count, rise_db):
    """S16: N open microphones raise the noise by 10 log N: 3.01, 6.02, 9.03, 10.79 dB."""
    assert open_microphones(count) - open_microphones(1) == pytest.approx(rise_db, abs=DB)


def test_s16_twelve_against_four():
    """S16: four open in place of twelve recover 4.77 dB of noise and as much of the feedback margin."""
    assert open_microphones(12) - open_microphones(4) == pytest.approx(4.77, abs=DB)
    margins = [reinforcement(open_microphones=float(n)).margin_db for n in (12, 4)]
    assert margins[1] - margins[0] == pytest.approx(4.77, abs=DB)


def reinforcement(talker_microphone_m: float = 0.3, open_microphones: float = 1.0):
    """S38: the distances of talker, microphone, loudspeaker and listener."""
    return acoustic_gain(
        talker_listener_m=12.0, microphone_loudspeaker_m=8.0, loudspeaker_listener_m=9.0, talker_microphone_m=talker_microphone_m,
        equivalent_m=2.4, open_microphones=open_microphones, feedback_margin_db=6.0,
    )  # fmt: skip


def test_s38_gain_before_feedback():
    """S38: needed 13.98 dB; usable 25.02 with one microphone, 19.00 with four; margins 11.0, 5.0, 2.0 dB for 1, 4, 8."""
    assert reinforcement().needed_db == pytest.approx(13.98, abs=DB)
    assert reinforcement().potential_db == pytest.approx(25.02, abs=DB)
    assert reinforcement(open_microphones=4).potential_db == pytest.approx(19.00, abs=DB)
    margins = [reinforcement(open_microphones=n).margin_db for n in (1, 4, 8)]
    np.testing.assert_allclose(margins, [11.04, 5.02, 2.01], atol=DB)


def test_s38_twice_the_distance_fails():
    """S38: at 0.6 m with four microphones −1.0 dB."""
    assert reinforcement(talker_microphone_m=0.6, open_microphones=4).margin_db == pytest.approx(
        -1.0, abs=TENTH
    )
