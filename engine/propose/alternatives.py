"""The real ways to place a gain, side by side: each a full search with that one freedom unlocked beside the faders."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field, replace

from engine.figures import Figure
from engine.loads import amplifiers_of
from engine.outcome import Outcome, evaluate
from engine.project import Changes, Link
from engine.sections.base import ActiveStage, Domain, PassiveStage
from engine.stages import Stage, template

from .impossible import Impossible
from .levers import Hand
from .proposal import Proposal, Standing, edit_of, standing
from .protect import reset_limiters
from .search import pose
from .wishes import Wishes
from .working import describe, propose

LOSSES_DB = (6, 10, 12, 15, 20, 26, 30)  # of pads as they are sold (common practice, no source)
Progress = Callable[[float], bool | None]


@dataclass(frozen=True, eq=False)
class Alternative:
    """One way. `proposal` is None where it cannot meet the aims: `miss_db` then says by how much, `message` which.

    `standing` holds margin, hiss, owner, faders and meters of the proposal, or of what comes nearest.
    """

    name: str
    title: str
    proposal: Proposal | None
    standing: Standing | None
    miss_db: float
    message: str
    nearest: Proposal | None = field(default=None, repr=False)


@dataclass(frozen=True)
class _Way:
    name: str
    title: str
    places: frozenset[str]
    pads: bool = False


WAYS = (
    _Way("faders", "Ride the mixer", frozenset()),
    _Way("digital", "Digital trim ahead of the D/A converter", frozenset({"digital"})),
    _Way("output range", "Analogue output range behind the D/A converter", frozenset({"output range"})),
    _Way("attenuator", "Amplifier attenuator", frozenset({"attenuator"})),
    _Way("range", "The amplifier's other range", frozenset({"range"})),
    _Way("pad", "Pad in the line", frozenset({"pad"}), pads=True),
    _Way("range and digital", "The amplifier's other range, the rest as digital trim", frozenset({"range", "digital"})),
    _Way("range and pad", "The amplifier's other range, the rest as a pad", frozenset({"range", "pad"}), pads=True),
    _Way("all", "Everything that is free", frozenset({"digital", "output range", "attenuator", "range", "pad", "gain"})),
)  # fmt: skip


def alternatives(
    outcome: Outcome, wishes: Wishes | None = None, progress: Progress | None = None
) -> tuple[Alternative, ...]:
    """Every way this project has, in a fixed order. Ways without a control of their own are left out.

    `progress` hears how much is done, 0 to 1; where it answers False the rest is left out.
    """
    wishes = wishes or Wishes()
    place_of = {hand: place(outcome, hand) for lever in pose(outcome, wishes).levers for hand in lever.hands}
    found: list[Alternative] = []
    for index, way in enumerate(WAYS):
        if progress is not None and progress(index / len(WAYS)) is False:
            break
        own = {hand for hand, where in place_of.items() if where in way.places}
        if "range" in way.places and way.name != "all" and not any(place_of[hand] == "range" for hand in own):
            continue
        if way.places and not own and not way.pads:
            continue
        free = own | {hand for hand, where in place_of.items() if where == "fader"}
        found.append(_searched(outcome, way, wishes, frozenset(free), place_of))
    if progress is not None:
        progress(1.0)
    return tuple(found)


def place(outcome: Outcome, hand: Hand) -> str:
    """Where in the path a control works: "fader", "attenuator", "range", "pad", "digital", "output range" or "gain"."""
    plan, stage = outcome.plan, outcome.project.stage[hand[0]]
    spec = stage.control_specs()[hand[1]]
    answer = plan.answers[stage.id]
    has_choices = bool(stage.control_choices(hand[1]))
    if hasattr(stage, "least_load_ohm"):
        return "range" if has_choices else "attenuator"
    if spec.work_low is not None:
        return "fader"
    if isinstance(answer, PassiveStage):
        return "pad"
    if _behind_converter(answer, has_choices):
        return "output range"
    if spec.unit == "dB" and any(section.domain is Domain.DIGITAL for section in answer.sections):
        return "digital"
    return "gain"


def _behind_converter(answer: ActiveStage, has_choices: bool) -> bool:
    """Whether a switch of a stage that ends in a D/A converter is its analogue range."""
    return has_choices and any(section.full_scale_v is not None for section in answer.sections)


def _searched(
    outcome: Outcome, way: _Way, wishes: Wishes, free: frozenset[Hand], place_of: Mapping[Hand, str]
) -> Alternative:
    results: list[Proposal | Impossible] = []
    ranges = {hand for hand in free if place_of[hand] == "range"}
    starts = [outcome] if not ranges or way.name == "all" else _in_other_ranges(outcome, ranges)
    held = frozenset() if way.name == "all" else ranges
    for start in starts:
        only = replace(wishes, only=free - held)
        has_pads = any(place_of[hand] == "pad" for hand in free)
        if not way.pads or has_pads:
            results.append(_against(outcome, start, propose(start, only), wishes))
        if way.pads:
            results += [_against(outcome, padded, propose(padded, only), wishes) for padded in _padded(start)]
    good = [result for result in results if isinstance(result, Proposal)]
    if good:
        best = min(good, key=_rank)
        return Alternative(way.name, way.title, best, best.after, 0.0, "")
    missed = [result for result in results if isinstance(result, Impossible)]
    least = min(missed, key=lambda each: each.miss_db)
    nearest = least.nearest
    return Alternative(
        way.name,
        way.title,
        None,
        None if nearest is None else nearest.after,
        least.miss_db,
        least.message,
        nearest,
    )


def _rank(found: Proposal) -> tuple[float, float, int]:
    """Hiss in steps of half a decibel, then margin, then how much there is to touch."""
    hiss = found.after.hiss if found.after.hiss is not None else 0.0
    return (round(2.0 * hiss) / 2.0, -round(found.after.margin_db or 0.0, 1), len(found.touched))


def _in_other_ranges(outcome: Outcome, ranges: set[Hand]) -> list[Outcome]:
    """The project with every amplifier's range switch at another position, the same place in each list."""
    project = outcome.project
    others = {
        hand: [
            value
            for _, value in project.stage[hand[0]].control_range(hand[1]).choices
            if value != getattr(project.stage[hand[0]], hand[1]).value
        ]
        for hand in sorted(ranges)
    }
    count = max(len(values) for values in others.values())
    found = []
    for turn in range(count):
        at = {hand: values[min(turn, len(values) - 1)] for hand, values in others.items() if values}
        found.append(evaluate(project.with_changes(edit_of(outcome, at)), outcome))
    return found


def _padded(outcome: Outcome) -> Iterator[Outcome]:
    """The project with a pad of each usual loss ahead of every amplifier."""
    for loss in LOSSES_DB:
        changes = pads_ahead(outcome, loss)
        if changes:
            yield evaluate(outcome.project.with_changes(changes))


def _against(
    outcome: Outcome, start: Outcome, found: Proposal | Impossible, wishes: Wishes
) -> Proposal | Impossible:
    """What was found from another start, told against the project as it is, limiters re-set for the way from there."""
    if start is outcome:
        return found
    near = found if isinstance(found, Proposal) else found.nearest
    if near is not None:
        after = near.outcome
        if resets := reset_limiters(outcome, after, wishes):
            after = evaluate(after.project.with_changes(resets), after)
        near = describe(outcome, after, list(near.kept_notes))
    if isinstance(found, Proposal):
        assert near is not None
        return near
    return replace(found, nearest=near)


def pads_ahead(outcome: Outcome, loss_db: float) -> Changes:
    """The edit that puts a pad into the line ahead of every amplifier; empty where none can be put.

    Everything from an amplifier's column on moves one column to the right.
    """
    project = outcome.project
    ahead: list[tuple[Stage, Link]] = []
    for stage in amplifiers_of(outcome.plan):
        links = project.topology.into[stage.id]
        if len(links) == 1 and links[0].wiring == "balanced":
            ahead.append((stage, links[0]))
    if not ahead:
        return {}
    first = min(stage.column for stage, _ in ahead)
    changes: dict[str, tuple[Stage | Link | None, Stage | Link | None]] = {
        stage.id: (stage, stage.with_fields(column=stage.column + 1))
        for stage in project.stages
        if stage.column >= first
    }
    for stage, link in ahead:
        key = _unused(project.stage.keys() | project.link.keys(), f"pad_{stage.id}")
        figures = {"loss_db": Figure(text=f"{loss_db:g} dB"), "z_ohm": Figure(text="5 k")}
        name = f"Pad {loss_db:g} dB ahead of {stage.name}"[:80]
        pad = template("pad", key, name, column=stage.column, row=stage.row, count=stage.count, **figures)
        onward = Link(
            id=_unused(project.link.keys(), f"{key}-{stage.id}"),
            source=key,
            target=stage.id,
            input=link.input,
        )
        changes[key] = (None, pad)
        changes[link.id] = (link, link.with_fields(target=key, input="in"))
        changes[onward.id] = (None, onward)
    return changes


def _unused(taken: set[str] | object, wanted: str) -> str:
    name, n = wanted, 2
    while name in taken:  # type: ignore[operator]
        name, n = f"{wanted}_{n}", n + 1
    return name


def as_it_is(outcome: Outcome) -> Standing:
    """The present settings as a point beside the alternatives."""
    return standing(outcome)
