"""The project: one venue's system as frozen stages and links, and the header that names it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import cached_property
from typing import Annotated, Any, Literal, Self

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, SerializeAsAny, model_validator

from engine import stages as kinds
from engine.bands import SHARP_POINTS_PER_BAND, USUAL_POINTS_PER_BAND, Axis, make_axis
from engine.exposure import CRITERIA, Criterion
from engine.figures import Figure, parse
from engine.stages import Declared, Stage
from engine.stages.declare import figure, option

from .topology import Topology, check_links

HEADER_KEY = "project"  # the id under which an edit of the header travels

Wiring = Literal["balanced", "one leg"]


class Link(Declared):
    """A connection from one stage's output to another's input."""

    id: str = Field(min_length=1, max_length=200)
    source: str
    output: str = "out"
    target: str
    input: str = "in"
    wiring: Wiring = option(
        "Wiring", "balanced", choices=("balanced", "one leg"),
        help="One leg: a balanced output wired to an unbalanced input. What that costs depends on the kind of output.",
    )  # fmt: skip
    distance_m: Figure | None = figure(
        "Distance", "length", help="From the source or loudspeaker to the microphone or seat."
    )
    off_axis_db: Figure | None = figure(
        "Off-axis loss",
        "loss",
        help="What the loudspeaker loses towards this seat; 0 dB on its axis, 6 dB at the edge of its rated angle.",
    )

    @property
    def called(self) -> str:
        return f"the link {self.source} to {self.target}"


class Header(Declared):
    """What is true of the whole project."""

    name: str = Field(default="Untitled venue", min_length=1, max_length=120)
    revision: int = Field(default=1, ge=1, le=1_000_000)
    status: Literal["plan", "as built"] = option(
        "Status", "plan", choices=("plan", "as built"), help="Printed on every sheet."
    )
    author: str = Field(default="", max_length=120)
    note: str = Field(default="", max_length=4000)
    temperature_c: Figure = figure(
        "Temperature", "temperature", "20 °C", help="Sets thermal noise and air absorption."
    )
    humidity_percent: Figure = figure("Relative humidity", "percent", "50 %", help="Sets air absorption.")
    air: Literal["counted", "left out"] = option(
        "Air absorption", "counted", choices=("counted", "left out"),
        help="Left out: inverse square alone, as in a sum done by hand.",
    )  # fmt: skip
    tone_hz: Figure = figure(
        "Test tone",
        "frequency",
        "1 kHz",
        help="The sine that readings are taken with; 400 Hz or less suits simple meters.",
    )
    reserve_db: Figure = figure(
        "Wanted reserve", "level_db", "6 dB", help="Peak margins above this count as equal in a proposal."
    )

    exposure: Literal["NIOSH 1998", "OSHA 1910.95", "WHO venues 2022", "DIN 15905-5", "own"] = option(
        "Exposure criterion",
        "NIOSH 1998",
        choices=("NIOSH 1998", "OSHA 1910.95", "WHO venues 2022", "DIN 15905-5", "own"),
        help="What the loudest seat's level is held against. Local law and the venue's licence set the limit.",
    )
    own_level_dba: Figure = figure("Own limit", "spl", "99 dB(A)", help="Level of your own criterion.")
    own_time_s: Figure = figure(
        "for", "time", "30 min", help="Time your own criterion permits at that level."
    )
    own_exchange_db: Figure = figure("Exchange rate", "level_db", "3 dB", help="How many dB halve the time.")

    def in_use(self, name: str) -> bool:
        return name not in ("own_level_dba", "own_time_s", "own_exchange_db") or self.exposure == "own"

    @property
    def criterion(self) -> Criterion:
        """The exposure criterion the person picked."""
        if self.exposure != "own":
            return next(each for each in CRITERIA if each.name == self.exposure)
        level, time, exchange = (
            parse(given.text, quantity).amount
            for given, quantity in (
                (self.own_level_dba, "spl"),
                (self.own_time_s, "time"),
                (self.own_exchange_db, "level_db"),
            )
        )
        return Criterion("own limit", level, time, exchange, "the person's own")

    @property
    def called(self) -> str:
        return "the project"

    @property
    def temperature_k(self) -> float:
        return parse(self.temperature_c.text, "temperature").amount + 273.15


def _stage_of_its_kind(raw: Any) -> Any:
    if isinstance(raw, Stage):
        return raw
    if not isinstance(raw, dict):
        raise ValueError("a stage is an object with id, kind and name")
    kind = raw.get("kind")
    if not isinstance(kind, str) or kind not in kinds.KINDS:
        raise ValueError(f"kind {kind!r} is unknown here: known kinds are {', '.join(kinds.KINDS)}")
    return kinds.KINDS[kind].model_validate(raw)


AnyStage = Annotated[SerializeAsAny[Stage], BeforeValidator(_stage_of_its_kind)]
Item = Stage | Link | Header
Changes = Mapping[str, tuple[Item | None, Item | None]]


class Project(BaseModel):
    """One venue's system. Immutable; `with_changes` gives the next one."""

    model_config = ConfigDict(frozen=True, extra="allow", allow_inf_nan=False)

    header: Header = Header()
    stages: tuple[AnyStage, ...] = ()
    links: tuple[Link, ...] = ()

    @model_validator(mode="after")
    def _ids_are_unique(self) -> Self:
        seen: set[str] = {HEADER_KEY}
        for key in (*(stage.id for stage in self.stages), *(link.id for link in self.links)):
            if key in seen:
                raise ValueError(f"id {key!r} stands twice: every stage and link needs its own")
            seen.add(key)
        return self

    @model_validator(mode="after")
    def _links_fit(self) -> Self:
        check_links(self.stage, self.links)
        return self

    @cached_property
    def stage(self) -> Mapping[str, Stage]:
        """Stages by id."""
        return {stage.id: stage for stage in self.stages}

    @cached_property
    def link(self) -> Mapping[str, Link]:
        """Links by id."""
        return {link.id: link for link in self.links}

    @cached_property
    def topology(self) -> Topology:
        """Who feeds whom."""
        return Topology.of(self.stage, self.links)

    def item(self, key: str) -> Item | None:
        """The stage, link or header with this id; None where there is none."""
        if key == HEADER_KEY:
            return self.header
        return self.stage.get(key) or self.link.get(key)

    def axis(self, tone_hz: float | None = None) -> Axis:
        """The frequency axis this project is solved on: nine points a band where a filter is sharper than Q 8."""
        sharp = any(stage.sharpest_q() > 8.0 for stage in self.stages)
        tone = tone_hz if tone_hz is not None else parse(self.header.tone_hz.text, "frequency").amount
        return make_axis(SHARP_POINTS_PER_BAND if sharp else USUAL_POINTS_PER_BAND, tone)

    def with_changes(self, changes: Changes, *, undo: bool = False) -> Project:
        """The project with each change's after put in place of its before (or the reverse), checked as a whole.

        Raises `LinkError` where the links no longer fit, ValueError where an id would stand twice.
        """
        stages, links, header = dict(self.stage), dict(self.link), self.header
        wired = False
        for key, (before, after) in changes.items():
            old, new = (after, before) if undo else (before, after)
            if isinstance(old, Header) or isinstance(new, Header):
                header = new if isinstance(new, Header) else Header()
                continue
            wired = wired or _changes_ports(old, new)
            for group, sort in ((stages, Stage), (links, Link)):
                if isinstance(old, sort):
                    group.pop(key, None) if new is None else None
                if isinstance(new, sort):
                    group[key] = new  # type: ignore[assignment]
        if wired:
            check_links(stages, links.values())
        return self.model_copy(
            update={"header": header, "stages": tuple(stages.values()), "links": tuple(links.values())}
        )._without_caches()

    def _without_caches(self) -> Project:
        for cached in ("stage", "link", "topology"):
            self.__dict__.pop(cached, None)
        return self

    def items(self) -> Iterator[tuple[str, Item]]:
        """Every item under its id."""
        yield HEADER_KEY, self.header
        yield from self.stage.items()
        yield from self.link.items()

    def same_as(self, other: Project) -> bool:
        """Whether the two would be written alike, whatever order their items stand in."""
        return (
            self.header == other.header
            and self.stage == other.stage
            and self.link == other.link
            and self.__pydantic_extra__ == other.__pydantic_extra__
        )


def _changes_ports(old: Item | None, new: Item | None) -> bool:
    """Whether the links must be checked again."""
    if isinstance(old, Stage) and isinstance(new, Stage):
        return (
            old.count != new.count or old.column != new.column
            or old.inputs() != new.inputs() or old.outputs() != new.outputs()
        )  # fmt: skip
    if isinstance(old, Link) and isinstance(new, Link):
        return (old.source, old.output, old.target, old.input) != (
            new.source,
            new.output,
            new.target,
            new.input,
        )
    return not (isinstance(new, Stage) and old is None)


def difference(before: Project, after: Project) -> Changes:
    """What leads from one project to the other."""
    old, new = dict(before.items()), dict(after.items())
    return {
        key: (old.get(key), new.get(key)) for key in old.keys() | new.keys() if old.get(key) != new.get(key)
    }
