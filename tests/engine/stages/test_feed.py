"""Feeds: where a send ends."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from tests.engine.stages.alone import NO_LOAD, line, make, row, solved


def test_what_arrives_by_one_leg():
    """S04: push-pull at +4 dBu wired one leg to an unbalanced input: −2.02 dBu; peaks at 18 dBu are 9.7 dB over 2 V."""
    source = line("+4 dBu", max_output_v="+24 dBu", form="push-pull")
    feed = make("feed", max_input_v="2 V", z_in_ohm=NO_LOAD, ein_v=None).with_fields(column=1)
    link = Link(id="l", source="source", target="feed", wiring="one leg")
    node = evaluate(Project(stages=(source, feed), links=(link,))).node("feed", "in")
    assert node.level == pytest.approx(-2.02, abs=0.005)
    assert 24.0 - 6.02 - node.clip == pytest.approx(9.74, abs=0.01)  # its clip point is +8.24 dBu


def test_its_own_noise_counts_at_its_input_section():
    """EIN without its source's part: −85 dBu with 600 ohm is all its own."""
    out = solved(line("-10 dBV"), make("feed", ein_v="-85 dBu, 600 ohm, unweighted", z_in_ohm=NO_LOAD))
    assert out.sections("feed")[0].noise_out == pytest.approx(-85.0, abs=0.01)


def test_a_digital_feed_clips_at_full_scale():
    node = solved(make("digital_source", level_dbfs="-18 dBFS"), make("feed", signal="digital")).node(
        "feed", "in"
    )
    assert (node.clip, node.headroom) == pytest.approx((0.0, 18.0), abs=1e-9)


def test_nominal_above_maximum_is_refused():
    stage = make("feed", nominal_v="+20 dBu", max_input_v="2 V")
    assert "nominal lies under maximum" in next(stage.check(stage.values(), row(stage).axis()))
