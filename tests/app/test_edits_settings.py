"""Setting controls, figures, options and names, as pure functions from a project to what changes."""

from __future__ import annotations

import pytest

from app import edits
from engine.project import HEADER_KEY, Changes, Project, difference
from engine.topology import CountError, PortError
from tests.app.simple_kinds import chain, places, simple_kinds


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


# -- setting -------------------------------------------------------------------------------------------------


def test_a_control_goes_to_its_nearest_position():
    project = full()
    after = applied(project, edits.set_control(project, "gain", "gain_db", 31.4))
    assert after.stage["gain"].gain_db.value == 31.0
    assert edits.set_control(after, "gain", "gain_db", 31.2) == {}


def test_a_control_that_cannot_be_off_says_so():
    with pytest.raises(ValueError, match="Gain of Gain stage cannot be off"):
        edits.set_control(full(), "gain", "gain_db", None)


def test_a_typed_figure_keeps_its_text_and_is_no_longer_a_guess():
    project = full()
    after = applied(project, edits.set_figure(project, "gain", "z_in_ohm", "20 k"))
    assert after.stage["gain"].z_in_ohm.text == "20 k"
    after = applied(after, edits.set_figure(after, "gain", "highest_db", "70 dB", tolerance="1 dB"))
    figure = after.stage["gain"].highest_db
    assert (figure.text, figure.origin, figure.tolerance) == ("70 dB", "sheet", "1 dB")
    measured = applied(after, edits.set_figure(after, "gain", "highest_db", "70 dB", origin="measured"))
    assert measured.stage["gain"].highest_db.origin == "measured"
    gone = applied(after, edits.set_figure(after, "gain", "z_in_ohm", ""))
    assert gone.stage["gain"].z_in_ohm is None


def test_one_of_several_figures_is_replaced_added_or_taken_away():
    project = full()

    def texts(at: Project) -> list[str]:
        return [each.text for each in at.stage["gain"].powers_db]

    assert texts(applied(project, edits.set_figure(project, "gain", "powers_db.1", "25 dB"))) == [
        "10 dB",
        "25 dB",
    ]
    assert texts(applied(project, edits.set_figure(project, "gain", "powers_db", "30 dB")))[2] == "30 dB"
    assert texts(applied(project, edits.set_figure(project, "gain", "powers_db.0", None))) == ["20 dB"]


def test_a_figure_that_narrows_a_control_takes_the_control_along():
    project = full().with_changes(edits.set_control(full(), "gain", "gain_db", 55.0))
    after = applied(project, edits.set_figure(project, "gain", "highest_db", "40 dB"))
    assert after.stage["gain"].gain_db.value == 40.0


def test_figures_that_cannot_be_read_or_be_absent_are_refused_by_name():
    with pytest.raises(ValueError, match="Highest gain of Gain stage"):
        edits.set_figure(full(), "gain", "highest_db", "plenty")
    with pytest.raises(ValueError, match="Highest gain of Gain stage is missing"):
        edits.set_figure(full(), "gain", "highest_db", "  ")
    with pytest.raises(ValueError, match="no figure 'weight'"):
        edits.set_figure(full(), "gain", "weight", "3 kg")


def test_an_option_whose_port_is_in_use_is_refused():
    project = applied(full(), edits.branch_from(full(), "horn", "divider", "out_3"))
    with pytest.raises(PortError, match="Divider has no output 'out_3'"):
        edits.set_option(project, "divider", "number", 2)
    assert applied(project, edits.set_option(project, "gain", "form", "B")).stage["gain"].form == "B"


def test_state_panel_name_count_place_and_header():
    project = full()
    project = applied(project, edits.set_state(project, "gain", "gain_db", "locked"))
    project = applied(project, edits.set_panel(project, "gain", "gain_db", " half past ten "))
    setting = project.stage["gain"].gain_db
    assert (setting.value, setting.state, setting.panel) == (20.0, "locked", "half past ten")
    project = applied(project, edits.rename(project, "gain", "  Preamp   3 "))
    assert project.stage["gain"].name == "Preamp 3"
    project = applied(project, edits.set_place(project, "gain", rack="Rack 2, unit 14", area="", note=None))
    assert project.stage["gain"].rack == "Rack 2, unit 14"
    project = applied(project, edits.set_header(project, name="Harbour Hall", revision=7))
    project = applied(project, edits.set_figure(project, HEADER_KEY, "tone_hz", "400 Hz"))
    assert (project.header.name, project.header.tone_hz.text) == ("Harbour Hall", "400 Hz")
    with pytest.raises(ValueError, match="needs a name"):
        edits.rename(project, "gain", "   ")
    with pytest.raises(CountError, match="make the counts equal"):
        edits.set_count(applied(project, edits.set_count(project, ["capsule", "gain"], 4)), "gain", 3)
