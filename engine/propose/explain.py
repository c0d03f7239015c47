"""Why: each touched control in plain words and dB, in the order of work, and what all of them together gain and cost."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from math import log10

from engine.figures import format_db
from engine.levels import NodeLevels
from engine.limits import limiter_thresholds
from engine.outcome import Outcome

from .proposal import Standing, Touched

SMALL_DB = 0.05


def with_reasons(touched: tuple[Touched, ...], before: Outcome, after: Outcome) -> tuple[Touched, ...]:
    """Each touched control with the reason why it goes where it goes."""
    return tuple(replace(each, reason=_reason(each, before, after)) for each in touched)


def _reason(each: Touched, before: Outcome, after: Outcome) -> str:
    stage = after.project.stage[each.stage]
    if each.stage not in before.project.stage:
        return "Put it in: it lowers level, clip point and the noise from ahead of it together."
    if any(limiter.control == each.control for limiter in stage.limiters()):
        return "Keeps the limit at the loudspeaker where it was, for the gain behind it has changed."
    old, new = _output(before, each.stage), _output(after, each.stage)
    gain = _gain(after, each.stage) - _gain(before, each.stage)
    if new is None or old is None or new.level is None or old.level is None:
        return "Settings on the way."
    if gain > SMALL_DB:
        rise = new.level - old.level
        words = f"Gives {_db(gain)} more here"
        if rise > SMALL_DB:
            words += f": it now sends {_level(new)}{_left(new)}, so what adds noise behind it counts {_db(rise)} less"
        return f"{words}."
    if gain < -SMALL_DB:
        words = f"Takes {_db(-gain)} out here"
        owner = _owner_fall(each.stage, before, after)
        return f"{words}{owner}{_left(new)}."
    return f"Moves its own noise and clip point: it sends {_level(new)}{_left(new)}."


def _owner_fall(stage: str, before: Outcome, after: Outcome) -> str:
    """How much the noise from ahead of a stage falls at the nearest seat behind it."""
    behind = after.project.topology.fed_by(stage)
    ahead = after.project.topology.sources_of(stage)
    for seat_after in after.seats:
        if seat_after.stage in behind:
            old = next(seat for seat in before.seats if seat.stage == seat_after.stage)
            powers = [
                sum(10.0 ** ((share.hiss or -300.0) / 10.0) for share in seat.budget if share.stage in ahead)
                for seat in (old, seat_after)
            ]
            if min(powers) > 0.0:
                fall = 10.0 * log10(powers[0] / powers[1])
                if fall > SMALL_DB:
                    return f": what comes from ahead of it hisses {_db(fall)} less at {seat_after.name}"
    return ""


def _left(node: NodeLevels) -> str:
    if node.peak_margin is None:
        return ""
    side = "left" if node.peak_margin >= 0.0 else "too much"
    return f", {_db(abs(node.peak_margin))} {side} at its output"


def _output(outcome: Outcome, stage: str) -> NodeLevels | None:
    try:
        return outcome.node(stage, "out")
    except KeyError:
        return None


def _gain(outcome: Outcome, stage: str) -> float:
    """Gain of a stage's programme from its first input to its first output [dB]; 0 where it has not both."""
    try:
        into, out_of = outcome.node(stage, "in"), outcome.node(stage, "out")
    except KeyError:
        return 0.0
    if into.level is None or out_of.level is None:
        return 0.0
    return out_of.level - into.level


def gains_and_costs(before: Standing, after: Standing) -> Iterator[str]:
    """What all the changes together do: margin, hiss, level."""
    if before.margin_db is not None and after.margin_db is not None:
        yield (
            f"Smallest peak margin {_db(before.margin_db)} at {before.margin_where}, "
            f"then {_db(after.margin_db)} at {after.margin_where}."
        )
    if before.hiss is not None and after.hiss is not None:
        yield (
            f"Hiss at {after.seat} {format_db(before.hiss, 'dB SPL')}, then {format_db(after.hiss, 'dB SPL')}: "
            f"{after.owner}, owns {after.owner_share * 100:.0f} % of it"
            + (f", where {before.owner}, owned {before.owner_share * 100:.0f} %." if before.owner != after.owner else ".")
        )
    if before.level is not None and after.level is not None:
        aim = "" if after.target is None else f", target {format_db(after.target, 'dB SPL')}"
        yield f"Level {format_db(before.level, 'dB SPL')}, then {format_db(after.level, 'dB SPL')}{aim}."


def limiter_notes(before: Outcome, after: Outcome) -> Iterator[str]:
    """Limiters left behind by a change of the gain they were right for."""
    old = {(each.limiter, each.control, each.loudspeaker): each for each in limiter_thresholds(before.plan)}
    for each in limiter_thresholds(after.plan):
        known = old.get((each.limiter, each.control, each.loudspeaker))
        if known is None or each.present is None or known.present is None:
            continue
        through = (each.present + each.gain_db) - (known.present + known.gain_db)
        if abs(through) > 0.25:
            side = "more" if through > 0.0 else "less"
            yield (
                f"To be re-set: the {each.sort} limiter of {each.limiter_name} lets {_db(abs(through))} {side} through to "
                f"{each.loudspeaker_name} than before; its threshold is locked."
            )


def _db(value: float) -> str:
    return format_db(value, "dB")


def _level(node: NodeLevels) -> str:
    return format_db(node.level or 0.0, node.unit)
