"""The contract of a stage kind: what every stage has, what it declares, and what it answers.

A new kind is one new file in this folder: a subclass of `Stage` with a `kind`, a `title`, a `family`, its figures,
controls and options, its ports, and `sections`.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import ClassVar

from pydantic import Field

from engine.bands import Axis
from engine.sections.base import Domain, Number, StageSections

from .declared import Declared, Values


@dataclass(frozen=True)
class Port:
    """Where a link may start or end. `many` inputs take several links; a `tap` output is a send's source."""

    name: str
    domain: Domain
    label: str = ""
    many: bool = False
    tap: bool = False


@dataclass(frozen=True)
class Limiter:
    """A limiter inside a stage: the section that limits, the control that holds its threshold, and whether it is in.

    `sort` is "rms" or "peak" (sine-scaled); `unit` that of the threshold, "dBu" or "dBFS".
    """

    section: str
    control: str
    sort: str
    unit: str
    is_in: bool


@dataclass(frozen=True)
class Meter:
    """A meter at a stage's output: its sort (one of engine.meters.KINDS) and the level of a sine that reads 0, in `unit`."""

    sort: str
    zero: float
    unit: str


class Stage(Declared):
    """One block of the path. Frozen; unknown fields are kept through a round trip."""

    title: ClassVar[str] = ""  # how the shelf names the kind
    family: ClassVar[str] = (
        ""  # the shelf's group: "Sources", "Inputs", "Mixing", "Processing", "Lines", "Outputs", "Places"
    )
    order: ClassVar[int] = 100  # place on the shelf
    domain: ClassVar[Domain] = Domain.ANALOGUE  # gives the block its shape
    help: ClassVar[str] = ""
    is_seat: ClassVar[bool] = False  # people listen here: it has `target_spl_db`, `ambient`, `role`
    is_loudspeaker: ClassVar[bool] = (
        False  # voice coils driven by an amplifier: it answers `load_ohm` and `rated_w`
    )

    id: str = Field(min_length=1, max_length=80)
    kind: str
    name: str = Field(min_length=1, max_length=80)
    column: int = Field(default=0, ge=0, le=10_000)
    row: int = Field(default=0, ge=0, le=10_000)
    rack: str | None = Field(default=None, max_length=80)
    area: str | None = Field(default=None, max_length=80)
    count: int = Field(default=1, ge=1, le=1000)
    note: str | None = Field(default=None, max_length=2000)
    made_for: Mapping[str, float] = Field(
        default_factory=dict
    )  # a limiter's control to the gain its threshold was set for

    # -- what a kind answers ---------------------------------------------------------------------------------
    def inputs(self) -> tuple[Port, ...]:
        """The input ports, in order."""
        return ()

    def outputs(self) -> tuple[Port, ...]:
        """The output ports, in order; taps last."""
        return ()

    def sections(self, values: Values, axis: Axis) -> StageSections:
        """The stage as sections: pure, broadcasting over [batch, frequency]; never `if` on a value.

        Beside the stage's own, `values` holds the project's `temperature_k`.
        """
        raise NotImplementedError(f"{type(self).__name__} has no sections")

    def arrival(self, values: Values, link: Values, reference_m: Number | None, axis: Axis) -> Number:
        """Power gain of one acoustic link into this stage: inverse square from the stated distance to the link's own.

        `link` holds the link's figures and the air's `temperature_k`, `humidity_percent` and whether it counts, `air_counts`.
        """
        if reference_m is None or "distance_m" not in link:
            return 1.0
        return (reference_m / link["distance_m"]) ** 2

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        """Reasons why these figures cannot be true together; each becomes a refusal when typed."""
        return iter(())

    def meter(self, values: Values) -> Meter | None:
        """The meter at this stage's output, if it has one."""
        return None

    def limiters(self) -> tuple[Limiter, ...]:
        """The limiters of this stage, in signal order."""
        return ()

    def load_ohm(self, values: Values) -> Number:
        """The impedance that turns a loudspeaker's voltage into watts [ohm]."""
        raise NotImplementedError(f"{type(self).__name__} is no loudspeaker")

    def rated_w(self, values: Values, rating: str) -> float | None:
        """A loudspeaker's "continuous" or "peak" rating [W], all its drivers together; None where not given."""
        return None

    def sharpest_q(self) -> float:
        """The sharpest filter's Q; above 8 the whole project takes more points a band."""
        return 0.0

    def summary(self) -> str:
        """The one line a block shows under its name."""
        return ""
