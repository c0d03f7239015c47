"""Which rows a selection needs."""

from __future__ import annotations

from app.card.contents import contents_of
from engine.project import HEADER_KEY
from tests.app.diagram.chains import chain


def test_nothing_selected_is_the_project():
    found = contents_of(chain(), ())
    assert (found.sort, found.keys) == ("project", (HEADER_KEY,))
    assert "temperature_c" in found.figures


def test_moving_a_control_needs_no_other_rows_and_an_option_may():
    project = chain()
    stage = project.stage["power_amplifier-6"]
    moved = project.with_changes({stage.id: (stage, stage.with_control("attenuator_db", -6.0))})
    other = project.with_changes({stage.id: (stage, stage.with_fields(attenuator="none"))})
    before = contents_of(project, [stage.id])
    assert contents_of(moved, [stage.id]) == before
    assert contents_of(other, [stage.id]) != before


def test_several_show_what_they_have_in_common():
    found = contents_of(chain(), ["mix_bus-4", "mixer_channel-3"])
    assert found.keys == ("mixer_channel-3", "mix_bus-4")  # signal order
    assert set(found.controls) == {"fader_db", "mute"}
    assert {"z_in_ohm", "z_out_ohm", "nominal_v"} <= set(found.figures)


def test_stages_and_links_together_have_nothing_in_common():
    project = chain()
    assert contents_of(project, ["mix_bus-4", project.links[0].id]).sort == "mixed"


def test_an_opened_figure_stands_among_the_given_ones():
    project = chain()
    before = contents_of(project, ["power_amplifier-6"])
    assert "sensitivity_v" in before.absent
    after = contents_of(project, ["power_amplifier-6"], {("power_amplifier-6", "sensitivity_v")})
    assert "sensitivity_v" in after.figures
    assert "sensitivity_v" not in after.absent


def test_ids_that_are_gone_are_passed_over():
    assert contents_of(chain(), ["nobody"]).sort == "project"
