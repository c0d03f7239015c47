"""What every row of the card is given, and what it answers."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Protocol

from PySide6.QtWidgets import QWidget

from app.document import Document
from app.inks import Inks
from engine.outcome import Outcome
from engine.project import Project
from engine.stages.declared import Declared

from .hand import Hand

Keys = tuple[str, ...]
SEVERAL = "several"


@dataclass
class Scene:
    """The document as the card's rows see it, and what a rebuilt card must not forget."""

    document: Document
    inks: Inks
    hand: Hand
    may_wheel: Callable[[], bool]
    rebuild: Callable[[], None]  # the card must have other rows; done when the event is over
    refused: dict[tuple[Keys, str], tuple[str, str]] = field(
        default_factory=dict
    )  # text and reason, until mended
    opened: set[tuple[str, str]] = field(default_factory=set)  # figures asked for and not yet given
    wanted: tuple[Keys, str] | None = None  # the row to take the keyboard once it is there

    @property
    def project(self) -> Project:
        return self.document.project

    def items(self, keys: Keys) -> list[Declared]:
        """The items of these ids as they are now."""
        found = (self.project.item(key) for key in keys)
        return [item for item in found if item is not None]

    def called(self, keys: Keys) -> str:
        """How an undo entry names these items."""
        items = self.items(keys)
        return items[0].called if len(items) == 1 else f"{len(items)} stages"


class Row(Protocol):
    """Part of a card that follows the project and its outcome without being built anew."""

    def show_project(self, project: Project) -> None:
        """Follow a change."""

    def show_outcome(self, outcome: Outcome) -> None:
        """Follow a solve."""


class Part(QWidget):
    """A row that has nothing to follow, until it says so."""

    def show_project(self, project: Project) -> None:
        """Follow a change."""

    def show_outcome(self, outcome: Outcome) -> None:
        """Follow a solve."""
