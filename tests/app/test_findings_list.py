"""The list of findings: the gravest first, numbers following the hand, a click or Enter leading to the stage."""

from __future__ import annotations

from collections import Counter

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from app.document import Document
from app.finding_delegate import FINDING
from app.findings_list import FindingsList
from app.inks import LIGHT
from engine.findings import Finding
from engine.project import Project
from tests.app.diagram.chains import chain


@pytest.fixture
def shown(qtbot):
    document = Document(chain())
    made = FindingsList(document, LIGHT)
    made.document_ = document
    made.resize(300, 260)
    qtbot.addWidget(made)
    made.show()
    qtbot.waitExposed(made)
    return made


def hot(document: Document) -> None:
    """Turn the preamplifier far up, so that something clips."""
    stage = document.project.stage["preamplifier-2"]
    document.edit("Up", {stage.id: (stage, stage.with_control("gain_db", 60.0))})
    document.flush()


def test_it_shows_every_finding_and_counts_by_severity(shown):
    hot(shown.document_)
    found = shown.document_.outcome.findings
    assert shown.model.rowCount() == len(found) > 0
    counted = Counter(each.severity for each in found)
    assert shown.count.text() == " · ".join(
        f"{counted[w]} {w}" for w in ("stop", "mend", "note") if counted[w]
    )
    assert counted["stop"]


def test_a_click_and_enter_select_the_stage(shown):
    document = shown.document_
    hot(document)
    places = [place for place, each in enumerate(shown.model.findings) if each.stage]
    index = shown.model.index(places[0])
    QTest.mouseClick(
        shown.view.viewport(), Qt.MouseButton.LeftButton, pos=shown.view.visualRect(index).center()
    )
    assert document.selection == {index.data(FINDING).stage}
    document.select(())
    shown.view.setCurrentIndex(index)
    QTest.keyClick(shown.view, Qt.Key.Key_Return)
    assert document.selection == {index.data(FINDING).stage}


def test_rows_are_as_high_as_their_text_and_no_wider_than_the_view(shown):
    hot(shown.document_)
    for place in range(shown.model.rowCount()):
        box = shown.view.visualRect(shown.model.index(place))
        assert box.width() <= shown.view.viewport().width()
        assert box.height() >= 24
    wide = shown.view.visualRect(shown.model.index(0)).height()
    shown.resize(180, 260)
    assert shown.view.visualRect(shown.model.index(0)).height() > wide


def test_the_current_finding_stays_current_while_numbers_move(shown):
    hot(shown.document_)
    shown.view.setCurrentIndex(shown.model.index(1))
    before = shown.model.findings[1]
    shown.model.show_findings((Finding("stop", "other", None, "9 dB over."), *shown.model.findings))
    shown.view.keep_current(lambda: None)
    shown.view.setCurrentIndex(shown.model.index(2))
    later = (
        *shown.model.findings[:2],
        Finding(before.severity, before.code, before.stage, "Another number."),
    )
    shown.view.keep_current(lambda: shown.model.show_findings((*later, *shown.model.findings[3:])))
    assert shown.view.currentIndex().row() == 2


def test_without_findings_it_says_so(qtbot):
    document = Document(Project())
    made = FindingsList(document, LIGHT)
    qtbot.addWidget(made)
    made.resize(300, 120)
    assert made.model.rowCount() == 0
    image = made.grab().toImage()
    assert len({image.pixelColor(x, y).name() for x in range(20, 140) for y in range(32, 60)}) > 1


def test_while_a_hand_moves_it_waits_until_the_hand_rests(shown, qtbot):
    document = shown.document_
    reads: list[object] = []
    show = shown.model.show_findings

    def counted(found) -> None:
        reads.append(found)
        show(found)

    shown.model.show_findings = counted
    for step in range(20):
        stage = document.project.stage["preamplifier-2"]
        document.edit("Up", {stage.id: (stage, stage.with_control("gain_db", 20.0 + step))}, gesture="hand")
        document.flush()
    assert not reads
    qtbot.waitUntil(lambda: len(reads) == 1, timeout=2000)
    document.end_gesture()
    assert shown.model.findings == document.outcome.findings
