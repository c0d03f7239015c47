"""What gestures share: what they ask, what they plan, and what they want shown."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal, Protocol

from app.edits import reason
from engine.project import Changes, Project

Point = tuple[float, float]
Place = tuple[int, int]  # column, row
Box = tuple[float, float, float, float]  # left, top, width, height


@dataclass(frozen=True)
class Hit:
    """What lies at a point. On a stage `right` says which half; a port is named beside its stage."""

    what: Literal["empty", "stage", "link", "output", "input"] = "empty"
    id: str = ""
    port: str = ""
    right: bool = True


class Surface(Protocol):
    """What a gesture must know of the view it happens on."""

    @property
    def project(self) -> Project: ...

    def hit(self, x: float, y: float, *, reach: float = 6.0, carrying: bool = False) -> Hit:
        """What lies there; ports and links are found within `reach` px. What carries a block means the link between
        two blocks sooner than their ports."""

    def place(self, x: float, y: float) -> Place:
        """The grid place there."""

    def inside(self, box: Box) -> frozenset[str]:
        """The stages that a rectangle touches."""


@dataclass(frozen=True)
class Target:
    """Where a release would act."""

    what: Literal["none", "place", "link", "output", "input", "stage"] = "none"
    id: str = ""
    port: str = ""


@dataclass(frozen=True)
class Ghost:
    """A block as it would stand after the release: the stage it would be, and where."""

    id: str
    column: int
    row: int


@dataclass(frozen=True)
class Preview:
    """What to show meanwhile. `refusal` is the engine's reason why this cannot be; `hint` what a release would do."""

    target: Target = Target()
    ghosts: tuple[Ghost, ...] = ()
    refusal: str = ""
    hint: str = ""
    band: Box | None = None
    line: tuple[Point, Point] | None = None
    caught: frozenset[str] = frozenset()


@dataclass(frozen=True)
class Plan:
    """The one edit a release makes, and what is selected afterwards (None: what was)."""

    title: str
    changes: Changes
    select: frozenset[str] | None = None


class Gesture(ABC):
    """One thing a hand is doing, from its first motion until release or cancel."""

    def __init__(self, surface: Surface) -> None:
        self.surface = surface
        self.preview = Preview()
        self.plan: Plan | None = None

    @abstractmethod
    def move(self, x: float, y: float) -> None:
        """The pointer is here now."""

    def release(self) -> Plan | None:
        """The pointer was let go: the edit to make, None for none."""
        plan, self.plan = self.plan, None
        self.preview = Preview()
        return plan if plan is not None and (plan.changes or plan.select is not None) else None

    def cancel(self) -> None:
        """The hand thought better of it."""
        self.plan = None
        self.preview = Preview()


def attempt(make: Callable[[], Changes]) -> tuple[Changes, str]:
    """The changes of an edit, or nothing and why not."""
    try:
        return make(), ""
    except ValueError as error:
        return {}, reason(error)
