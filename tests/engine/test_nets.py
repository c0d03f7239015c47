"""Passive stages fed by several outputs: in whatever order they stand, or refused where one would hear itself."""

from __future__ import annotations

import pytest

from engine.compile.wire import PassiveLoopError
from engine.figures import Figure
from engine.outcome import evaluate
from engine.stages import Stage, template
from engine.units import v_from_dbu
from tests.engine.plain_kinds import PlainSplitter, amplifier, project, source


def splitter(column: int) -> Stage:
    return PlainSplitter(
        id="x", name="x", column=column, leg_ohm=Figure(text="100 ohm"), across_ohm=Figure(text="1000 M")
    )


def combiner(column: int) -> Stage:
    return template("combiner", "c", column=column, leg_ohm=Figure(text="1 k"))


def test_an_input_ahead_of_a_later_driver_of_its_net():
    """An input on one leg of a split whose other leg a second output feeds through a combiner: by superposition.

    By hand: 1 V behind 150 ohm; 100 ohm and 1 kohm lead to a node that 1 kohm from a silent output holds down, unloaded.
    """
    stages = [
        source("s", z="150 ohm"), splitter(1), amplifier("a", 2, z_in="1000 M", noise="0.01 nV"),
        source("t", emf="0.001 uV", z="1 uohm"), amplifier("b", 1, z_in="1000 M", noise="0.01 nV"), combiner(3),
    ]  # fmt: skip
    outcome = evaluate(project(stages, ("s", "x"), ("x.a", "a"), ("t", "b"), ("x.b", "c"), ("b", "c")))
    total = 150.0 + 100.0 + 1000.0 + 1000.0
    assert v_from_dbu(outcome.node("a", "in").level) == pytest.approx((total - 150.0) / total, rel=1e-5)
    assert v_from_dbu(outcome.node("c", "out").level) == pytest.approx(1000.0 / total, rel=1e-5)


def test_an_output_that_leads_back_to_its_own_input_is_refused():
    """A stage fed by one leg of a split and combined with the other leg would hear itself: refused in words that help."""
    stages = [source("s"), splitter(1), amplifier("a", 2), combiner(3)]
    with pytest.raises(PassiveLoopError, match="put an active stage between"):
        evaluate(project(stages, ("s", "x"), ("x.a", "a"), ("x.b", "c"), ("a", "c")))


def test_a_ring_of_passive_stages_is_refused():
    """Both legs of a split into one combiner."""
    stages = [source("s"), splitter(1), combiner(3)]
    with pytest.raises(PassiveLoopError, match="ring"):
        evaluate(project(stages, ("s", "x"), ("x.a", "c"), ("x.b", "c")))
