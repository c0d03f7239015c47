"""What the tool notices: each finding provoked, and gone when mended."""

from __future__ import annotations

import pytest

from engine.outcome import Outcome, evaluate
from tests.scenarios.build import amplifier, bare, line, loudspeaker, seat, solved, stage


def codes(outcome: Outcome) -> set[str]:
    return {finding.code for finding in outcome.findings}


def one(outcome: Outcome, code: str):
    (found,) = (finding for finding in outcome.findings if finding.code == code)
    return found


def test_an_amplifier_far_too_sensitive_names_its_excess_and_what_it_forces():
    """S01: mixer to 10 V, amplifier full at 1 V: 20.0 dB of excess; the fader low and the hiss before it follow."""
    outcome = solved(
        line("programme", "-10 dBV", most="10 V"),
        bare("mixer_channel", "channel", fader_db=-40.0, noise="-86 dBu unweighted", max_v="10 V"),
        amplifier(sensitivity_v="1.0 V", noise="103 dB unweighted re rated"),
        loudspeaker("horn", sensitivity_spl="98 dB 1 W/1 m"), seat(), distance="3 m",
    )  # fmt: skip
    found = one(outcome, "amplifier-too-sensitive")
    assert found.stage == "amp"
    assert "20.0 dB" in found.message
    assert "fader of channel" in found.message.lower()
    amp = outcome.project.stage["amp"]
    mended = evaluate(outcome.project.with_changes({"amp": (amp, amp.with_control("attenuator_db", -20.0))}))
    assert "amplifier-too-sensitive" not in codes(mended)


def test_a_fader_outside_its_working_range():
    low = solved(line(), bare("mixer_channel", "channel", fader_db=-35.0))
    assert "−35.0 dB at channel" in one(low, "fader-out-of-range").message
    assert "fader-out-of-range" not in codes(solved(line(), bare("mixer_channel", "channel", fader_db=-3.0)))


def test_peaks_over_a_clip_point_are_a_stop_with_the_decibels():
    outcome = solved(
        line("programme", "+20 dBu", crest="12 dB"),
        bare("mixer_channel", "channel", max_v="+22 dBu", nominal_v="+4 dBu"),
    )
    found = one(outcome, "clips")
    assert found.severity == "stop"
    assert "7.0 dB" in found.message  # 20 + 12 − 3.01 − 22


def test_below_minimum_load():
    """Four 8 ohm boxes in parallel are 2 ohm on an amplifier that drives 4."""
    outcome = solved(line(), amplifier(gain_db="x20", min_load_ohm="4 ohm"), loudspeaker(boxes=4))
    found = one(outcome, "below-minimum-load")
    assert found.severity == "stop"
    assert "2.0 Ω" in found.message
    assert "below-minimum-load" not in codes(
        solved(line(), amplifier(gain_db="x20", min_load_ohm="4 ohm"), loudspeaker(boxes=2))
    )


def test_a_boost_spends_headroom_at_its_own_frequency():
    """S25: +10 dB at 80 Hz spends 10 dB there while pink noise rises far less."""
    outcome = solved(
        line(), bare("equaliser", "equaliser", bell_1_hz="80 Hz", bell_1_q="1.4", bell_1_db=10.0)
    )
    found = one(outcome, "boost-spends-headroom")
    assert "80 Hz" in found.message


def test_guesses_are_told_together_where_many_stages_have_them():
    outcome = solved(line(), *(stage("mixer_channel", f"channel {n}") for n in range(5)))
    assert len([f for f in outcome.findings if f.code == "still-a-guess"]) == 1
    few = solved(line(), stage("mixer_channel", "channel"))
    assert {f.stage for f in few.findings if f.code == "still-a-guess"} <= {"source", "channel"}


@pytest.mark.parametrize(("target", "code"), [("80 dB", "seat-off-target"), (None, None)])
def test_seat_off_target(target, code):
    outcome = solved(
        line(), amplifier(gain_db="x20"), loudspeaker(), seat(target_spl_db=target), distance="1 m"
    )
    assert (code in codes(outcome)) if code else "seat-off-target" not in codes(outcome)


def test_findings_come_gravest_first():
    outcome = solved(line("programme", "+20 dBu"), bare("mixer_channel", "channel", fader_db=-35.0))
    order = ["stop", "mend", "note"]
    found = [order.index(f.severity) for f in outcome.findings]
    assert found == sorted(found)
