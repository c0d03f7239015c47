"""Gestures as plain state objects: what is planned at each place of the pointer, what is refused and why, what a release
does, and that a cancel leaves nothing."""

from __future__ import annotations

from dataclasses import dataclass, field

import pytest

from app import edits
from app.gestures import (
    Hit,
    LinkDrag,
    LinkKeys,
    MoveBlocks,
    Press,
    RubberBand,
    ShelfDrag,
    Target,
    start_of_link,
)
from app.gestures.base import Box, Place, Point
from engine.project import Project
from tests.app.simple_kinds import chain, ends, link_between, places, simple_kinds


@pytest.fixture(scope="module", autouse=True)
def _kinds():
    with simple_kinds():
        yield


GRID_PX = 100.0


@dataclass
class Bench:
    """A surface where a point hits what the test says, and places are 100 px wide."""

    project: Project
    things: dict[Point, Hit] = field(default_factory=dict)

    def hit(self, x: float, y: float, *, reach: float = 6.0, carrying: bool = False) -> Hit:
        return self.things.get((x, y), Hit())

    def place(self, x: float, y: float) -> Place:
        return int(x // GRID_PX), int(y // GRID_PX)

    def inside(self, box: Box) -> frozenset[str]:
        left, top, width, height = box
        return frozenset(
            key
            for key, (column, row) in places(self.project).items()
            if left <= column * GRID_PX <= left + width and top <= row * GRID_PX <= top + height
        )


ON: Point = (555.0, 555.0)


def bench(hit: Hit | None = None) -> Bench:
    project = chain("talker", "capsule", "gain", "summing", "divider", "horn", "chair")
    return Bench(project, {ON: hit} if hit else {})


# -- from the shelf ------------------------------------------------------------------------------------------


def test_over_empty_ground_a_kind_would_stand_there():
    surface = bench()
    drag = ShelfDrag(surface, "gain")
    drag.move(250, 130)
    assert drag.preview.target == Target("place")
    assert [(ghost.id, ghost.column, ghost.row) for ghost in drag.preview.ghosts] == [("gain_2", 2, 1)]
    plan = drag.release()
    assert plan is not None
    assert plan.title == "Add Gain stage"
    assert plan.select == frozenset({"gain_2"})
    assert places(surface.project.with_changes(plan.changes))["gain_2"] == (2, 1)


def test_over_a_link_a_kind_would_be_inserted():
    surface = bench()
    link = link_between(surface.project, "gain", "summing")
    surface.things[ON] = Hit("link", link.id)
    drag = ShelfDrag(surface, "gain")
    drag.move(*ON)
    assert drag.preview.hint == "Between Gain stage and Summing bus"
    plan = drag.release()
    assert plan is not None
    assert plan.title == "Insert Gain stage"
    assert ("gain", "gain_2") in ends(surface.project.with_changes(plan.changes))


@pytest.mark.parametrize(
    ("hit", "link"),
    [
        (Hit("output", "divider", "out_2"), ("divider", "horn_2")),
        (Hit("stage", "divider", right=True), ("divider", "horn_2")),
    ],
)
def test_over_an_output_or_the_right_half_of_a_block_a_kind_would_branch(hit, link):
    surface = bench(hit)
    drag = ShelfDrag(surface, "horn")
    drag.move(*ON)
    plan = drag.release()
    assert plan is not None
    assert link in ends(surface.project.with_changes(plan.changes))


@pytest.mark.parametrize("hit", [Hit("input", "summing", "in"), Hit("stage", "summing", right=False)])
def test_over_an_input_or_the_left_half_a_kind_would_come_ahead(hit):
    surface = bench(hit)
    drag = ShelfDrag(surface, "gain")
    drag.move(*ON)
    plan = drag.release()
    assert plan is not None
    assert ("gain_2", "summing") in ends(surface.project.with_changes(plan.changes))


def test_what_does_not_fit_is_refused_in_the_engines_words_and_a_release_does_nothing():
    surface = bench(Hit("stage", "gain", right=True))
    drag = ShelfDrag(surface, "chair")
    drag.move(*ON)
    assert drag.preview.refusal == (
        "Gain stage sends an analogue signal and Chair takes an acoustic one: put a loudspeaker between them"
    )
    assert drag.release() is None
    drag.move(150, 150)
    assert not drag.preview.refusal
    assert drag.release() is not None


def test_leaving_or_cancelling_forgets_what_was_planned():
    surface = bench()
    drag = ShelfDrag(surface, "gain")
    drag.move(150, 150)
    drag.leave()
    assert drag.release() is None
    drag.move(150, 150)
    drag.cancel()
    assert drag.release() is None
    assert drag.preview.ghosts == ()


# -- port to port --------------------------------------------------------------------------------------------


def loose() -> Bench:
    surface = bench()
    surface.project = surface.project.with_changes(edits.add_stage(surface.project, "gain", 1, 1))
    return surface


def test_a_link_is_drawn_from_an_output_to_an_input():
    surface = loose()
    surface.things[ON] = Hit("input", "summing", "in")
    drag = start_of_link(surface, Hit("output", "gain_2", "out"), (5.0, 5.0))
    drag.move(50, 50)
    assert drag.preview.hint == "Lead it to an input"
    assert drag.preview.line == ((5.0, 5.0), (50, 50))
    drag.move(*ON)
    assert drag.preview.hint == "Gain stage 2 to Summing bus"
    plan = drag.release()
    assert plan is not None
    assert plan.title == "Link"
    assert ("gain_2", "summing") in ends(surface.project.with_changes(plan.changes))


def test_a_link_is_drawn_from_an_input_back_to_an_output():
    surface = loose()
    surface.things[ON] = Hit("stage", "divider")
    drag = start_of_link(surface, Hit("input", "gain_2", "in"), (5.0, 5.0))
    assert not drag.from_output
    drag.move(*ON)
    plan = drag.release()
    assert plan is not None
    after = surface.project.with_changes(plan.changes)
    assert ("divider", "gain_2") in ends(after)
    assert places(after)["gain_2"][0] == 5


def test_a_block_stands_for_its_first_port_that_fits():
    surface = loose()
    surface.project = surface.project.with_changes(
        edits.branch_from(surface.project, "horn", "divider", "out_1")
    )
    surface.things[ON] = Hit("stage", "divider")
    drag = start_of_link(surface, Hit("input", "gain_2", "in"), (0.0, 0.0))
    drag.move(*ON)
    assert drag.preview.target == Target("output", "divider", "out_1")


@pytest.mark.parametrize(
    ("hit", "words"),
    [
        (Hit("stage", "talker"), "Talker has no input: a path begins at it, so nothing can come before"),
        (Hit("stage", "chair"), "put a loudspeaker between them"),
        (Hit("stage", "gain"), "already has Capsule at this input"),
    ],
)
def test_a_link_that_cannot_be_is_refused_and_explained(hit, words):
    surface = loose()
    surface.things[ON] = hit
    drag = LinkDrag(surface, "gain_2", "out", (0.0, 0.0), from_output=True)
    drag.move(*ON)
    assert words in drag.preview.refusal
    assert drag.release() is None


def test_a_taken_input_gives_up_its_link_to_be_led_elsewhere_or_dropped():
    surface = loose()
    surface.things[ON] = Hit("input", "gain_2", "in")
    drag = start_of_link(surface, Hit("input", "gain", "in"), (0.0, 0.0))
    assert drag.lifted == link_between(surface.project, "capsule", "gain").id
    drag.move(*ON)
    plan = drag.release()
    assert plan is not None
    moved = surface.project.with_changes(plan.changes)
    assert ("capsule", "gain_2") in ends(moved)
    assert ("capsule", "gain") not in ends(moved)
    drag.move(10, 10)
    assert drag.preview.hint == "Release to remove this link"
    plan = drag.release()
    assert plan is not None
    assert len(surface.project.with_changes(plan.changes).links) == len(surface.project.links) - 1


# -- with the keyboard ---------------------------------------------------------------------------------------


def test_keys_start_at_the_nearest_input_that_fits_and_step_over_the_grid():
    surface = loose()
    chosen = LinkKeys(surface, "gain_2")
    assert chosen.target == Target("input", "summing", "in")
    plan = chosen.confirm()
    assert plan is not None
    assert ("gain_2", "summing") in ends(surface.project.with_changes(plan.changes))
    chosen.step("right")
    assert chosen.target.id == "divider"
    assert chosen.confirm() is None
    assert "already has Summing bus" in chosen.preview.refusal
    chosen.step("left")
    assert chosen.target.id == "summing"


def test_keys_choose_among_outputs_and_an_end_of_path_has_none():
    surface = loose()
    chosen = LinkKeys(surface, "divider")
    assert chosen.output == "out_1"
    chosen.next_output()
    assert chosen.output == "out_2"
    with pytest.raises(ValueError, match="Chair has no output"):
        LinkKeys(surface, "chair")


# -- blocks and band -----------------------------------------------------------------------------------------


def test_blocks_move_by_as_many_places_as_the_pointer():
    surface = bench()
    drag = MoveBlocks(surface, frozenset({"horn", "chair"}), (550.0, 50.0))
    drag.move(560, 60)
    assert drag.release() is None
    drag.move(550, 250)
    assert {(ghost.id, ghost.row) for ghost in drag.preview.ghosts} == {("horn", 2), ("chair", 2)}
    plan = drag.release()
    assert plan is not None
    assert places(surface.project.with_changes(plan.changes))["horn"] == (5, 2)


def test_a_single_block_moves_into_a_link():
    surface = bench()
    surface.things[ON] = Hit("link", link_between(surface.project, "divider", "horn").id)
    drag = MoveBlocks(surface, frozenset({"gain"}), (250.0, 50.0))
    drag.move(*ON)
    assert drag.preview.hint == "Between Divider and Horn"
    plan = drag.release()
    assert plan is not None
    assert ("gain", "horn") in ends(surface.project.with_changes(plan.changes))


def test_moving_on_says_how_many_go_along():
    drag = MoveBlocks(bench(), frozenset({"gain"}), (250.0, 50.0))
    drag.move(350, 50)
    assert drag.preview.hint == "4 more move on"


def test_a_band_selects_what_it_touches_and_keeps_what_was_selected():
    band = RubberBand(bench(), (450.0, 50.0), frozenset({"talker"}))
    band.move(150, -20)
    assert band.preview.caught == {"talker", "gain", "summing", "divider"}
    plan = band.release()
    assert plan is not None
    assert plan.changes == {}
    assert plan.select == frozenset({"talker", "gain", "summing", "divider"})


# -- a press is a click until it moves -----------------------------------------------------------------------


def test_a_press_becomes_the_gesture_of_what_it_came_down_on():
    surface = bench(Hit("stage", "gain"))
    press = Press(surface, *ON, frozenset())
    assert press.move(ON[0] + 4, ON[1]) is None
    assert press.click() == {"gain"}
    assert isinstance(press.move(ON[0] + 9, ON[1]), MoveBlocks)
    surface.things[ON] = Hit("output", "gain", "out")
    assert isinstance(Press(surface, *ON, frozenset()).move(0, 0), LinkDrag)
    assert isinstance(Press(surface, 10, 10, frozenset()).move(60, 60), RubberBand)


def test_a_finger_has_more_slack_than_a_pointer():
    surface = bench(Hit("stage", "gain"))
    assert Press(surface, *ON, frozenset(), touch=True).move(ON[0] + 9, ON[1]) is None
    assert Press(surface, *ON, frozenset(), touch=True).move(ON[0] + 13, ON[1]) is not None


def test_a_press_on_one_of_several_selected_carries_them_all():
    surface = bench(Hit("stage", "gain"))
    moving = Press(surface, *ON, frozenset({"gain", "horn"})).move(0, 0)
    assert isinstance(moving, MoveBlocks)
    assert moving.ids == {"gain", "horn"}


def test_extending_adds_and_takes_away():
    surface = bench(Hit("stage", "gain"))
    assert Press(surface, *ON, frozenset({"horn"}), extend=True).click() == {"gain", "horn"}
    assert Press(surface, *ON, frozenset({"gain", "horn"}), extend=True).click() == {"horn"}
    assert Press(surface, 1, 1, frozenset({"horn"})).click() == frozenset()
