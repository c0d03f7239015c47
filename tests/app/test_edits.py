"""Every edit: what it changes, that it can be taken back, that it leaves the rest alone, and what it refuses."""

from __future__ import annotations

import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app import edits
from engine.project import Changes, Project, difference
from engine.topology import CycleError, DomainError, DoubleLinkError, LinkError, PortError
from tests.app.simple_kinds import SIMPLE, Gain, chain, ends, link_between, places, simple_kinds


@pytest.fixture(scope="module", autouse=True)
def _kinds():
    with simple_kinds():
        yield


def applied(project: Project, changes: Changes) -> Project:
    """The next project; taking the changes back must give the first one again."""
    after = project.with_changes(changes)
    assert after.with_changes(changes, undo=True).same_as(project)
    assert dict(difference(project, after)) == dict(changes)
    taken = list(places(after).values())
    assert len(taken) == len(set(taken)), "two stages on one place"
    return after


def full() -> Project:
    return chain("talker", "capsule", "gain", "summing", "divider", "horn", "chair")


# -- adding --------------------------------------------------------------------------------------------------


def test_adds_a_stage_where_it_was_dropped_with_a_readable_id_and_name():
    one = applied(Project(), edits.add_stage(Project(), "gain", 3, 1))
    two = applied(one, edits.add_stage(one, "gain", 3, 1))
    assert places(two) == {"gain": (3, 1), "gain_2": (3, 2)}
    assert [stage.name for stage in two.stages] == ["Gain stage", "Gain stage 2"]


def test_adding_behind_makes_a_chain_in_one_row():
    assert list(places(full()).values()) == [(at, 0) for at in range(7)]
    assert ends(full()) == {("talker", "capsule"), ("capsule", "gain"), ("gain", "summing"),
                            ("summing", "divider"), ("divider", "horn"), ("horn", "chair")}  # fmt: skip


def test_inserting_opens_a_column_for_its_own_path_only():
    project = full()
    project = applied(project, edits.branch_from(project, "horn", "divider"))
    project = applied(project, edits.add_stage(project, "talker", 3, 4))
    link = link_between(project, "gain", "summing")
    after = applied(project, edits.insert_on_link(project, "gain", link.id))
    assert ends(after) - ends(project) == {("gain", "gain_2"), ("gain_2", "summing")}
    assert places(after)["gain_2"] == (3, 0)
    assert places(after)["summing"] == (4, 0)
    assert places(after)["horn_2"][0] == places(project)["horn_2"][0] + 1
    for untouched in ("talker", "capsule", "gain", "talker_2"):
        assert after.stage[untouched] is project.stage[untouched]


def test_inserting_keeps_ids_figures_and_the_targets_wiring():
    project = full()
    link = link_between(project, "capsule", "gain")
    project = project.with_changes(edits.set_option(project, link.id, "wiring", "one leg"))
    after = applied(project, edits.insert_on_link(project, "gain", link.id))
    assert set(project.stage) < set(after.stage)
    assert after.link[link.id].wiring == "one leg"
    assert after.link[link.id].target == "gain"
    assert link_between(after, "capsule", "gain_2").wiring == "balanced"


def test_inserting_uses_a_gap_where_there_is_one():
    project = chain("talker", "capsule", "gain")
    project = applied(project, edits.move(project, {"gain"}, 2, 0))
    after = applied(
        project, edits.insert_on_link(project, "gain", link_between(project, "capsule", "gain").id)
    )
    assert places(after) == {**places(project), "gain_2": (2, 0)}


def test_inserting_among_alike_makes_as_many():
    project = chain("capsule", "gain", "summing")
    project = applied(project, edits.set_count(project, ["capsule", "gain"], 8))
    link = link_between(project, "gain", "summing")
    assert applied(project, edits.insert_on_link(project, "gain", link.id)).stage["gain_2"].count == 8


@pytest.mark.parametrize(
    ("kind", "error", "words"),
    [
        ("talker", LinkError, "Talker 2 has no input: a path begins at it"),
        ("chair", LinkError, "Chair 2 has no output: a path ends at it"),
        ("horn", DomainError, "put a microphone between them"),
        ("capsule", DomainError, "put a loudspeaker between them"),
    ],
)
def test_inserting_what_does_not_fit_is_refused_in_words(kind, error, words):
    project = full()
    with pytest.raises(error, match=words):
        edits.insert_on_link(project, kind, link_between(project, "capsule", "gain").id)


def test_a_branch_takes_a_row_that_is_free_to_the_right():
    project = full()
    after = applied(project, edits.branch_from(project, "horn", "divider", "out_2"))
    assert places(after)["horn_2"] == (5, 1)
    assert link_between(after, "divider", "horn_2").output == "out_2"
    third = applied(after, edits.branch_from(after, "horn", "divider", "out_3"))
    assert places(third)["horn_3"] == (5, 2)


def test_a_branch_of_unlike_domain_is_refused():
    with pytest.raises(DomainError, match="Chair 2 takes an acoustic one: put a loudspeaker between"):
        edits.branch_from(full(), "chair", "gain")


def test_leading_into_an_input_takes_the_column_before_it():
    project = chain("summing", "horn")
    one = applied(project, edits.lead_into(project, "gain", "summing"))
    assert places(one) == {"gain": (0, 0), "summing": (1, 0), "horn": (2, 0)}
    two = applied(one, edits.lead_into(one, "gain", "summing", "in"))
    assert places(two)["gain_2"] == (0, 1)
    with pytest.raises(PortError, match="already has Summing bus"):
        edits.lead_into(two, "capsule", "horn", "in")


def test_adding_behind_falls_back_to_a_branch_and_ahead_to_an_insertion():
    project = full()
    assert ("divider", "horn_2") in ends(applied(project, edits.add_behind(project, "horn", "divider")))
    before = applied(project, edits.add_ahead(project, "gain", "divider"))
    assert {("summing", "gain_2"), ("gain_2", "divider")} < ends(before)
    more = applied(project, edits.add_ahead(project, "gain", "summing"))
    assert ("gain_2", "summing") in ends(more)
    assert ("gain", "summing") in ends(more)


def test_nothing_selected_begins_a_path_in_a_row_of_its_own():
    after = applied(full(), edits.add_behind(full(), "talker", None))
    assert places(after)["talker_2"] == (0, 1)


# -- linking -------------------------------------------------------------------------------------------------


def two_rows() -> Project:
    project = full()
    return project.with_changes(edits.add_stage(project, "capsule", 6, 1))


def test_a_link_pushes_its_target_right_of_its_source():
    project = two_rows()
    after = applied(project, edits.add_link(project, "capsule_2", "out", "summing", "in"))
    assert places(after)["capsule_2"] == (6, 1)
    assert [places(after)[key] for key in ("summing", "divider", "horn", "chair")] == [
        (7, 0), (8, 0), (9, 0), (10, 0)]  # fmt: skip


@pytest.mark.parametrize(
    ("quad", "error", "words"),
    [
        (("talker", "out", "gain", "in"), DomainError, "put a microphone between them"),
        (("gain", "out", "summing", "in"), DoubleLinkError, "one link is enough"),
        (("divider", "out_2", "gain", "in"), PortError, "already has Capsule at this input"),
        (("divider", "out_2", "summing", "in"), CycleError, "a signal path has no loops"),
        (("summing", "out", "summing", "in"), CycleError, "a signal path has no loops"),
    ],
)
def test_links_that_cannot_be_are_refused_in_the_engines_words(quad, error, words):
    with pytest.raises(error, match=words):
        edits.add_link(full(), *quad)


# -- deleting ------------------------------------------------------------------------------------------------


def test_deleting_a_stage_in_line_joins_its_neighbours():
    project = full()
    after = applied(project, edits.delete(project, {"gain"}))
    assert ("capsule", "summing") in ends(after)
    assert len(after.links) == len(project.links) - 1


def test_deleting_several_in_a_row_bridges_them_all():
    project = chain("capsule", "gain", "gain", "gain", "horn")
    assert ends(applied(project, edits.delete(project, {"gain", "gain_2", "gain_3"}))) == {
        ("capsule", "horn")
    }


def test_deleting_does_not_bridge_what_does_not_fit_or_was_cut():
    project = full()
    assert ends(applied(project, edits.delete(project, {"capsule"}))) == ends(project) - {
        ("talker", "capsule"), ("capsule", "gain")}  # fmt: skip
    cut = link_between(project, "gain", "summing").id
    after = applied(project, edits.delete(project, {"gain", cut}))
    assert ("capsule", "summing") not in ends(after)


def test_deleting_a_join_leaves_its_feeds_open():
    project = full()
    project = applied(project, edits.lead_into(project, "gain", "summing"))
    after = applied(project, edits.delete(project, {"summing"}))
    assert not after.topology.into["divider"]


def test_deleting_a_link_leaves_the_stages():
    project = full()
    after = applied(project, edits.delete(project, {link_between(project, "gain", "summing").id}))
    assert after.stages == project.stages
    assert len(after.links) == len(project.links) - 1


# -- clipboard -----------------------------------------------------------------------------------------------


def test_paste_gives_what_was_copied_under_fresh_names_with_its_inner_links():
    project = full().with_changes(edits.set_control(full(), "gain", "gain_db", 33.0))
    text = edits.copy_text(project, {"capsule", "gain", "chair"})
    after = applied(project, edits.paste(project, text))
    assert ends(after) - ends(project) == {("capsule_2", "gain_2")}
    assert places(after)["capsule_2"] == (1, 1)
    assert places(after)["chair_2"] == (6, 1)
    copied = after.stage["gain_2"]
    assert isinstance(copied, Gain)
    assert copied.gain_db.value == 33.0
    assert copied.name == "Gain stage 2"


def test_paste_goes_into_another_project_and_to_a_chosen_place():
    after = applied(Project(), edits.paste(Project(), edits.copy_text(full(), {"gain", "summing"}), (4, 2)))
    assert places(after) == {"gain": (4, 2), "summing": (5, 2)}


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "holds no stages"),
        ("a shopping list", "holds no stages"),
        ("[1, 2]", "holds no stages"),
        (json.dumps({"gainwright stages": 1}), "damaged"),
        (json.dumps({"gainwright stages": 1, "stages": [], "links": []}), "holds no stages"),
        (json.dumps({"gainwright stages": 1, "stages": [{"kind": "lawn mower"}], "links": []}), "lawn mower"),
    ],
)
def test_paste_of_anything_else_is_refused_in_words(text, words):
    with pytest.raises(ValueError, match=words):
        edits.paste(full(), text)


def test_nothing_is_copied_of_nothing():
    assert edits.copy_text(full(), {"nobody"}) == ""
    assert edits.duplicate(full(), {"nobody"}) == {}


def test_duplicate_takes_a_whole_zone_with_the_link_that_feeds_it():
    project = full()
    after = applied(project, edits.duplicate(project, {"horn"}))
    assert ends(after) - ends(project) == {("divider", "horn_2"), ("horn_2", "chair")}
    zone = applied(project, edits.duplicate(project, {"horn", "chair"}))
    assert ends(zone) - ends(project) == {("divider", "horn_2"), ("horn_2", "chair_2"), ("horn_2", "chair"),
                                          ("horn", "chair_2")} - {("horn_2", "chair"), ("horn", "chair_2")}  # fmt: skip
    assert places(zone)["horn_2"] == (5, 1)


# -- moving --------------------------------------------------------------------------------------------------


def test_moving_right_pushes_what_is_fed_and_left_stops_at_the_feed():
    project = full()
    right = applied(project, edits.move(project, {"gain"}, 2, 0))
    assert [places(right)[key][0] for key in ("capsule", "gain", "summing", "divider")] == [1, 4, 5, 6]
    assert edits.move(project, {"gain"}, -3, 0) == {}
    back = applied(right, edits.move(right, {"gain"}, -9, 0))
    assert places(back)["gain"] == (2, 0)


def test_moving_onto_somebody_changes_places_with_him():
    project = applied(full(), edits.branch_from(full(), "horn", "divider"))
    after = applied(project, edits.move(project, {"horn"}, 0, 1))
    assert places(after)["horn"] == (5, 1)
    assert places(after)["horn_2"] == (5, 0)


def test_moving_several_keeps_their_places_to_each_other():
    project = full()
    after = applied(project, edits.move(project, {"gain", "summing"}, 1, 2))
    assert places(after)["gain"] == (3, 2)
    assert places(after)["summing"] == (4, 2)


def test_moving_past_the_edge_of_the_grid_stops_there():
    assert edits.move(full(), {"talker"}, -5, -5) == {}


def test_a_stage_moves_into_another_link():
    project = chain("capsule", "gain", "gain", "horn")
    project = project.with_changes(edits.rename(project, "gain", "First"))
    target = link_between(project, "gain_2", "horn").id
    after = applied(project, edits.move_into(project, "gain", target))
    assert ends(after) == {("capsule", "gain_2"), ("gain_2", "gain"), ("gain", "horn")}
    assert after.stage["gain"].name == "First"
    assert edits.move_into(project, "gain", link_between(project, "gain", "gain_2").id) == {}


# -- any order, any project ----------------------------------------------------------------------------------

KIND = st.sampled_from(sorted(SIMPLE))
STEPS = st.lists(st.tuples(st.integers(0, 9), KIND, st.integers(0, 999), st.integers(-3, 3)), max_size=25)


def _one_step(project: Project, what: int, kind: str, which: int, by: int) -> Changes:
    stages, links = list(project.stage), list(project.link)
    stage = stages[which % len(stages)] if stages else None
    link = links[which % len(links)] if links else None
    if what == 0 or stage is None:
        return edits.add_stage(project, kind, which % 7, which % 3)
    if what == 1 and link:
        return edits.insert_on_link(project, kind, link)
    if what == 2:
        return edits.branch_from(project, kind, stage)
    if what == 3:
        return edits.lead_into(project, kind, stage)
    if what == 4:
        return edits.move(project, set(stages[which % len(stages) :][:3]), by, which % 3 - 1)
    if what == 5:
        return edits.duplicate(project, {stage})
    if what == 6:
        return edits.paste(project, edits.copy_text(project, set(stages[-3:])), (which % 5, 0))
    if what == 7 and which % 3 == 0:
        return edits.delete(project, {stage})
    if what == 8 and link:
        return edits.move_into(project, stage, link)
    output, target = project.stage[stage].outputs(), project.stage[stages[(which + by) % len(stages)]]
    if output and target.inputs():
        return edits.add_link(project, stage, output[-1].name, target.id, target.inputs()[0].name)
    return edits.add_behind(project, kind, stage)


@given(STEPS)
def test_whatever_is_done_is_valid_and_undo_brings_everything_back(steps):
    trail = [Project()]
    done: list[Changes] = []
    for step in steps:
        try:
            changes = _one_step(trail[-1], *step)
        except LinkError:
            continue
        after = applied(trail[-1], changes)
        assert Project(header=after.header, stages=after.stages, links=after.links).same_as(after)
        done.append(changes)
        trail.append(after)
    project = trail[-1]
    for changes, before in zip(reversed(done), reversed(trail[:-1]), strict=True):
        project = project.with_changes(changes, undo=True)
        assert project.same_as(before)


@given(STEPS, st.integers(0, 99), KIND)
def test_inserting_changes_no_other_stage_but_its_column(steps, which, kind):
    project = Project()
    for step in steps:
        try:
            project = project.with_changes(_one_step(project, *step))
        except LinkError:
            continue
    if not project.links:
        return
    try:
        changes = edits.insert_on_link(project, kind, list(project.link)[which % len(project.links)])
    except LinkError:
        return
    after = applied(project, changes)
    (new,) = edits.added_stages(changes)
    assert set(after.stage) == {*project.stage, new}
    for key, stage in project.stage.items():
        moved = after.stage[key]
        assert moved.column >= stage.column
        assert moved.model_copy(update={"column": stage.column}) == stage
