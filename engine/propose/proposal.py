"""A proposal: settings that were worked out, solved exactly, with what they gain and what a hand must touch."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from engine.loads import amplifiers_of
from engine.outcome import Outcome
from engine.project import Changes, difference
from engine.seat import SeatLevels
from engine.stages import Stage
from engine.stages.panel import marking

from .levers import Hand


@dataclass(frozen=True)
class Touched:
    """One control a hand has to touch: where it stands and where it goes, as marked on its panel."""

    stage: str
    name: str
    control: str
    label: str
    before: str
    after: str
    value_before: float | None
    value_after: float | None
    unit: str
    reason: str = ""

    @property
    def change_db(self) -> float | None:
        """How far it moves [dB]; None where it is not marked in dB."""
        if not self.unit.startswith("dB") or self.value_before is None or self.value_after is None:
            return None
        return self.value_after - self.value_before


@dataclass(frozen=True)
class Standing:
    """What settings come to. Levels in dB SPL, margins in dB; None where there is none.

    `seat` is the nearest seat's name (the one with the most hiss where none is called nearest), `level` and `target` are
    the reference seat's. `owner` owns the largest share of the hiss.
    """

    margin_db: float | None
    margin_stage: str | None
    margin_where: str
    seat: str | None
    hiss: float | None
    hiss_a: float | None
    hiss_margin: float | None
    owner: str
    owner_share: float
    level: float | None
    target: float | None
    faders: tuple[str, ...]
    meters: tuple[str, ...]


@dataclass(frozen=True, eq=False)
class Proposal:
    """Settings on real steps. `changes` is the edit that makes them, empty where the present ones are as good.

    `touched` stands in the order of work: input to output, amplifiers last. `reasons` say why in the same order, `notes`
    what else to know. `outcome` is the project solved with them.
    """

    changes: Changes
    before: Standing
    after: Standing
    touched: tuple[Touched, ...]
    reasons: tuple[str, ...]
    notes: tuple[str, ...]
    outcome: Outcome = field(repr=False)
    kept_notes: tuple[str, ...] = ()  # those of the search alone

    @property
    def is_settled(self) -> bool:
        """Whether nothing has to be touched."""
        return not self.changes


SIDE = {"in": "input", "out": "output"}


def standing(outcome: Outcome) -> Standing:
    """The numbers of a solved project that a proposal is judged by."""
    first = outcome.narrowest
    seat, reference = nearest_seat(outcome), reference_seat(outcome)
    top = seat.budget[0] if seat is not None and seat.budget else None
    return Standing(
        margin_db=None if first is None else first.margin_db,
        margin_stage=None if first is None else first.stage,
        margin_where="" if first is None else f"{first.name}, {first.section} {SIDE[first.side]}",
        seat=None if seat is None else seat.name,
        hiss=None if seat is None else seat.hiss,
        hiss_a=None if seat is None else seat.hiss_a,
        hiss_margin=None if seat is None else seat.hiss_margin,
        owner="" if top is None else f"{top.name}, {top.origin}",
        owner_share=0.0 if top is None else top.share,
        level=None if reference is None else reference.level,
        target=None if reference is None else reference.target,
        faders=tuple(_faders(outcome)),
        meters=tuple(f"{m.name} {m.programme:.1f}".replace("-", "\u2212")
                     for m in outcome.meters if m.programme is not None),
    )  # fmt: skip


def nearest_seat(outcome: Outcome) -> SeatLevels | None:
    """The seat called nearest, else the one with the most hiss."""
    heard = [seat for seat in outcome.seats if seat.hiss is not None]
    named = [seat for seat in heard if seat.role == "nearest"]
    return max(named or heard, key=lambda seat: seat.hiss or 0.0, default=None)


def reference_seat(outcome: Outcome) -> SeatLevels | None:
    """The seat called reference, else the first with a target, else the first."""
    seats = outcome.seats
    for wanted in (
        [seat for seat in seats if seat.role == "reference"],
        [seat for seat in seats if seat.target is not None],
        list(seats),
    ):
        if wanted:
            return wanted[0]
    return None


def _faders(outcome: Outcome) -> list[str]:
    found = []
    for key in outcome.project.topology.order:
        stage = outcome.project.stage[key]
        for name, spec, setting in stage.controls():
            if spec.work_low is not None:
                found.append(f"{stage.name} {marking(spec, stage.control_range(name), setting)}")
    return found


def edit_of(outcome: Outcome, values: Mapping[Hand, float]) -> Changes:
    """The edit that sets these controls; only what differs."""
    project = outcome.project
    moved = dict(project.stage)
    for (stage, control), value in values.items():
        now = getattr(moved[stage], control).value
        if now is None or abs(now - value) > 1e-9:
            moved[stage] = moved[stage].with_control(control, round(value, 9))
    return {key: (project.stage[key], stage) for key, stage in moved.items() if stage != project.stage[key]}


def touched_by(before: Outcome, after: Outcome) -> tuple[Touched, ...]:
    """The controls that differ between two outcomes, in the order of work: input to output, amplifiers last."""
    amplifiers = {stage.id for stage in amplifiers_of(after.plan)}
    order = after.project.topology.order
    found: list[tuple[bool, int, Touched]] = []
    for key in difference(before.project, after.project):
        old, new = before.project.stage.get(key), after.project.stage.get(key)
        if isinstance(new, Stage) and old is None:
            there = Touched(
                key, new.name, "", new.title, "not there", new.summary() or "in the line", None, None, ""
            )
            found.append((False, order.index(key), there))
        if old is None or new is None:
            continue
        for name, spec, setting in new.controls():
            was = getattr(old, name)
            if was.value != setting.value:
                marks = (
                    marking(spec, old.control_range(name), was),
                    marking(spec, new.control_range(name), setting),
                )
                each = Touched(key, new.name, name, spec.label, *marks, was.value, setting.value, spec.unit)
                found.append((key in amplifiers, order.index(key), each))
    return tuple(each for _, _, each in sorted(found, key=lambda item: item[:2]))
