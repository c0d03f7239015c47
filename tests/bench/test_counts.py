"""Counting tests beside the benchmarks: what one move of a control costs, whatever the machine."""

from __future__ import annotations

from collections import Counter

import pytest

from engine import outcome as outcomes
from engine.compile import plan as plans
from engine.outcome import evaluate
from engine.project import Project
from tests.bench.venues import path, venue


@pytest.fixture
def calls(monkeypatch) -> Counter[str]:
    """How often each step of compiling and solving was taken."""
    counted: Counter[str] = Counter()
    for module, name in ((plans, "fill_stage"), (plans, "fill_net"), (plans, "lay_out"), (outcomes, "solve")):
        original = getattr(module, name)

        def counting(*args, _name=name, _original=original, **named):
            counted[_name] += 1
            return _original(*args, **named)

        monkeypatch.setattr(module, name, counting)
    return counted


def tick(project: Project, stage: str, control: str, value: float) -> Project:
    """One tick of a slider."""
    before = project.stage[stage]
    return project.with_changes({stage: (before, before.with_control(control, value))})


@pytest.mark.parametrize(
    ("made", "stage"), [(path(), "p2"), (venue(500, 60), "c7.1")], ids=["20 stages", "500 stages"]
)
def test_one_tick_rewrites_one_stage_and_solves_once(made, stage, calls):
    """A slider's tick writes one stage's rows, no net's, lays nothing out anew, and solves once (DESIGN 11)."""
    first = evaluate(made)
    calls.clear()
    evaluate(tick(made, stage, "trim_db", -3.0), first)
    assert calls == {"fill_stage": 1, "solve": 1}


def test_a_changed_impedance_rewrites_its_nets(calls):
    """A figure that loads its neighbours writes the nets at both its ends, and no others."""
    first = evaluate(path())
    before = first.project.stage["p3"]
    calls.clear()
    loading = before.with_fields(z_in_ohm={"text": "600 ohm"}, z_out_ohm={"text": "600 ohm"})
    evaluate(first.project.with_changes({"p3": (before, loading)}), first)
    # p3 is a bus: one net into it, one out of it, and the one of its tap.
    assert calls == {"fill_stage": 1, "fill_net": 3, "solve": 1}


def test_a_new_link_compiles_anew(calls):
    """Only a changed shape is laid out again."""
    first = evaluate(path())
    calls.clear()
    link = first.project.links[0]
    evaluate(first.project.with_changes({link.id: (link, None)}), first)
    assert calls["lay_out"] == 1
    assert calls["solve"] == 1


def test_moving_a_block_on_the_grid_solves_once_and_compiles_nothing(calls):
    """A row on the grid is no number: nothing is laid out anew."""
    first = evaluate(path())
    before = first.project.stage["p3"]
    calls.clear()
    evaluate(first.project.with_changes({"p3": (before, before.with_fields(row=4))}), first)
    assert calls["lay_out"] == 0
    assert calls["solve"] <= 1
