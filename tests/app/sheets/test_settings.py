"""The settings sheet: every control of every stage once, as marked on its panel, whole stages, large type."""

from __future__ import annotations

from pathlib import Path

import pytest

from app.sheets import settings
from app.sheets.page import LARGE, Box, Page, Paper, Text
from app.sheets.settings_lines import by_rack, in_signal_order, stage_settings
from engine.project import Header, Project
from engine.stages import Setting, template
from engine.stages.panel import marking
from engine.store import read

SAMPLES = Path(__file__).parents[3] / "sample_projects"


@pytest.fixture(scope="module")
def theatre() -> Project:
    return read(SAMPLES / "theatre.gainwright")[0]


def written(pages: list[Page]) -> list[str]:
    return [text for page in pages for text in page.texts]


def test_every_control_stands_once_as_marked_on_its_panel(theatre):
    groups = {group.stage: group for group in in_signal_order(theatre)}
    for stage in theatre.stages:
        expected = [
            (spec.label, marking(spec, stage.control_range(name), setting), setting.state)
            for name, spec, setting in stage.controls()
            if len(stage.control_range(name).choices) != 1
        ]
        lines = groups[stage.id].lines if stage.id in groups else ()
        assert [(line.control, line.panel, line.state) for line in lines] == expected


def test_stages_stand_in_signal_order(theatre):
    columns = [theatre.stage[group.stage].column for group in in_signal_order(theatre)]
    assert columns == sorted(columns)


def test_racks_stand_in_natural_order_and_lose_nothing(theatre):
    racks = by_rack(theatre)
    assert [rack for rack, _ in racks] == [
        "Amplifier rack left",
        "Amplifier rack right",
        "Mixing desk",
        "Processor rack",
        "",
    ]
    left = [group.rack for group in racks[0][1]]
    assert left == [f"Amplifier rack left, unit {n}" for n in (4, 8, 14, 16)]
    assert sorted(group.stage for _, rack in racks for group in rack) == sorted(
        group.stage for group in in_signal_order(theatre)
    )


def test_the_own_marking_of_a_person_comes_first():
    stage = template(
        "power_amplifier",
        "a",
        "Amplifier",
        attenuator_db=Setting(value=-8.0, state="locked", panel="blue dot"),
    )
    (line,) = stage_settings(stage).lines
    assert (line.panel, line.value, line.state) == ("blue dot", "−8\u202fdB", "locked")


def test_values_have_the_precision_that_can_be_set():
    stage = template("mixer_channel", "c", "Channel", trim_db=Setting(value=2.5))
    trim = stage_settings(stage).lines[0]
    assert trim.value == "+2.5\u202fdB"


@pytest.mark.parametrize("make", [settings.signal_order_pages, settings.rack_order_pages])
@pytest.mark.parametrize("paper", [Paper("A4"), Paper("A4", True), Paper("A3", True), Paper("Letter")])
def test_set_values_are_at_least_14_points_and_boxes_go_with_them(qapp, theatre, make, paper):
    pages = make(theatre, paper)
    lines = [line for group in in_signal_order(theatre) for line in group.lines]
    large = " ".join(
        item.text for page in pages for item in page.items if isinstance(item, Text) and item.points >= LARGE
    )
    for word in {line.panel.split()[0] for line in lines}:
        assert word in large
    boxes = [item for page in pages for item in page.items if isinstance(item, Box)]
    assert len(boxes) == 3 * len(lines)


def test_heads_are_repeated_and_no_stage_is_split(qapp, theatre):
    pages = settings.signal_order_pages(theatre, Paper("A4"))
    assert len(pages) > 3
    assert all("set to, as marked on the panel" in page.texts for page in pages)
    assert not any("(continued)" in text for text in written(pages))


def test_a_stage_taller_than_the_paper_says_that_it_continues(qapp):
    project = Project(
        header=Header(name="Hall"), stages=(template("processor", "p", "Processor", outputs_fitted=8),)
    )
    pages = settings.signal_order_pages(project, Paper("A4", True))
    assert len(pages) > 1
    assert all("Processor (continued)" in page.texts for page in pages[1:])


def test_nothing_stands_outside_the_margins(qapp, theatre):
    for paper in (Paper("A4"), Paper("Letter", True)):
        left, top, width, height = paper.inside
        for page in settings.rack_order_pages(theatre, paper):
            for item in page.items:
                if isinstance(item, Box):
                    assert left - 0.5 <= item.x <= item.x + item.width <= left + width + 0.5
                    assert top <= item.y <= item.y + item.height <= top + height
