"""The clip level where branches meet: all sources rise together, and the first branch to clip decides."""

from __future__ import annotations

import pytest

from engine.figures import Figure
from engine.outcome import evaluate
from engine.project import Link, Project
from engine.stages import Stage, template


def chain(key: str, nominal: str, most: str) -> tuple[list[Stage], list[Link]]:
    source = template(
        "line_source",
        key,
        key,
        column=0,
        row=0,
        nominal_v=Figure(text=nominal),
        max_output_v=Figure(text=most),
    )
    return [source], [Link(id=f"{key}-bus", source=key, target="bus")]


def test_a_quiet_branch_that_clips_low_takes_nothing_from_a_loud_one():
    """Arithmetic only: a loud source with 20 dB of headroom and one 40 dB lower with 30 meet in a bus.

    They clip together with the loud one: the bus input reads its level and the clip point 20 dB above it (less what
    the quiet one adds, under 0.01 dB), not the quiet one's clip point, which lies 10 dB below the loud one's level.
    """
    loud, loud_links = chain("loud", "0 dBu", "+20 dBu")
    quiet, quiet_links = chain("quiet", "-40 dBu", "-10 dBu")
    bus = template("mix_bus", "bus", "Bus", column=1, row=0, max_output_v=Figure(text="+60 dBu"))
    outcome = evaluate(Project(stages=(*loud, *quiet, bus), links=(*loud_links, *quiet_links)))
    node = outcome.node("bus", "in")
    assert node.headroom == pytest.approx(20.0, abs=0.01)
    assert node.peak_margin == pytest.approx(outcome.node("loud", "out").peak_margin, abs=0.01)
