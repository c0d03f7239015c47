"""A window with a person who answers: what the tests of the window share."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget

from app.ask import Recovered, SaveFirst
from app.document import Document
from app.window import MainWindow
from engine.project import Link, Project
from engine.stages import template

Key = Qt.Key
Mod = Qt.KeyboardModifier


class Answers:
    """Stands for the person: what will be answered, and what was asked."""

    def __init__(self) -> None:
        self.asked: list[str] = []
        self.first: SaveFirst = "discard"
        self.recovered: Recovered = "later"
        self.yes = True
        self.path: Path | None = None

    def save_first(self, name: str) -> SaveFirst:
        self.asked.append(f"save first: {name}")
        return self.first

    def recover(self, text: str) -> Recovered:
        self.asked.append(f"recover: {text}")
        return self.recovered

    def confirm(self, title: str, text: str, yes: str) -> bool:
        self.asked.append(f"confirm: {title}")
        return self.yes

    def tell(self, title: str, text: str) -> None:
        self.asked.append(f"tell: {title} | {text}")

    def open_path(self, folder: Path) -> Path | None:
        self.asked.append("open path")
        return self.path

    def save_path(self, title: str, suggested: Path, kinds: Sequence[str]) -> Path | None:
        self.asked.append(f"save path: {suggested.name}")
        return self.path


@pytest.fixture
def answers() -> Answers:
    return Answers()


@pytest.fixture
def window(qtbot, answers: Answers) -> Iterator[MainWindow]:
    made = MainWindow(Document(), answers)
    qtbot.addWidget(made)
    made.resize(1366, 768)
    made.show()
    qtbot.waitExposed(made)
    yield made
    answers.first = "discard"


def chain() -> Project:
    return Project(
        stages=(
            template("sound_source", "talker", "Talker", column=0),
            template("microphone", "mic", "Lectern mic", column=1),
            template("preamplifier", "pre", "Preamp 3", column=2, gain_db={"value": 40.0}),
        ),
        links=(Link(id="l1", source="talker", target="mic"), Link(id="l2", source="mic", target="pre")),
    )


def keys(widget: QWidget | None, *pressed: Key, modifiers: Mod = Mod.NoModifier) -> None:
    assert widget is not None
    for key in pressed:
        QTest.keyClick(widget, key, modifiers)


def focused() -> QWidget:
    found = QApplication.focusWidget()
    assert found is not None
    return found


def add(window: MainWindow, title: str) -> None:
    """Add a kind as the keyboard does: to the shelf, type its name, Enter."""
    keys(focused(), Key.Key_K, modifiers=Mod.ControlModifier)
    QTest.keyClicks(focused(), title)
    keys(focused(), Key.Key_Return)
