"""Compressors and limiters on one of several ways that meet again: their gain is counted in every way it takes part in."""

from __future__ import annotations

import numpy as np
import pytest

from engine.budget import contributions
from engine.outcome import Outcome, evaluate
from engine.project import Project
from engine.solve import NOISE, PROGRAMME
from engine.stages import Stage
from engine.units import v2_from_dbu
from tests.engine.plain_kinds import amplifier, project, source
from tests.scenarios.build import bare

QUIET = "0.001 nV"


def squeezed(count: int = 1, **settings: object) -> Project:
    """A source at 0 dBu, a noisy amplifier, then one way direct and one (or several alike) through dynamics, into a sum."""
    stages: list[Stage] = [
        source("s", emf="0.7745967 V", z="1 uohm"),
        amplifier("a", 1, 0.0, noise="100 uV", z_in="1000 M"),
        bare("dynamics", "d", noise=None, max_v="+60 dBu", count=count, **settings).with_fields(column=2),
        amplifier("m", 3, 0.0, noise=QUIET, z_in="1000 M"),
    ]
    return project(stages, ("s", "a"), ("a", "d"), ("a", "m"), ("d", "m"))


def total(outcome: Outcome, lane: int) -> float:
    return float(outcome.solution.flat[outcome.plan.output_row("m"), lane, 0])


@pytest.mark.parametrize(
    ("settings", "gain_db"),
    [
        ({"mode": "compressor", "threshold_dbu": -20.0, "ratio": 4.0}, -15.0),
        ({"mode": "compressor", "threshold_dbu": -20.0, "ratio": 2.0, "make_up_db": 6.0}, -4.0),
        ({"mode": "limiter", "detector": "rms", "threshold_dbu": -12.0}, -12.0),
        ({"mode": "compressor", "threshold_dbu": 10.0}, 0.0),
        ({"mode": "compressor", "threshold_dbu": -20.0, "inserted": 0.0}, 0.0),
    ],
)
def test_one_way_squeezed(settings, gain_db):
    """What is common to both ways adds as voltage, each with its own gain: (1 + g)²; so does the programme."""
    outcome = evaluate(squeezed(**settings))
    g = 10.0 ** (gain_db / 20.0)
    assert total(outcome, PROGRAMME) == pytest.approx(v2_from_dbu(0.0) * (1.0 + g) ** 2, rel=1e-6)
    assert total(outcome, NOISE) == pytest.approx(1e-8 * (1.0 + g) ** 2, rel=1e-6)


@pytest.mark.parametrize("count", [2, 5])
def test_several_alike_squeezed(count):
    """N compressors alike beside a direct way: (1 + N g)²."""
    outcome = evaluate(squeezed(count, mode="compressor", threshold_dbu=-20.0, ratio=4.0))
    g = 10.0 ** (-15.0 / 20.0)
    assert total(outcome, PROGRAMME) == pytest.approx(v2_from_dbu(0.0) * (1.0 + count * g) ** 2, rel=1e-6)
    assert total(outcome, NOISE) == pytest.approx(1e-8 * (1.0 + count * g) ** 2, rel=1e-6)


@pytest.mark.parametrize("ratio", [2.0, 8.0])
def test_the_budget_adds_up_behind_dynamics(ratio):
    """The sum of all origins' own noise is the noise, with the gain the compressor took."""
    outcome = evaluate(squeezed(mode="compressor", threshold_dbu=-20.0, ratio=ratio))
    row = outcome.plan.output_row("m")
    found = contributions(outcome.plan.graph, outcome.plan.rows, outcome.solution, row)
    whole = sum((each.power for each in found), np.zeros(outcome.plan.axis.size))
    np.testing.assert_allclose(whole[:-1], outcome.solution.spectra[row, NOISE, 0, :-1], rtol=1e-9)


@pytest.mark.parametrize("rise_db", [10.0, 20.0])
def test_ten_db_more_through_four_to_one(rise_db):
    """Issue: raising the source 10 dB through 4 : 1 above its threshold raises its output 2.5 dB, lowers headroom by as
    much, and leaves the noise ahead of it multiplied by the new gain, 7.5 dB less."""

    def at(level_dbu: float) -> Outcome:
        volts = 0.7745967 * 10.0 ** (level_dbu / 20.0)
        chain = squeezed(mode="compressor", threshold_dbu=-10.0, ratio=4.0)
        first = chain.stage["s"]
        return evaluate(
            chain.with_changes({"s": (first, first.with_fields(emf_v={"text": f"{volts:.9f} V"}))})
        )

    before, after = at(0.0).node("d", "out"), at(rise_db).node("d", "out")
    assert after.level - before.level == pytest.approx(rise_db / 4.0, abs=1e-6)
    assert after.headroom - before.headroom == pytest.approx(-rise_db / 4.0, abs=1e-6)
    assert after.noise - before.noise == pytest.approx(-0.75 * rise_db, abs=1e-6)
