"""Limiters are true for one gain of the amplifier: S07, S09, S44."""

from __future__ import annotations

import pytest

from engine.limits import LimiterThreshold
from engine.outcome import Outcome
from tests.scenarios.build import DB, SHARE, amplifier, bare, line, loudspeaker, solved


def limited(
    amp_gain: str, *, rms_dbu: float | None = None, peak_dbu: float | None = None, full_scale: str = "+24 dBu",
    full_scale_dbu: float = 24.0, crest: str = "3.01 dB", level: str = "+54 dBu", driver: str = "400 W", **amp: object,
) -> Outcome:  # fmt: skip
    """A programme that would go far over, a processor that limits in dBu at its output, an amplifier, a driver of 8 ohm."""
    rms = 0.0 if rms_dbu is None else rms_dbu - full_scale_dbu
    peak = 0.0 if peak_dbu is None else peak_dbu - full_scale_dbu
    ranges = {"range_gains_db": [amp_gain]}
    return solved(
        line("programme", level, crest=crest, most="+60 dBu"),
        bare(
            "processor", "processor", input_full_scale_v="+60 dBu", output_full_scale_v=full_scale,
            input_trim_db=24.0, limiter_1=1.0, limit_rms_1_dbfs=rms, limit_peak_1_dbfs=peak,
        ),
        amplifier(**{"rated_power_w": ["5000 W @ 8 ohm"], **ranges, **amp}),
        loudspeaker("driver", continuous_w=driver, peak_w=None),
    )  # fmt: skip


def wanted(outcome: Outcome) -> dict[str, LimiterThreshold]:
    """What the tool says each limiter of the processor should stand at, by its sort."""
    return {each.sort: each for each in outcome.limiters}


@pytest.mark.parametrize(("gain", "threshold_dbu"), [("32 dB", 5.27), ("26 dB", 11.27)])
def test_s07_the_tool_names_the_threshold(gain, threshold_dbu):
    """S07: 56.57 V at the driver; +5.27 dBu at 32 dB, +11.27 dBu at 26 dB, said in the processor's dBFS (0 dBFS = +24)."""
    rms = wanted(limited(gain, rms_dbu=0.0))["rms"]
    assert rms.load_v == pytest.approx(56.57, rel=SHARE)
    assert rms.unit == "dBFS"
    assert rms.wanted + 24.0 == pytest.approx(threshold_dbu, abs=DB)
    assert rms.over_db == pytest.approx(-threshold_dbu, abs=DB)


def test_s09_the_tool_names_both_thresholds():
    """S09: rms −16.77 dBFS and peak −13.76 dBFS (sine convention) for 44.72 V rms and 89.44 V peak at the driver."""
    found = wanted(limited("32 dB", rms_dbu=0.0, full_scale="+20 dBu", full_scale_dbu=20.0, driver="250 W"))
    assert found["rms"].wanted == pytest.approx(-16.77, abs=DB)
    assert found["peak"].wanted == pytest.approx(-13.76, abs=DB)
    assert found["rms"].load_v == pytest.approx(44.72, rel=SHARE)
    assert found["peak"].load_v == pytest.approx(89.44, rel=SHARE)


def test_s44_the_tool_names_the_right_threshold_and_what_it_depends_on():
    """S44: +15.27 dBu with the knob at −10, +5.27 with it open; the knob is among what the threshold depends on."""
    given = {"rated_power_w": ["1000 W @ 8 ohm"]}
    held = wanted(limited("32 dB", rms_dbu=15.27, attenuator_db=-10.0, **given))["rms"]
    opened = wanted(limited("32 dB", rms_dbu=15.27, **given))["rms"]
    assert held.wanted + 24.0 == pytest.approx(15.27, abs=DB)
    assert opened.wanted + 24.0 == pytest.approx(5.27, abs=DB)
    assert opened.over_db == pytest.approx(10.0, abs=DB)
    assert ("amp", "Attenuator") in {(each.stage, each.control) for each in opened.depends_on}


@pytest.mark.parametrize(("gain", "threshold_dbu"), [("32 dB", 5.27), ("26 dB", 11.27)])
def test_s07_the_right_threshold_for_each_gain(gain, threshold_dbu):
    """S07: 400 W into 8 ohm are 56.57 V: +5.27 dBu at 32 dB, +11.27 dBu at 26 dB."""
    (driver,) = limited(gain, rms_dbu=threshold_dbu).loudspeakers
    assert driver.volts == pytest.approx(56.57, rel=SHARE)
    assert driver.average_w == pytest.approx(400.0, rel=SHARE)
    assert driver.continuous_margin_db == pytest.approx(0.0, abs=DB)


@pytest.mark.parametrize(
    ("gain", "threshold_dbu", "volts", "watts"),
    [("32 dB", 11.27, 112.9, 1592.0), ("26 dB", 5.27, 28.4, 100.0)],
)
def test_s07_the_other_amplifiers_threshold(gain, threshold_dbu, volts, watts):
    """S07: the 26 dB threshold on a 32 dB amplifier lets 112.9 V, 1592 W through; the other way 28.4 V, 100 W."""
    (driver,) = limited(gain, rms_dbu=threshold_dbu).loudspeakers
    assert driver.volts == pytest.approx(volts, rel=SHARE)
    assert driver.average_w == pytest.approx(watts, rel=SHARE)


def test_s09_rms_and_peak_thresholds():
    """S09: 250 W AES, 1000 W peak, 8 ohm, 32 dB, 0 dBFS = +20 dBu: rms +3.23 dBu = −16.77 dBFS; peak +6.24 = −13.76 dBFS.

    The amplifier of 1000 W into 4 ohm clips at 89.44 V peak, where the driver's own peak limit lies.
    """
    given = {"rated_power_w": ["1000 W @ 4 ohm"], "min_load_ohm": "4 ohm"}
    outcome = limited(
        "32 dB",
        rms_dbu=3.23,
        peak_dbu=6.24,
        full_scale="+20 dBu",
        full_scale_dbu=20.0,
        crest="9 dB",
        driver="250 W",
        **given,
    )
    processor = outcome.project.stage["processor"]
    assert processor.limit_rms_1_dbfs.value == pytest.approx(-16.77, abs=1e-9)
    assert processor.limit_peak_1_dbfs.value == pytest.approx(-13.76, abs=1e-9)
    (driver,) = outcome.loudspeakers
    assert driver.volts == pytest.approx(44.72, rel=SHARE)
    assert driver.continuous_margin_db == pytest.approx(0.0, abs=DB)
    assert driver.peak_w == pytest.approx(1000.0, rel=SHARE)
    assert driver.peak_margin_db == pytest.approx(0.0, abs=DB)
    assert outcome.node("amp", "out").peak_margin == pytest.approx(0.0, abs=DB)


def test_s44_knobs_opened_after_the_limiters_were_set():
    """S44: set at 22 dB, +15.27 dBu holds 400 W; opened to 32 dB it asks for 179 V, the amplifier clips at 89.4 V
    (+9.25 dBu in), 4.0 dB over the rating; the right threshold is +5.27 dBu."""
    given = {"rated_power_w": ["1000 W @ 8 ohm"]}
    as_set = limited("32 dB", rms_dbu=15.27, attenuator_db=-10.0, **given)
    assert as_set.loudspeakers[0].average_w == pytest.approx(400.0, rel=SHARE)
    opened = limited("32 dB", rms_dbu=15.27, **given)
    assert opened.loudspeakers[0].volts == pytest.approx(179.0, rel=SHARE)
    assert opened.narrowest.stage == "amp"
    assert opened.narrowest.margin_db == pytest.approx(9.25 - 15.27, abs=DB)
    assert opened.node("amp", "in").ceiling == pytest.approx(9.25, abs=DB)
    over = opened.node("amp", "out").clip - as_set.node("amp", "out").level
    assert over == pytest.approx(3.98, abs=DB)
    assert limited("32 dB", rms_dbu=5.27, **given).loudspeakers[0].average_w == pytest.approx(
        400.0, rel=SHARE
    )
