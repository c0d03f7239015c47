"""Members alike that share no node: each hears its own line only."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from engine.stages import template


def noise_behind_a_cable(count: int) -> float | None:
    """Noise [dBu] at the far end of one of `count` microphone cables alike, each into its own preamplifier."""
    stages = (
        template("microphone", "mic", column=0, count=count),
        template("line_cable", "cable", column=1, count=count),
        template("preamplifier", "pre", column=2, count=count),
    )
    links = (Link(id="a", source="mic", target="cable"), Link(id="b", source="cable", target="pre"))
    return evaluate(Project(stages=stages, links=links)).node("cable", "out").noise


def test_four_cables_alike_are_as_quiet_as_one():
    """Arithmetic only: nothing joins them, so nothing of one is heard in another."""
    assert noise_behind_a_cable(4) == pytest.approx(noise_behind_a_cable(1), abs=1e-9)
