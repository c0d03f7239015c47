"""Combiners: passive loss, active sum."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from tests.engine.stages.alone import NO_LOAD, end, line, make


def combined(*sources, **fields):
    stage = make("combiner", **fields).with_fields(column=1)
    links = [Link(id=f"l{s.id}", source=s.id, target="combiner") for s in sources]
    links.append(Link(id="out", source="combiner", target="end"))
    return evaluate(Project(stages=(*sources, stage, end().with_fields(column=2)), links=tuple(links)))


def test_two_equal_legs_lose_6_db():
    """Each source through 1 k against the other's 1 k: half. Two unlike programmes: −6.02 + 3.01 dB."""
    one_live = combined(line("0 dBu", "a"), line("-200 dBu", "b"), leg_ohm="1 k")
    assert one_live.node("combiner", "out").level == pytest.approx(-6.02, abs=0.005)
    both = combined(line("0 dBu", "a"), line("0 dBu", "b"), leg_ohm="1 k")
    assert both.node("combiner", "out").level == pytest.approx(-3.01, abs=0.005)


def test_an_active_combiner_keeps_each():
    out = combined(
        line("0 dBu", "a"),
        line("0 dBu", "b"),
        build="active",
        z_in_ohm=NO_LOAD,
        z_out_ohm="1 µohm",
        gain_db="0 dB",
    )
    assert out.node("combiner", "out").level == pytest.approx(3.01, abs=0.005)
