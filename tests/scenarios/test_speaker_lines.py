"""Lines to loudspeakers: S18, S19, S21, S46."""

from __future__ import annotations

import numpy as np
import pytest

from engine.outcome import Outcome, evaluate
from engine.stages import Stage
from tests.scenarios.build import DB, SHARE, TENTH, amplifier, bare, line, loudspeaker, project, seat, solved


def tapped(
    groups: list[tuple[int, int]], line_v: str = "70.7 V", marked: str | None = None, **fields: object
) -> Stage:
    """A line of groups (loudspeakers, place of the tap), without loss in cable or transformer."""
    given: dict[str, object] = {"groups": len(groups), "line_voltage_v": line_v, "marked_voltage_v": marked}
    given |= {
        "taps_w": ["30 W", "15 W", "10 W", "7.5 W", "5 W"],
        "loss_db": "0 dB",
        "length_m": "1 mm",
        "area_mm2": "16 mm²",
    }
    for n, (count, tap) in enumerate(groups, start=1):
        given |= {f"count_{n}": str(count), f"tap_{n}": float(tap)}
    return bare("constant_voltage_line", "line", **{**given, **fields})


@pytest.mark.parametrize(
    ("groups", "watts", "percent", "ohm"),
    [
        ([(12, 2), (8, 1)], 240.0, 96.0, 20.83),
        ([(12, 2), (8, 1), (6, 2)], 300.0, 120.0, 16.66),
        ([(12, 4), (8, 3), (6, 4)], 150.0, 60.0, 33.3),
    ],
    ids=["now", "six more", "one tap down"],
)
def test_s18_six_more_ceiling_loudspeakers(groups, watts, percent, ohm):
    """S18: 240 W, 96 %, 20.83 ohm now; 300 W, 120 %, 16.66 ohm with six more; 150 W, 60 % with all taps one down."""
    stage = tapped(groups)
    values = stage.values()
    assert stage.total_w(values) == pytest.approx(watts, rel=SHARE)
    assert stage.total_w(values) / 250.0 * 100.0 == pytest.approx(percent, rel=SHARE)
    assert stage.meter_ohm(values) == pytest.approx(ohm, rel=SHARE)


def line_findings(groups: list[tuple[int, int]]) -> set[str]:
    """What the tool notices on the line of an amplifier of 250 W at 70.7 V."""
    outcome = solved(
        line(level="0 dBu"),
        amplifier(rated_power_w=["250 W @ 20 ohm"], gain_db="32 dB", min_load_ohm="20 ohm"),
        tapped(groups),
    )
    return {finding.code for finding in outcome.findings if finding.stage in ("amp", "line")}


def test_s18_the_tool_says_no():
    """S18: the amplifier's least load is 19.99 ohm: 16.66 ohm is below it, and the finding says so; 33.3 ohm is not."""
    before, after = line_findings([(12, 4), (8, 3), (6, 4)]), line_findings([(12, 2), (8, 1), (6, 2)])
    assert after - before


@pytest.mark.parametrize(
    ("line_v", "marked", "watts"),
    [("70.7 V", "100 V", 15.0), ("100 V", "70.7 V", 60.0), ("70.7 V", None, 30.0)],
)
def test_s19_taps_marked_for_another_line(line_v, marked, watts):
    """S19: a 30 W tap for 100 V takes 15.0 W on 70.7 V; one for 70.7 V takes 60.0 W on 100 V."""
    stage = tapped([(1, 0)], line_v, marked)
    assert stage.drawn_w(stage.values(), 1) == pytest.approx(watts, rel=SHARE)
    volts = line_v.split()[0]
    outcome = solved(line(level=f"{volts} V", crest="3.01 dB", most="1000 V"), stage, loudspeaker())
    assert outcome.loudspeakers[0].average_w == pytest.approx(watts, rel=SHARE)
    right = solved(
        line(level=f"{volts} V", crest="3.01 dB", most="1000 V"), tapped([(1, 0)], line_v), loudspeaker()
    )
    change = outcome.node("box", "out").level - right.node("box", "out").level
    assert change == pytest.approx(10.0 * np.log10(watts / 30.0), abs=DB)


def delay_line(area: str, z_ohm: str) -> Outcome:
    """S21: 40 V of an amplifier down 60 m of line."""
    return solved(
        line(level="1 V", crest="3.01 dB"), amplifier(gain_db="x40", rated_power_w=["1000 W @ 4 ohm"]),
        bare("speaker_line", "cable", length_m="60 m", area_mm2=area), loudspeaker(z_ohm=z_ohm),
    )  # fmt: skip


@pytest.mark.parametrize(
    ("area", "z_ohm", "loss_db"),
    [
        ("2.5 mm²", "4 ohm", 1.63),
        ("2.5 mm²", "8 ohm", 0.85),
        ("6 mm²", "4 ohm", 0.72),
        ("6 mm²", "8 ohm", 0.37),
    ],
)
def test_s21_what_the_line_costs(area, z_ohm, loss_db):
    """S21: 60 m: 2.5 mm² costs 1.63 dB into 4 ohm and 0.85 into 8; 6 mm² 0.72 and 0.37 dB."""
    outcome = delay_line(area, z_ohm)
    loss = outcome.node("amp", "out").level - outcome.node("box", "in").level
    assert loss == pytest.approx(loss_db, abs=DB)


def test_s21_what_arrives_and_what_6_mm2_recover():
    """S21: 69 % of the power, 33.2 V of 40; 6 mm² recover 0.91 dB into 4 ohm; damping factor 4.8 and 11.6."""
    thin, thick = delay_line("2.5 mm²", "4 ohm"), delay_line("6 mm²", "4 ohm")
    assert thin.loudspeakers[0].volts == pytest.approx(33.2, rel=SHARE)
    assert thin.loudspeakers[0].average_w / (40.0**2 / 4.0) == pytest.approx(0.69, rel=SHARE)
    assert thick.node("box", "in").level - thin.node("box", "in").level == pytest.approx(0.91, abs=DB)
    for outcome, ohm, damping in ((thin, 0.826, 4.8), (thick, 0.344, 11.6)):
        assert outcome.loudspeakers[0].damping == pytest.approx(damping, rel=SHARE)
        cable = outcome.project.stage["cable"]
        assert cable.resistance_ohm(cable.values()) == pytest.approx(ohm, rel=SHARE)


ZONES = {"A": 83.1, "B": 85.9, "C": 87.2, "D": 84.0}


def zones(taps: list[int]) -> dict[str, float]:
    """S46: four zones on one line, 1 W at the middle tap, each zone's loudspeaker making its level at 1 m."""
    stages = [
        line(level="22.357 V", crest="3.01 dB", most="100 V"),
        tapped([(1, tap) for tap in taps], taps_w=["20 W", "10 W", "5 W"]),
        *(loudspeaker(f"box {name}", sensitivity_spl=f"{level} dB 1 W/1 m") for name, level in ZONES.items()),
        *(seat(name) for name in ZONES),
    ]
    links = ["source > line"]
    links += [f"line.{'out' if n == 1 else f'out_{n}'} > box {name}" for n, name in enumerate(ZONES, start=1)]
    ends = [f"box {name} > {name}" for name in ZONES]
    outcome = evaluate(project(stages, [*links, *ends], dict.fromkeys(ends, "1 m")))
    return {seen.stage: float(seen.level) for seen in outcome.seats}


def test_s46_four_zones_within_a_tolerance():
    """S46: 85 ± 1.5 in four zones: A up one tap 86.1, C down one 84.2; the spread shrinks from 4.1 to 2.1 dB, all pass."""
    before, after = zones([1, 1, 1, 1]), zones([0, 1, 2, 1])
    assert before == pytest.approx(ZONES, abs=DB)
    assert after == pytest.approx({"A": 86.1, "B": 85.9, "C": 84.2, "D": 84.0}, abs=TENTH)
    assert max(before.values()) - min(before.values()) == pytest.approx(4.1, abs=TENTH)
    assert max(after.values()) - min(after.values()) == pytest.approx(2.1, abs=TENTH)
    assert all(abs(level - 85.0) <= 1.5 for level in after.values())
