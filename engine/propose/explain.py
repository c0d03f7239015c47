"""Why: each touched control in plain words and dB, in the order of work, and what all of them together gain and cost."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from math import log10

from engine.figures import format_db
from engine.levels import NodeLevels
from engine.limits import limiter_thresholds
from engine.outcome import Outcome, evaluate

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
    port, gain = _effect(each, after)
    node = after.node(each.stage, "out", port)
    if node.level is None:
        return "Nothing passes here."
    if gain > SMALL_DB:
        old = before.node(each.stage, "out", port).level
        rise = 0.0 if old is None else node.level - old
        words = f"Gives {_db(gain)} more here"
        if rise > SMALL_DB:
            words += f": with all ahead of it, it now sends {_level(node)}, {_db(rise)} more{_left(node)}"
            words += f"; noise added behind it counts {_db(rise)} less"
        return f"{words}."
    if gain < -SMALL_DB:
        return f"Takes {_db(-gain)} out here{_owner_fall(each.stage, before, after)}{_left(node)}."
    return f"Moves its own noise and clip point: it sends {_level(node)}{_left(node)}."


def _effect(each: Touched, after: Outcome) -> tuple[str, float]:
    """The output a control works on most, and the gain it has given it [dB], all other controls as they are now."""
    stage = after.project.stage[each.stage]
    ports = [port.name for port in stage.outputs() if not port.tap]
    back = stage.with_control(each.control, each.value_before)
    held = evaluate(after.project.with_changes({stage.id: (stage, back)}), after)
    gains = [(port, _gain(after, each.stage, port) - _gain(held, each.stage, port)) for port in ports]
    return max(gains, key=lambda pair: abs(pair[1]))


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


def _gain(outcome: Outcome, stage: str, port: str) -> float:
    """Level of a stage's output over that at its first input, or alone where it is a source [dB]."""
    out_of = outcome.node(stage, "out", port).level
    inputs = outcome.project.stage[stage].inputs()
    into = outcome.node(stage, "in").level if inputs else 0.0
    return 0.0 if into is None or out_of is None else out_of - into


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
            + (
                f", where {before.owner}, owned {before.owner_share * 100:.0f} %."
                if before.owner != after.owner
                else "."
            )
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
            moved = each.present != known.present
            why = "its threshold can go no further" if moved else "its threshold may not be moved"
            yield (
                f"The {each.sort} limiter of {each.limiter_name} lets {_db(abs(through))} {side} through to "
                f"{each.loudspeaker_name} than before: {why}."
            )


def _db(value: float) -> str:
    return format_db(value, "dB")


def _level(node: NodeLevels) -> str:
    return format_db(node.level or 0.0, node.unit)
