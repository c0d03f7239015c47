"""Loudspeakers, their ratings, and what people hear: S22, S23, S33, S40."""

from __future__ import annotations

import pytest

from engine.exposure import CRITERIA, permitted_level_dba, permitted_s
from engine.outcome import Outcome, evaluate
from tests.scenarios.build import DB, SHARE, TENTH, amplifier, line, loudspeaker, project, seat, solved

CRITERION = {criterion.name: criterion for criterion in CRITERIA}
#: Pink noise reads this much less A-weighted.
A_ON_PINK_DB = -2.858


def at_the_mix(crest: str, level: str, rating: str = "500 W @ 8 ohm", **box: str) -> Outcome:
    """S22: a box of 98 dB 1 W/1 m, an amplifier that clips at 1 V in, 20 m."""
    return solved(
        line(level=level, crest=crest), amplifier(rated_power_w=[rating], sensitivity_v="1 V"),
        loudspeaker(sensitivity_spl="98 dB 1 W/1 m", **box), seat(), distance="20 m",
    )  # fmt: skip


def test_s22_the_printed_number():
    """S22: 98 + 10 log 2000 = 131.0 dB is what 2000 W would make at 1 m."""
    outcome = at_the_mix("3.01 dB", "1 V", rating="2000 W @ 8 ohm")
    assert outcome.node("box", "out").clip == pytest.approx(131.0, abs=DB)


def test_s22_what_the_amplifier_can_make():
    """S22: 500 W sine: 124.99 dB at 1 m, 98.97 at 20 m, 101.98 peak."""
    outcome = at_the_mix("3.01 dB", "1 V")
    assert outcome.node("box", "out").level == pytest.approx(124.99, abs=DB)
    assert outcome.seats[0].level == pytest.approx(98.97, abs=DB)
    assert outcome.seats[0].peak + 3.0103 == pytest.approx(101.98, abs=DB)


@pytest.mark.parametrize(
    ("crest", "level", "seat_spl", "watts", "box"),
    [
        ("12 dB", "0.35522 V", 90.0, 63.0, {}),
        ("20 dB", "0.14142 V", 82.0, 10.0, {}),
        ("12 dB", "0.35522 V", 87.0, 63.0, {"compression_db": "3 dB"}),
    ],
)
def test_s22_what_music_makes(crest, level, seat_spl, watts, box):
    """S22: peaks at the amplifier's clip point: 12 dB crest 90.0 dB (63 W), 20 dB crest 82.0 (10 W), 87.0 compressed.

    41 dB between the printed number and the average in the seat, none of it a fault.
    """
    outcome = at_the_mix(crest, level, **box)
    assert outcome.node("amp", "out").peak_margin == pytest.approx(0.0, abs=DB)
    assert outcome.seats[0].level == pytest.approx(seat_spl, abs=TENTH)
    assert outcome.loudspeakers[0].average_w == pytest.approx(watts, rel=SHARE)


def test_s23_the_front_row_and_for_how_long():
    """S23: 98 dB(A) at 20 m are 108.5 at 6 m; NIOSH: 23.8 min at the desk, 2.1 min in front; hold 100 in front: mix at 89.5."""
    stages = [
        line(level="1 V"), amplifier(gain_db="9.031 dB"),
        loudspeaker(sensitivity_spl=f"{98.0 + 26.0206 - A_ON_PINK_DB:.3f} dB 1 W/1 m"), seat("mix"), seat("front"),
    ]  # fmt: skip
    links = ["source > amp", "amp > box", "box > mix", "box > front"]
    outcome = evaluate(project(stages, links, {"box > mix": "20 m", "box > front": "6 m"}))
    level = {seen.stage: seen.level_a for seen in outcome.seats}
    assert level["mix"] == pytest.approx(98.0, abs=DB)
    assert level["front"] == pytest.approx(108.46, abs=DB)
    niosh = CRITERION["NIOSH 1998"]
    assert permitted_s(level["mix"], niosh) / 60.0 == pytest.approx(23.8, rel=SHARE)
    assert permitted_s(level["front"], niosh) / 60.0 == pytest.approx(2.1, rel=SHARE)
    nearer = level["front"] - level["mix"]
    assert permitted_level_dba(900.0, CRITERION["WHO venues 2022"]) - nearer == pytest.approx(89.5, abs=TENTH)
    assert permitted_level_dba(1800.0, CRITERION["DIN 15905-5"]) - nearer == pytest.approx(88.5, abs=TENTH)


def test_s33_one_watt_against_2_83_volts():
    """S33: 97 dB 1 W/1 m into 4 ohm is 100.01 dB at 2.83 V: 1.01 dB louder than 99 dB 2.83 V/1 m on the same amplifier."""
    stages = [line(level="2.8284 V"), *(loudspeaker(name, sensitivity_spl=text, z_ohm="4 ohm") for name, text in
              (("per watt", "97 dB 1 W/1 m"), ("per volt", "99 dB 2.83 V/1 m")))]  # fmt: skip
    outcome = evaluate(project(stages, ["source > per watt", "source > per volt"]))
    per_watt, per_volt = (outcome.node(name, "out").level for name in ("per watt", "per volt"))
    assert per_watt == pytest.approx(100.01, abs=DB)
    assert per_watt - per_volt == pytest.approx(1.01, abs=DB)


@pytest.mark.parametrize(
    ("crest", "level", "watts", "left_db"),
    [("12 dB", "0.35522 V", 126.0, 3.8), ("6 dB", "0.70877 V", 502.0, -2.2)],
)
def test_s40_no_limiter_and_6_db_into_clip(crest, level, watts, left_db):
    """S40: 1000 W amplifier, 300 W AES driver: crest 12 to 6 dB takes it from 126 to 502 W, 3.8 dB under to 2.2 dB over."""
    outcome = solved(
        line(level=level, crest=crest), amplifier(rated_power_w=["1000 W @ 8 ohm"], sensitivity_v="1 V"),
        loudspeaker(continuous_w="300 W"),
    )  # fmt: skip
    assert outcome.node("amp", "out").peak_margin == pytest.approx(0.0, abs=DB)  # the peaks do not grow
    assert outcome.loudspeakers[0].average_w == pytest.approx(watts, rel=SHARE)
    assert outcome.loudspeakers[0].continuous_margin_db == pytest.approx(left_db, abs=TENTH)
