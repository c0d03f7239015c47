"""The loaded chain whose values stand published: a source, a stage, two inputs in parallel; by hand, by ngspice, by the engine."""

from __future__ import annotations

import numpy as np
import pytest

from engine.outcome import evaluate
from engine.units import v_from_dbu
from tests.engine.plain_kinds import amplifier, project, source
from tests.judges.netlist import write
from tests.judges.ngspice import measure

INPUT_V, DRIVEN_V, OUTPUT_V, NOISE_V = 0.923077e-3, 82.4176e-3, 1.648352, 0.442201e-3
FREQUENCIES_HZ = (20.0, 1000.0, 20_000.0)


def loaded_chain():
    """1 mV behind 150 ohm; 1.8 kohm in, ×100, 1 nV/√Hz, 600 ohm out; two inputs of 10 kohm, ×20."""
    times_20_db = 26.0 + 0.0206
    one_nv = np.sqrt(1e-18 * 19_980.0)
    return project(
        [
            source("source", emf="1 mV", z="150 ohm"),
            amplifier("first", 1, 40.0, z_in="1800 ohm", z_out="600 ohm", noise=f"{one_nv:.15f} V"),
            amplifier("second", 2, times_20_db, noise="0.000001 nV"),
            amplifier("beside", 2, 0.0, noise="0.000001 nV"),
        ],
        ("source", "first"),
        ("first", "second"),
        ("first", "beside"),
    )


def test_loaded_chain_in_ngspice(tmp_path):
    """ngspice 39, `.ac` and `.noise`: 0.923077 mV, 82.4176 mV, 1.648352 V; noise 0.442201 mV with device impedances
    noiseless and the source's 150 ohm noisy [confirmed]."""
    found = measure(write(loaded_chain().model_dump()), tmp_path, FREQUENCIES_HZ)
    for hertz in FREQUENCIES_HZ:
        assert found.level_v[hertz, ("first", "in", "in")] == pytest.approx(INPUT_V, rel=1e-5)
        assert found.level_v[hertz, ("second", "in", "in")] == pytest.approx(DRIVEN_V, rel=1e-5)
        assert found.level_v[hertz, ("second", "out", "out")] == pytest.approx(OUTPUT_V, rel=1e-5)
    assert found.noise_v["second", "out", "out"] == pytest.approx(NOISE_V, rel=1e-5)


def test_loaded_chain_in_the_engine():
    """The same chain solved by the engine: levels to 1e-5, noise to 1e-4 (ngspice 39) [confirmed]."""
    outcome = evaluate(loaded_chain())
    for place, volts in (
        (("first", "in"), INPUT_V),
        (("first", "out"), DRIVEN_V),
        (("second", "out"), OUTPUT_V),
    ):
        assert v_from_dbu(outcome.node(*place).level) == pytest.approx(volts, rel=1e-5)
    assert outcome.node("first", "out").level == pytest.approx(outcome.node("beside", "in").level, abs=1e-12)
    assert v_from_dbu(outcome.node("second", "out").noise) == pytest.approx(NOISE_V, rel=1e-4)
