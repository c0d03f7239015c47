"""Proposals in the window: an amplifier far too sensitive, mended with three clicks."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from app.document import Document
from app.proposal_panel import ProposalPanel
from engine.propose import Proposal
from tests.scenarios.build import amplifier, bare, chain, line, loudspeaker, seat


@pytest.fixture
def panel(qtbot):
    project = chain(
        line("programme", "-10 dBV", most="10 V"),
        bare("mixer_channel", "channel", fader_db=-40.0, noise="-86 dBu unweighted", max_v="10 V"),
        amplifier(sensitivity_v="1.0 V", noise="103 dB unweighted re rated", attenuator_db=0.0),
        loudspeaker("horn", sensitivity_spl="98 dB 1 W/1 m"), seat(target_spl_db="79 dB SPL"), distance="3 m",
    )  # fmt: skip
    held = []
    shown = ProposalPanel(Document(project), lambda: held.append(1))
    shown.held = held
    shown.keep = shown.document
    qtbot.addWidget(shown)
    shown.show()
    return shown


def test_a_proposal_is_shown_and_applied_as_one_undo_step(panel):
    assert isinstance(panel.found, Proposal)
    assert panel.found.touched
    before = panel.document.outcome
    QTest.mouseClick(panel.apply_button, Qt.MouseButton.LeftButton)
    after = panel.document.outcome
    assert panel.held == [1]
    assert panel.document.undo_stack.count() == 1
    assert after.seats[0].hiss < before.seats[0].hiss + 1.0  # 13.5 dB more level for no more hiss
    assert after.seats[0].level == pytest.approx(79.0, abs=0.6)
    assert not panel.apply_button.isEnabled()
    panel.document.undo()
    assert panel.document.project.same_as(before.project)


def test_wishes_are_read_from_the_controls(panel):
    panel.amplifiers.setCurrentIndex(1)
    panel.alignment.setCurrentIndex(2)
    wishes = panel.wishes()
    assert wishes.amplifiers == "locked"
    assert wishes.alignment == "amplifier first"
    assert wishes.by_db == 3.0
