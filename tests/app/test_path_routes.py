"""Links turn at right angles, keep off blocks, and do not lie on each other."""

from __future__ import annotations

from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app import edits
from app.columns import Columns
from app.path_view.layout import Layout
from engine.project import Project
from engine.topology import LinkError
from tests.app.simple_kinds import SIMPLE, chain, simple_kinds


@pytest.fixture(scope="module", autouse=True)
def _kinds():
    with simple_kinds():
        yield


def runs(layout: Layout):
    """Every straight run of every link: the link, from, to."""
    for link in layout.project.links:
        for start, end in pairwise(layout.line(link)):
            yield link, start, end


def off_blocks(layout: Layout) -> bool:
    """Whether every run is level or upright and touches no block but at its ends; fails naming the pair."""
    boxes = {stage.id: layout.box(stage.id) for stage in layout.project.stages}
    for link, (ax, ay), (bx, by) in runs(layout):
        assert ax == pytest.approx(bx) or ay == pytest.approx(by)
        for key, (left, top, width, height) in boxes.items():
            crosses = (
                min(ax, bx) < left + width - 1
                and max(ax, bx) > left + 1
                and min(ay, by) < top + height - 1
                and max(ay, by) > top + 1
            )
            assert not crosses, f"{link.id} runs through {key}"
    return True


STEP = st.tuples(st.integers(0, 3), st.sampled_from(sorted(SIMPLE)), st.integers(0, 99))


def grown(steps: list[tuple[int, str, int]]) -> Project:
    """A project that grew by branches, feeds and links."""
    project = chain("talker", "capsule", "gain", "summing", "divider", "horn", "chair")
    for what, kind, which in steps:
        stages = list(project.stages)
        stage, other = stages[which % len(stages)], stages[(which * 7 + 3) % len(stages)]
        try:
            if what == 0:
                changes = edits.branch_from(project, kind, stage.id)
            elif what == 1:
                changes = edits.lead_into(project, kind, stage.id)
            elif what == 2 and stage.outputs() and other.inputs():
                changes = edits.add_link(
                    project, stage.id, stage.outputs()[-1].name, other.id, other.inputs()[0].name
                )
            else:
                changes = edits.move(project, {stage.id}, which % 3, which % 2)
        except LinkError:
            continue
        project = project.with_changes(changes)
    return project


@given(st.lists(STEP, max_size=30))
def test_links_turn_at_right_angles_and_keep_off_blocks(steps):
    assert off_blocks(Layout(grown(steps), Columns()))


@given(st.lists(STEP, max_size=30))
def test_upright_runs_of_unlike_nets_do_not_lie_on_each_other(steps):
    layout = Layout(grown(steps), Columns())
    upright = [
        (link, ax, *sorted((ay, by))) for link, (ax, ay), (bx, by) in runs(layout) if ax == bx and ay != by
    ]
    for one, x1, top1, bottom1 in upright:
        for two, x2, top2, bottom2 in upright:
            alike = (one.source, one.output) == (two.source, two.output)
            alike = alike or (one.target, one.input) == (two.target, two.input)
            if not alike and x1 == pytest.approx(x2):
                assert bottom1 <= top2 + 1e-6 or bottom2 <= top1 + 1e-6, f"{one.id} lies on {two.id}"


def test_every_port_stands_on_its_blocks_edge():
    layout = Layout(chain("gain", "divider"), Columns())
    left, top, width, height = layout.box("divider")
    seen = [at for _port, is_output, at in layout.ports("divider") if is_output]
    assert all(x == left + width and top < y < top + height for x, y in seen)
    assert seen[0][1] == top + height / 2
    assert len({y for _x, y in seen}) == 3


def test_a_link_past_a_block_in_its_own_row_goes_under_it():
    project = chain("divider", "gain", "gain", "summing")
    for output in ("out_2", "out_3"):
        target = "summing" if output == "out_2" else "gain_2"
        if output == "out_3":
            link = next(each for each in project.links if each.target == "gain_2")
            project = project.with_changes(edits.delete(project, {link.id}))
        project = project.with_changes(edits.add_link(project, "divider", output, target, "in"))
    layout = Layout(project, Columns())
    assert off_blocks(layout)
    under = {
        link.id: layout.line(link) for link in project.links if layout.routes[link.id].row_gap is not None
    }
    assert len(under) == 2
    levels = {line[2][1] for line in under.values()}
    _, top, _, height = layout.box("gain")
    assert len(levels) == 2, "each has a lane of its own"
    assert all(top + height < level < top + layout.scale.row_px for level in levels)
