"""Limiter thresholds against hand-worked figures, and the gain they are tied to."""

from __future__ import annotations

import pytest

from engine.limits import limiter_thresholds
from engine.outcome import Outcome, evaluate
from tests.scenarios.build import DB, amplifier, bare, line, loudspeaker, solved


def system(
    amp_gain: str = "32 dB",
    full_scale: str = "+20 dBu",
    power: str = "250 W",
    peak: str | None = "1000 W",
    **controls: float,
) -> Outcome:
    return solved(
        line("programme", "+4 dBu"),
        bare("processor", "processor", input_full_scale_v="+24 dBu", output_full_scale_v=full_scale, **{"limiter_1": 1.0, **controls}),
        amplifier(rated_power_w=["1000 W @ 4 ohm"], range_gains_db=[amp_gain, "26 dB"], attenuator_db=0.0),
        loudspeaker("driver", continuous_w=power, peak_w=peak),
    )  # fmt: skip


def by_sort(outcome: Outcome):
    return {each.sort: each for each in outcome.limiters}


def test_s09_thresholds_in_the_processors_own_unit():
    """S09: 250 W AES, 1000 W peak, 8 ohm, 32 dB, 0 dBFS = +20 dBu: rms −16.77 dBFS, peak −13.76 dBFS (sine-scaled)."""
    found = by_sort(system())
    assert found["rms"].unit == "dBFS"
    assert found["rms"].wanted == pytest.approx(-16.77, abs=DB)
    assert found["peak"].wanted == pytest.approx(-13.76, abs=DB)
    assert found["rms"].load_v == pytest.approx(44.72, rel=0.001)
    assert found["peak"].load_v == pytest.approx(89.44, rel=0.001)


def test_the_peak_rating_is_four_times_the_continuous_one_where_it_is_not_given():
    """AES2-type rating noise has 6 dB of crest: peak power is four times continuous (common practice, no source)."""
    found = by_sort(system(peak=None))
    assert found["peak"].load_w == pytest.approx(1000.0)


def test_the_threshold_moves_with_every_gain_behind_it():
    """S07, S44: 6 dB less amplifier gain, 6 dB more threshold; an output trim of −4 dB, 4 dB more."""
    there = by_sort(system())["rms"].wanted
    stage = system().project.stage["amp"]
    moved = evaluate(
        system().project.with_changes({"amp": (stage, stage.with_control("sensitivity_range", 1.0))})
    )
    assert by_sort(moved)["rms"].wanted == pytest.approx(there + 6.0, abs=1e-6)
    trimmed = by_sort(system(trim_1_db=-4.0))["rms"].wanted
    assert trimmed == pytest.approx(there + 4.0, abs=1e-6)


def test_a_limiter_lists_the_controls_it_depends_on():
    names = {(d.stage, d.control) for d in by_sort(system())["rms"].depends_on}
    assert ("amp", "Attenuator") in names
    assert ("processor", "Output 1 trim") in names
    assert not any("rms limit" in control or "peak limit" in control for _, control in names)


def test_a_limiter_too_high_is_a_finding_and_the_wanted_setting_clears_it():
    high = system(limit_rms_1_dbfs=-10.0, limit_peak_1_dbfs=-13.8)
    found = [f for f in high.findings if f.code == "limiter-too-high"]
    assert len(found) == 1
    assert "6.8 dB" in found[0].message
    assert "−16.8 dBFS" in found[0].mend
    right = system(limit_rms_1_dbfs=-16.8, limit_peak_1_dbfs=-13.8)
    assert not [f for f in right.findings if f.code == "limiter-too-high"]


def test_a_gain_changed_after_the_limiter_was_set_marks_it_to_be_reset():
    """S44: thresholds made with the knob at −10 dB; opened, they are 10 dB too high."""
    outcome = system(limit_rms_1_dbfs=-16.8, limit_peak_1_dbfs=-13.8)
    made = by_sort(outcome)["rms"].gain_db
    stage = outcome.project.stage["processor"]
    noted = stage.with_fields(made_for={"limit_rms_1_dbfs": made - 10.0})
    changed = evaluate(outcome.project.with_changes({"processor": (stage, noted)}))
    stale = [f for f in changed.findings if f.code == "limiter-to-be-reset"]
    assert len(stale) == 1
    assert "10.0 dB more gain" in stale[0].message
    same = evaluate(
        outcome.project.with_changes(
            {"processor": (stage, stage.with_fields(made_for={"limit_rms_1_dbfs": made}))}
        )
    )
    assert not [f for f in same.findings if f.code == "limiter-to-be-reset"]


def test_no_limiter_ahead_of_a_loudspeaker_that_its_amplifier_can_overdrive():
    outcome = system(limiter_1=0.0)
    assert all(each.present is None for each in limiter_thresholds(outcome.plan))
    assert [f.stage for f in outcome.findings if f.code == "no-limiter"] == ["driver"]
