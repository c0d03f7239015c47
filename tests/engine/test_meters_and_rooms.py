"""Meters, exposure and acoustic gain as the project gives them."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Header
from tests.scenarios.build import DB, amplifier, bare, line, loudspeaker, seat, solved


@pytest.mark.parametrize(
    ("sort", "programme"),
    # VU 1.05 dB under rms (own: rectified Gaussian against a sine); quasi-peak 2 dB under the peak (IEC 60268-10, from memory).
    [("VU", -1.05), ("quasi-peak", 12.0 - 3.01 - 2.0), ("sample peak", 12.0 - 3.01)],
)
def test_what_a_meter_shows_for_tone_and_for_programme(sort, programme):
    outcome = solved(
        line("programme", "+4 dBu", crest="12 dB"),
        bare("mix_bus", "bus", meter_sort=sort, meter_zero_v="+4 dBu"),
    )
    (meter,) = outcome.meters
    assert (meter.stage, meter.sort, meter.unit) == ("bus", sort, "dBu")
    assert meter.tone == pytest.approx(0.0, abs=DB)
    assert meter.programme == pytest.approx(programme, abs=DB)


def test_a_bus_without_a_meter_has_none():
    assert solved(line(), bare("mix_bus", "bus", meter_sort="none")).meters == ()


def test_s38_margins_from_a_seats_own_figures():
    """S38: talker 12 m, microphone to box 8 m, box 9 m, talker to microphone 0.3 m: 11.0, 5.0, 2.0 dB."""
    for count, margin in (("1", 11.04), ("4", 5.02), ("8", 2.01)):
        outcome = solved(
            line(), amplifier(gain_db="x20"), loudspeaker(),
            seat(
                talker_m="12 m", microphone_loudspeaker_m="8 m", talker_microphone_m="0.3 m", equivalent_m="2.4 m",
                open_microphones=count,
            ),
            distance="9 m",
        )  # fmt: skip
        found = outcome.seats[0].acoustic_gain
        assert found.needed_db == pytest.approx(13.98, abs=DB)
        assert found.margin_db == pytest.approx(margin, abs=DB)
    assert (
        solved(line(), amplifier(gain_db="x20"), loudspeaker(), seat(), distance="9 m").seats[0].acoustic_gain
        is None
    )


def test_s23_permitted_time_at_the_loudest_seat():
    """S23: at 98 dB(A) NIOSH (85 dB(A), 8 h, 3 dB) permits 23.8 min."""
    outcome = solved(line(), amplifier(gain_db="x20"), loudspeaker(), seat(), distance="9 m")
    level_a = outcome.loudest.level_a
    assert outcome.loudest.permitted_s == pytest.approx(8 * 3600 / 2 ** ((level_a - 85.0) / 3.0), rel=1e-6)
    own = outcome.project.header.model_copy(update={"exposure": "own"})
    changed = evaluate(outcome.project.with_changes({"project": (outcome.project.header, own)}), outcome)
    assert changed.loudest.permitted_s == pytest.approx(1800.0 / 2 ** ((level_a - 99.0) / 3.0), rel=1e-6)


def test_every_criterion_can_be_picked():
    for name in ("NIOSH 1998", "OSHA 1910.95", "WHO venues 2022", "DIN 15905-5"):
        assert Header(exposure=name).criterion.name == name
