"""Tolerance: every figure drawn at random within its own interval, the project solved for each draw, and what that leaves.

A figure's draw is uniform between the ends of its interval (a typed band, a tolerance), half of them on either side of the
amount as typed. What a data sheet leaves unsaid is not drawn: `Outcome.assumptions` bounds it. Stages that stand for several
alike share one draw. Seeded: the same project and seed give the same bands.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field

import numpy as np

from .compile import Plan, redrawn
from .figures import figure_interval
from .levels import ZERO_POWER, node_columns
from .margins import find_margins
from .outcome import Outcome
from .rows import Array
from .seat import seats_of
from .sections.base import Domain
from .solve import FLAT, NOISE, PROGRAMME, solve
from .stages import Values

CHUNK = 128
MOST_NUMBERS = 8_000_000  # of one array of a chunk, so that large venues stay within memory
HELD_DRAWS = 1024  # on which holding a figure is tried; the same draws with and without
HELD_FIGURES = 4  # the likeliest of each number are tried
NODE_NUMBERS = ("headroom", "level", "noise")
AIMS = ("headroom", "level", "hiss")

Progress = Callable[[float], None]


@dataclass(frozen=True)
class Band:
    """5th, 50th and 95th percentile. None where nothing sounds."""

    low: float
    middle: float
    high: float

    @property
    def width(self) -> float:
        return self.high - self.low


@dataclass(frozen=True)
class Drawn:
    """One figure that was drawn: of which stage or link, as typed, and its ends in base units."""

    key: str
    owner: str
    figure: str
    label: str
    text: str
    low: float
    middle: float
    high: float


@dataclass(frozen=True)
class NodeBand:
    """What a node's numbers may be; None where there is none."""

    stage: str
    name: str
    port: str
    direction: str
    unit: str
    headroom: Band | None
    level: Band | None
    noise: Band | None


@dataclass(frozen=True)
class SeatBand:
    """Level and hiss a seat may have [dB SPL]."""

    stage: str
    name: str
    level: Band | None
    hiss: Band | None


@dataclass(frozen=True)
class Influence:
    """How many dB the band of a number falls by when one figure is held at its middle, same draws."""

    drawn: Drawn
    width_db: float
    held_width_db: float

    @property
    def shrinks_db(self) -> float:
        return self.width_db - self.held_width_db


@dataclass(frozen=True, eq=False)
class Tolerance:
    """What tolerances leave. `margin` is the smallest peak margin of all; `influences` lists for "headroom" (that margin), "level"

    (reference seat) and "hiss" (nearest seat) the figures whose measuring shrinks the band, most first. `draws` is
    less than asked for where it was cancelled.
    """

    draws: int
    seed: int
    is_complete: bool
    drawn: tuple[Drawn, ...]
    nodes: tuple[NodeBand, ...]
    seats: tuple[SeatBand, ...]
    margin: Band | None
    influences: Mapping[str, tuple[Influence, ...]]

    def node(self, stage: str, direction: str, port: str | None = None) -> NodeBand:
        """One node's bands. Raises KeyError where there is none."""
        for band in self.nodes:
            if (band.stage, band.direction) == (stage, direction) and port in (None, band.port):
                return band
        raise KeyError(f"{stage} has no {direction} node {port or ''}".rstrip())


def spread(
    outcome: Outcome, draws: int = 10_000, seed: int = 1,
    progress: Progress | None = None, cancelled: Callable[[], bool] | None = None,
) -> Tolerance:  # fmt: skip
    """Draw every figure that has an interval and solve each draw, in chunks.

    `progress` hears how much is done, 0 to 1; `cancelled` is asked between chunks. Raises ValueError for no draws.
    """
    if draws < 1:
        raise ValueError(f"{draws} draws: at least one is needed")
    sampler = _Sampler(outcome, seed, draws if find_drawn(outcome) else 1)
    kept: list[_Chunk] = []
    done, is_complete = 0, True
    for start, stop in sampler.chunks():
        if cancelled is not None and cancelled():
            is_complete = False
            break
        kept.append(sampler.solved(start, stop))
        done = stop
        if progress is not None:
            progress(0.8 * done / sampler.draws)
    if not kept:
        kept.append(sampler.solved(0, 1))
    whole = _Chunk.joined(kept)
    influences = sampler.influences(whole, progress, cancelled) if is_complete else {}
    if progress is not None:
        progress(1.0)
    return Tolerance(
        done, seed, is_complete, sampler.drawn, tuple(_node_bands(outcome, whole)), tuple(_seat_bands(outcome, whole)),
        _band(whole.margin), influences,
    )  # fmt: skip


def find_drawn(outcome: Outcome) -> tuple[Drawn, ...]:
    """Every figure of a stage or link that has an interval."""
    found = []
    for key, item in (*outcome.project.stage.items(), *outcome.project.link.items()):
        for name, spec, given in item.figures():
            low, middle, high = figure_interval(given, spec.quantity)
            if high > low:
                found.append(Drawn(key, item.called, name, spec.label, given.text, low, middle, high))
    return tuple(found)


@dataclass(frozen=True, eq=False)
class _Chunk:
    """Numbers of some draws: `nodes` [number, node, draw], `level` and `hiss` [seat, draw], `margin` [draw]."""

    nodes: np.ndarray[tuple[int, ...], np.dtype[np.float32]]
    level: Array
    hiss: Array
    margin: Array

    @classmethod
    def joined(cls, chunks: list[_Chunk]) -> _Chunk:
        return cls(
            np.concatenate([c.nodes for c in chunks], axis=2), np.concatenate([c.level for c in chunks], axis=1),
            np.concatenate([c.hiss for c in chunks], axis=1), np.concatenate([c.margin for c in chunks]),
        )  # fmt: skip


@dataclass(eq=False)
class _Sampler:
    """Draws, and solves what was drawn."""

    outcome: Outcome
    seed: int
    draws: int
    drawn: tuple[Drawn, ...] = ()
    turns: Array = field(default_factory=lambda: np.zeros((0, 0)))  # [figure, draw], -1 ... 1

    def __post_init__(self) -> None:
        self.drawn = find_drawn(self.outcome)
        random = np.random.default_rng(self.seed)
        self.turns = random.uniform(-1.0, 1.0, (len(self.drawn), self.draws))
        self.seat_rows = [self.outcome.plan.input_row(seat.id) for seat in seats_of(self.outcome.plan)]

    def chunks(self) -> Iterator[tuple[int, int]]:
        plan = self.outcome.plan
        size = max(1, min(CHUNK, MOST_NUMBERS // (plan.graph.size * plan.axis.size)))
        return ((start, min(start + size, self.draws)) for start in range(0, self.draws, size))

    def solved(self, start: int, stop: int, held: int | None = None) -> _Chunk:
        """Some draws solved; `held` is a figure to be left at its middle."""
        turns = self.turns[:, start:stop]
        if held is not None:
            turns = turns.copy()
            turns[held] = 0.0
        plan = self.drawn_plan(turns)
        solution = solve(plan.graph, plan.rows, plan.axis)
        kind = self.outcome.sum_kind
        margins = find_margins(plan.graph, plan.rows, solution, plan.axis, kind)
        columns = node_columns(plan, solution, margins, kind)
        zero = ZERO_POWER[Domain.ACOUSTIC]
        sums = solution.sums[self.seat_rows]
        with np.errstate(divide="ignore"):
            level = 10.0 * np.log10(sums[:, PROGRAMME, :, kind] / zero)
            hiss = 10.0 * np.log10(sums[:, NOISE, :, FLAT] / zero)
        nodes = np.array([columns[name] for name in NODE_NUMBERS], dtype=np.float32)
        return _Chunk(nodes, level, hiss, margins.own_db.min(axis=0))

    def drawn_plan(self, turns: Array) -> Plan:
        """The project's plan for draws [figure, draw]."""
        project = self.outcome.project
        numbers: dict[str, dict[str, Array]] = {}
        for each, turn in zip(self.drawn, turns, strict=True):
            above, below = each.high - each.middle, each.middle - each.low
            amount = each.middle + np.where(turn > 0.0, turn * above, turn * below)
            numbers.setdefault(each.key, {})[each.figure] = amount[:, None]
        overrides: dict[str, Values] = dict(self.outcome.plan.overrides)
        for key, drawn in numbers.items():
            item = project.stage.get(key) or project.link[key]
            overrides[key] = (overrides.get(key) or item.values()).replaced(drawn)
        return redrawn(self.outcome.plan, overrides, turns.shape[1])

    def influences(
        self, whole: _Chunk, progress: Progress | None, cancelled: Callable[[], bool] | None
    ) -> dict[str, tuple[Influence, ...]]:
        """For each aim the likeliest figures by correlation, each then held and solved anew."""
        aims = {name: number for name, number in self._aims(whole).items() if np.isfinite(number).all()}
        count = min(self.draws, HELD_DRAWS)
        tried: dict[int, dict[str, Array]] = {}
        likely = {name: self._likely(number) for name, number in aims.items()}
        wanted = sorted({figure for figures in likely.values() for figure in figures})
        for turn, figure in enumerate(wanted):
            if cancelled is not None and cancelled():
                break
            parts = [self.solved(a, min(b, count), figure) for a, b in self.chunks() if a < count]
            tried[figure] = self._aims(_Chunk.joined(parts))
            if progress is not None:
                progress(0.8 + 0.2 * (turn + 1) / len(wanted))
        found: dict[str, tuple[Influence, ...]] = {}
        for name, number in aims.items():
            width = _width(number[:count])
            each = [
                Influence(self.drawn[f], width, _width(tried[f][name])) for f in likely[name] if f in tried
            ]
            found[name] = tuple(sorted(each, key=lambda influence: -influence.shrinks_db))
        return found

    def _aims(self, chunk: _Chunk) -> dict[str, Array]:
        found = {"headroom": chunk.margin}
        if len(chunk.level):
            roles = [getattr(seat, "role", "") for seat in seats_of(self.outcome.plan)]
            reference = roles.index("reference") if "reference" in roles else 0
            nearest = (
                roles.index("nearest") if "nearest" in roles else int(np.argmax(chunk.hiss.mean(axis=1)))
            )
            found["level"], found["hiss"] = chunk.level[reference], chunk.hiss[nearest]
        return found

    def _likely(self, number: Array) -> list[int]:
        """The figures that go with a number most closely."""
        if not len(self.drawn) or not np.ptp(number) > 0.0:
            return []
        turns = self.turns[:, : number.size]
        apart = number - number.mean()
        share = (
            (turns - turns.mean(axis=1, keepdims=True))
            @ apart
            / (turns.std(axis=1) * number.size * apart.std())
        )
        return [int(each) for each in np.argsort(-np.abs(share), kind="stable")[:HELD_FIGURES]]


def _node_bands(outcome: Outcome, whole: _Chunk) -> Iterator[NodeBand]:
    for place, node in enumerate(outcome.nodes):
        bands = [_band(whole.nodes[number, place]) for number in range(len(NODE_NUMBERS))]
        yield NodeBand(node.stage, node.name, node.port, node.direction, node.unit, *bands)


def _seat_bands(outcome: Outcome, whole: _Chunk) -> Iterator[SeatBand]:
    for place, seat in enumerate(seats_of(outcome.plan)):
        yield SeatBand(seat.id, seat.name, _band(whole.level[place]), _band(whole.hiss[place]))


def _band(numbers: Array | np.ndarray[tuple[int, ...], np.dtype[np.float32]]) -> Band | None:
    if not np.isfinite(numbers).all():
        return None
    low, middle, high = np.percentile(numbers.astype(float), (5.0, 50.0, 95.0)).tolist()
    return Band(low, middle, high)


def _width(numbers: Array) -> float:
    low, high = np.percentile(numbers, (5.0, 95.0)).tolist()
    return float(high - low)
