"""The three answers that are always in view."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from app.answers import answers
from app.bottom_line import BottomLine
from app.document import Document
from app.inks import LIGHT
from engine.project import Project
from tests.app.diagram.chains import chain


@pytest.fixture
def line(qtbot):
    document = Document(chain())
    made = BottomLine(document, LIGHT)
    made.document_ = document
    made.resize(1366, 36)
    qtbot.addWidget(made)
    made.show()
    qtbot.waitExposed(made)
    return made


def test_it_says_what_the_outcome_says(line):
    outcome = line.document_.outcome
    narrowest, hiss, loudest = (item.answer for item in line.items)
    assert narrowest.stage == outcome.narrowest.stage
    assert f"{abs(outcome.narrowest.margin_db):.1f}" in narrowest.text
    owner = outcome.seats[0].budget[0]
    assert hiss.stage == owner.stage
    assert f"{owner.name} owns {100 * owner.share:.0f}\u202f%" in hiss.text
    assert f"{outcome.seats[0].level_a:.1f}\u202fdB(A)" in loudest.text


def test_it_follows_a_control(line):
    document = line.document_
    before = line.items[2].answer.text
    stage = document.project.stage["power_amplifier-6"]
    document.edit("Down", {stage.id: (stage, stage.with_control("attenuator_db", -10.0))})
    document.flush()
    assert line.items[2].answer.text != before
    assert line.items[2].accessibleName().startswith("Loudest seat: ")


@pytest.mark.parametrize("place", [0, 1, 2])
def test_each_leads_to_its_stage_by_click_and_by_key(line, place):
    item, document = line.items[place], line.document_
    QTest.mouseClick(item, Qt.MouseButton.LeftButton)
    assert document.selection == {item.answer.stage}
    document.select(())
    QTest.keyClick(item, Qt.Key.Key_Space)
    assert document.selection == {item.answer.stage}


def test_clipping_is_said_as_such():
    document = Document(chain())
    stage = document.project.stage["preamplifier-2"]
    document.edit("Up", {stage.id: (stage, stage.with_control("gain_db", 60.0))})
    document.flush()
    first = answers(document.outcome)[0]
    assert first.label == "Clips"
    assert first.grave
    assert "over at" in first.text


def test_an_empty_project_has_answers_too():
    assert [answer.stage for answer in answers(Document(Project()).outcome)] == [None, None, None]


def test_the_nearest_seat_is_the_one_marked_so():
    project = chain()
    seat = project.stage["seat-9"]
    marked = project.with_changes({seat.id: (seat, seat.with_fields(role="nearest", name="Row 2"))})
    assert answers(Document(marked).outcome)[1].label == "Hiss at Row 2"
