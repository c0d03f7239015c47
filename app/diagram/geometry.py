"""What stands where in the level diagram, from a path's levels: everything the painter needs, in px. No Qt here."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Literal

from app import words
from engine.levels import NodeLevels
from engine.seat import SeatLevels
from engine.sections.base import Domain

from .labels import Box, Label, TextWidth, Wish, place_labels
from .scale import DBV_OVER_DBU, Range, Scale, Unit, fit_range, spl_shift, spl_ticks, ticks
from .traces import SERIES, ColumnMap, Place, places, spans

View = Literal["levels", "to clip"]
LABEL_PX = 13.0  # height of a label's line
TOP_PX, BOTTOM_PX = 24.0, 12.0  # the axes are named above the first tick
SEAT_BAR_PX = 30.0

Span = tuple[float, float, float, float]


@dataclass(frozen=True)
class Look:
    """How the diagram is read: its unit, its view, what is marked, and the scales kept while a hand moves."""

    unit: Unit = "dBu"
    view: View = "levels"
    selected: frozenset[str] = frozenset()
    narrowest: str | None = None
    range: Range | None = None
    shift_db: float | None = None
    every_label: bool = False


@dataclass(frozen=True)
class Tick:
    """A tick of an axis: its height and what it says."""

    y: float
    text: str


@dataclass(frozen=True)
class Whisker:
    """The interval an ambiguous figure leaves a level in."""

    x: float
    top: float
    bottom: float
    series: str


@dataclass(frozen=True)
class Geometry:
    """The diagram, ready to paint. `spans` and `held` are line pieces by series, `dots` the level's nodes."""

    plot: Box
    scale: Scale
    look: Look
    shift_db: float
    ticks: tuple[Tick, ...]
    right_ticks: tuple[Tick, ...]
    guides: tuple[float, ...]
    spans: Mapping[str, tuple[Span, ...]]
    bands: tuple[tuple[tuple[float, float], ...], ...]
    dots: tuple[tuple[float, float], ...]
    bars: tuple[tuple[Span, str], ...]
    held: Mapping[str, tuple[Span, ...]]
    whiskers: tuple[Whisker, ...]
    labels: tuple[Label, ...]
    places: tuple[Place, ...]
    left_title: str
    right_title: str
    empty: str = ""

    def near(self, x: float, reach: float = 40.0) -> Place | None:
        """The node nearest to x, within reach."""
        best = min(self.places, key=lambda place: abs(place.x - x), default=None)
        return best if best is not None and abs(best.x - x) <= reach else None

    def y_of(self, place: Place, number: str) -> float | None:
        """Where one of a node's levels stands."""
        level = place.on_axis(number)
        return None if level is None else self.scale.y(level)


@dataclass(frozen=True)
class Request:
    """What the geometry is made from. `held` is the trace kept for comparison."""

    trace: Sequence[NodeLevels]
    column_of: dict[str, int]
    columns: ColumnMap
    width: float
    height: float
    text_width: TextWidth
    look: Look = field(default_factory=Look)
    seat: SeatLevels | None = None
    held: Sequence[NodeLevels] = ()
    left_px: float = 64.0
    right_px: float = 72.0


NO_PATH = "Choose a stage above, and the levels along its path stand here."


def build(request: Request) -> Geometry:
    """The geometry of one path's diagram."""
    look, to_clip = request.look, request.look.view == "to clip"
    shift = look.shift_db if look.shift_db is not None else _shift(request.trace)
    line = places(request.trace, request.column_of, request.columns, shift, to_clip=to_clip)
    held = places(
        [n for n in request.held if n.stage in request.column_of],
        request.column_of,
        request.columns,
        shift,
        to_clip=to_clip,
    )
    series = ("noise", "peak", "ceiling", "level", "clip")
    levels = [v for p in (*line, *held) for s in series if (v := p.on_axis(s)) is not None]
    fitted = look.range or fit_range(levels)
    plot = Box(request.left_px, TOP_PX, request.width - request.right_px, request.height - BOTTOM_PX)
    scale = Scale(fitted, plot.top, plot.bottom)
    on_page = {name: tuple(_drawn(spans(line, name), scale)) for name in SERIES}
    unit = None if to_clip else look.unit
    has_sound = not to_clip and any(p.node.domain is Domain.ACOUSTIC for p in line)
    bars = tuple(_seat_bars(request.seat, line, scale)) if not to_clip else ()
    labels = place_labels(
        [*_wishes(request, line, scale, to_clip), *_bar_wishes(request.seat, bars)],
        Box(plot.left, 0.0, request.width - 2.0, request.height), LABEL_PX, request.text_width,
        [span for name in ("clip", "peak", "level", "noise") for span in on_page[name]],
    )  # fmt: skip
    return Geometry(
        plot=plot, scale=scale, look=look, shift_db=shift,
        ticks=tuple(Tick(scale.y(level), text) for level, text in ticks(scale, unit)),
        right_ticks=tuple(Tick(scale.y(v), text) for v, text in spl_ticks(scale, shift)) if has_sound else (),
        guides=tuple(p.x for p in line), spans=on_page, bands=tuple(_bands(line, scale)),
        dots=tuple((p.x, scale.y(v)) for p in line if (v := p.on_axis("level")) is not None),
        bars=bars, held={name: tuple(_drawn(spans(held, name), scale)) for name in SERIES},
        whiskers=tuple(_whiskers(line, scale)), labels=labels, places=line,
        left_title="dB re clip point" if to_clip else look.unit, right_title="dB SPL" if has_sound else "",
        empty="" if line else NO_PATH,
    )  # fmt: skip


def _shift(trace: Sequence[NodeLevels]) -> float:
    """The whole tens between the axes, from the last electrical and the last acoustic level of the path."""
    sound = [n.level for n in trace if n.domain is Domain.ACOUSTIC and n.level is not None]
    volts = [n.level for n in trace if n.domain is Domain.ANALOGUE and n.level is not None]
    return spl_shift(sound[-1] if sound else None, volts[-1] if volts else None)


def _drawn(found: Sequence[Span], scale: Scale) -> Iterator[Span]:
    for x1, level1, x2, level2 in found:
        yield x1, scale.y(level1), x2, scale.y(level2)


def _bands(line: Sequence[Place], scale: Scale) -> Iterator[tuple[tuple[float, float], ...]]:
    """The band between level and peak, one quadrilateral per span."""
    for low, high in zip(spans(line, "level"), spans(line, "peak"), strict=False):
        if low[0] == high[0]:
            yield (
                (low[0], scale.y(low[1])), (low[2], scale.y(low[3])), (high[2], scale.y(high[3])), (high[0], scale.y(high[1]))
            )  # fmt: skip


def _whiskers(line: Sequence[Place], scale: Scale) -> Iterator[Whisker]:
    for place in line:
        for series in ("level", "noise", "clip"):
            if (bound := place.bound(series)) is not None:
                yield Whisker(place.x, scale.y(bound[1]), scale.y(bound[0]), series)


def _seat_bars(seat: SeatLevels | None, line: Sequence[Place], scale: Scale) -> Iterator[tuple[Span, str]]:
    """At a seat: the room's own noise stands over (or under) the hiss by the hiss margin."""
    if seat is None or not line or line[-1].node.stage != seat.stage:
        return
    place = line[-1]
    noise = place.on_axis("noise")
    if noise is not None and seat.hiss_margin is not None:
        y = scale.y(noise + seat.hiss_margin)
        yield (place.x, y, place.x + SEAT_BAR_PX, y), "room"
    for series in ("noise", "peak", "level"):
        if (level := place.on_axis(series)) is not None:
            y = scale.y(level)
            yield (place.x, y, place.x + SEAT_BAR_PX, y), series


def _bar_wishes(seat: SeatLevels | None, bars: Sequence[tuple[Span, str]]) -> Iterator[Wish]:
    if seat is None:
        return
    for (_, _, x, y), series in bars:
        if series == "room" and seat.ambient is not None:
            yield Wish(x - SEAT_BAR_PX, y, f"room {seat.ambient.name}", "room", 1, above=True)


def _wishes(request: Request, line: Sequence[Place], scale: Scale, to_clip: bool) -> Iterator[Wish]:
    """Numbers to stand beside the lines: the selected stage's first, then the narrowest margin's, the ends', the rest."""
    look = request.look
    named: set[str] = set()
    said: set[tuple[int, str, str]] = set()
    order = sorted(range(len(line)), key=lambda i: (_rank(i, line, look), i))
    for index in order:
        place, rank = line[index], _rank(index, line, look)
        if rank > 3 and not look.every_label:
            continue
        for series, above in (("clip", True), ("peak", True), ("level", False), ("noise", True)):
            value = place.on_axis(series)
            if value is None or (series == "clip" and to_clip):
                continue
            text = _said(place, series, look, to_clip)
            if rank > 2 and {(index - 1, series, text), (index + 1, series, text)} & said:
                continue  # the same number beside it says enough
            said.add((index, series, text))
            if series not in named:
                text = f"{series} {text}"
                named.add(series)
            yield Wish(
                place.x,
                scale.y(value),
                text,
                series,
                rank * 10 + _importance(series),
                above,
                strong=rank == 0,
            )


def _rank(index: int, line: Sequence[Place], look: Look) -> int:
    place = line[index]
    if place.node.stage in look.selected:
        return 0 if place.node.direction == "out" else 1
    if place.node.stage == look.narrowest:
        return 2
    if index in (0, len(line) - 1):
        return 3
    return 4 + index % 7


def _importance(series: str) -> int:
    return ("level", "clip", "peak", "noise").index(series)


def _said(place: Place, series: str, look: Look, to_clip: bool) -> str:
    """A level as its own axis says it."""
    value: float | None = getattr(place.node, series)
    if value is None:
        return words.NOTHING
    if to_clip:
        return words.number(value - place.reference_db, 1)
    if place.node.domain is Domain.ANALOGUE:
        if look.unit == "V":
            return words.volts(words.volts_of_dbu(value), 3)
        return words.number(value + (DBV_OVER_DBU if look.unit == "dBV" else 0.0), 1, signed=True)
    if place.node.domain is Domain.DIGITAL:
        return f"{words.number(value, 1)}{words.THIN}FS"
    return words.number(value, 0 if look.unit != "V" else 1)
