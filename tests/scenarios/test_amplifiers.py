"""What an amplifier's sheet and its switch say: S32, S34."""

from __future__ import annotations

import pytest

from engine.outcome import Outcome
from engine.units import v_from_dbu
from tests.scenarios.build import DB, SHARE, WEIGHTED, amplifier, line, solved

SHEETS = {
    "A": ("102 dB(A) re 800 W/8 ohm", 0.80e-3, 100.0),
    "B": ("-72 dBu 20-20k", 0.195e-3, 112.3),
    "C": ("88 dB re 1 W/8 ohm, unweighted", 0.113e-3, 117.0),
}


def quiet_amplifier(noise: str) -> Outcome:
    """S32: 800 W into 8 ohm, with the noise its sheet gives."""
    return solved(
        line(level="0 dBu"), amplifier(rated_power_w=["800 W @ 8 ohm"], gain_db="32 dB", noise=noise)
    )


@pytest.mark.parametrize("name", SHEETS)
def test_s32_noise_of_three_sheets(name):
    """S32: 0.80 mV unweighted, 0.195 mV, 0.113 mV; on one reference (800 W, unweighted) 100.0, 112.3, 117.0 dB."""
    noise, volts, ratio_db = SHEETS[name]
    out = quiet_amplifier(noise).node("amp", "out")
    conversion = WEIGHTED if name == "A" else DB
    assert v_from_dbu(out.noise) == pytest.approx(volts, rel=SHARE)
    assert out.clip - out.noise == pytest.approx(ratio_db, abs=conversion + 0.05)


def test_s32_which_is_quietest():
    """S32: C < B < A; A is 17.1 dB noisier than C."""
    noise = {name: quiet_amplifier(text).node("amp", "out").noise for name, (text, *_) in SHEETS.items()}
    assert noise["C"] < noise["B"] < noise["A"]
    assert noise["A"] - noise["C"] == pytest.approx(17.1, abs=WEIGHTED)


def switched(position: int) -> Outcome:
    """S34: an amplifier of 1000 W into 8 ohm whose switch has 26 dB, 32 dB and 1.4 V, driven with 0.500 V, no load."""
    return solved(
        line(level="0.500 V", crest="3.01 dB"),
        amplifier(
            rated_power_w=["1000 W @ 8 ohm"], range_gains_db=["26 dB", "32 dB"], range_sensitivities_v=["1.4 V"],
            sensitivity_range=float(position),
        ),
    )  # fmt: skip


def test_s34_which_position_the_measured_gain_fits():
    """S34: 0.500 V in, 20.4 V out: 32.21 dB fits the 32 dB position; the label 1.4 V would be 36.11 dB, 3.9 dB more."""
    out_v = [v_from_dbu(switched(position).node("amp", "out").level) for position in range(3)]
    measured = 20.4
    fits = [abs(measured - volts) for volts in out_v]
    assert fits.index(min(fits)) == 1
    assert out_v[1] == pytest.approx(measured, rel=0.03)
    labelled = switched(2)
    gain = labelled.node("amp", "out").level - labelled.node("amp", "in").level
    assert gain == pytest.approx(36.11, abs=DB)
    assert gain - 32.21 == pytest.approx(3.9, abs=DB)


def test_s34_full_output_at_the_gain_measured():
    """S34: at 32.21 dB full output needs 2.19 V, +9.04 dBu."""
    outcome = solved(
        line(level="0.500 V", crest="3.01 dB"),
        amplifier(rated_power_w=["1000 W @ 8 ohm"], gain_db="32.21 dB"),
    )
    assert v_from_dbu(outcome.node("amp", "out").level) == pytest.approx(20.4, rel=SHARE)
    ceiling = outcome.node("amp", "in").ceiling
    assert ceiling == pytest.approx(9.04, abs=DB)
    assert v_from_dbu(ceiling) == pytest.approx(2.19, rel=SHARE)
