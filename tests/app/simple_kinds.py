"""Kinds of stage for tests of the window: ports and domains of every sort, and nothing that computes.

They are put beside the real ones, so that these tests hold whatever kinds the program has.
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from typing import ClassVar, Literal

from engine.figures import Figure
from engine.project import Link, Project
from engine.sections.base import Domain
from engine.stages import KINDS, Port, Setting, Stage
from engine.stages.declare import control, figure, option, switch


class Talker(Stage):
    """Begins a path in air."""

    title: ClassVar[str] = "Talker"
    family: ClassVar[str] = "Test sources"
    order: ClassVar[int] = 900
    domain: ClassVar[Domain] = Domain.ACOUSTIC
    help: ClassVar[str] = "Somebody speaks."
    kind: Literal["talker"] = "talker"

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ACOUSTIC),)

    def summary(self) -> str:
        return "64 dB SPL"


class Capsule(Stage):
    """Air to volts."""

    title: ClassVar[str] = "Capsule"
    family: ClassVar[str] = "Test sources"
    order: ClassVar[int] = 901
    kind: Literal["capsule"] = "capsule"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ACOUSTIC, many=True),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)


class Gain(Stage):
    """One analogue input, one output, one of everything that can be set."""

    title: ClassVar[str] = "Gain stage"
    family: ClassVar[str] = "Test middle"
    order: ClassVar[int] = 902
    help: ClassVar[str] = "Makes it louder."
    kind: Literal["gain"] = "gain"
    highest_db: Figure = figure("Highest gain", "gain", "60 dB", help="How far it turns up.")
    z_in_ohm: Figure | None = figure("Input impedance", "impedance", help="May be absent.")
    powers_db: tuple[Figure, ...] = figure("Ratings", "gain", "10 dB; 20 dB", many=True, help="Several.")
    gain_db: Setting = control("Gain", "dB", 0.0, "highest_db", 1.0, 20.0, help="The knob.")
    mute: Setting = switch("Mute", help="Silence.")
    form: Literal["A", "B"] = option("Form", "A", choices=("A", "B"), help="Either.")

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE, "Output"),)

    def summary(self) -> str:
        return f"gain {self.gain_db.value:g} dB"


class Summing(Stage):
    """Many into one."""

    title: ClassVar[str] = "Summing bus"
    family: ClassVar[str] = "Test middle"
    order: ClassVar[int] = 903
    kind: Literal["summing"] = "summing"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE, many=True),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ANALOGUE),)


class Divider(Stage):
    """One into several, a number of them."""

    title: ClassVar[str] = "Divider"
    family: ClassVar[str] = "Test middle"
    order: ClassVar[int] = 904
    domain: ClassVar[Domain] = Domain.DIGITAL
    kind: Literal["divider"] = "divider"
    number: int = option("Outputs", 3, help="How many.", low=1, high=8)

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return tuple(Port(f"out_{at + 1}", Domain.ANALOGUE, f"Output {at + 1}") for at in range(self.number))

    def summary(self) -> str:
        return f"{self.number} ways"


class Stream(Stage):
    """Begins a digital path."""

    title: ClassVar[str] = "Digital stream"
    family: ClassVar[str] = "Test sources"
    order: ClassVar[int] = 905
    domain: ClassVar[Domain] = Domain.DIGITAL
    kind: Literal["stream"] = "stream"

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.DIGITAL),)


class Horn(Stage):
    """Volts to air."""

    title: ClassVar[str] = "Horn"
    family: ClassVar[str] = "Test ends"
    order: ClassVar[int] = 906
    domain: ClassVar[Domain] = Domain.ACOUSTIC
    kind: Literal["horn"] = "horn"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ANALOGUE),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", Domain.ACOUSTIC),)


class Chair(Stage):
    """Ends a path in air."""

    title: ClassVar[str] = "Chair"
    family: ClassVar[str] = "Test ends"
    order: ClassVar[int] = 907
    domain: ClassVar[Domain] = Domain.ACOUSTIC
    kind: Literal["chair"] = "chair"

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ACOUSTIC, many=True),)

    def summary(self) -> str:
        return "12 m"


SIMPLE = {str(kind.model_fields["kind"].default): kind for kind in
          (Talker, Capsule, Gain, Summing, Divider, Stream, Horn, Chair)}  # fmt: skip


@contextmanager
def simple_kinds() -> Iterator[None]:
    """Put these kinds beside the real ones for a while."""
    KINDS.update(SIMPLE)
    try:
        yield
    finally:
        for kind in SIMPLE:
            del KINDS[kind]


def chain(*kinds: str) -> Project:
    """These kinds in one row, each feeding the next, ids as the edits would give them."""
    from app import edits

    project = Project()
    last: str | None = None
    for kind in kinds:
        changes = edits.add_behind(project, kind, last)
        (last,) = edits.added_stages(changes)
        project = project.with_changes(changes)
    return project


def places(project: Project) -> dict[str, tuple[int, int]]:
    """Where each stage stands."""
    return {stage.id: (stage.column, stage.row) for stage in project.stages}


def ends(project: Project) -> set[tuple[str, str]]:
    """Who feeds whom."""
    return {(link.source, link.target) for link in project.links}


def link_between(project: Project, source: str, target: str) -> Link:
    """The link from one stage to another."""
    return next(link for link in project.links if (link.source, link.target) == (source, target))
