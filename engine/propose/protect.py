"""What protects stays so: how far the level may move at compressors and limiters, and where limiters are to be re-set.

A search keeps the gain of dynamics as it is. So a compressor at work keeps its level, one at rest may rise to its
threshold. A limiter whose threshold is free is re-set with the gain behind it, for it is true for one gain only; at one
that is locked the level stays below the threshold, and the gain behind it does not rise.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from engine.limits import RESET_DB, limiter_thresholds
from engine.outcome import Outcome
from engine.project import Changes
from engine.sections.base import Dynamics
from engine.solve import FLAT, PEAK, PROGRAMME
from engine.stages import Stage

from .cells import STEP_DB, Region
from .levers import Hand
from .reach import End
from .wishes import Wishes

ON_TARGET_DB = 0.5


def free_thresholds(outcome: Outcome, wishes: Wishes) -> frozenset[Hand]:
    """Limiter thresholds a proposal may re-set: in circuit, adjustable, not locked by wish."""
    found = set()
    for key, stage in outcome.project.stage.items():
        if (key, "") in wishes.locked or (wishes.stages is not None and key not in wishes.stages):
            continue
        for limiter in stage.limiters():
            hand = (key, limiter.control)
            if (
                limiter.is_in
                and getattr(stage, limiter.control).state == "adjustable"
                and hand not in wishes.locked
            ):
                found.add(hand)
    return frozenset(found)


def level_bounds(
    outcome: Outcome, wishes: Wishes, regions: Sequence[Region], place: Mapping[int, int], ends: Sequence[tuple[End, int]]
) -> None:  # fmt: skip
    """Bound the regions ahead of dynamics."""
    plan = outcome.plan
    free = free_thresholds(outcome, wishes)
    for key, stage in outcome.project.stage.items():
        limiter_of = {limiter.section: limiter for limiter in stage.limiters()}
        for section, row in plan.section_list(key):
            curve = section.dynamics
            if curve is None or curve.spares_noise or row not in outcome.solution.factors:
                continue
            limiter = limiter_of.get(section.name)
            if limiter is not None and (key, limiter.control) in free:
                continue
            region = regions[place[row]]
            room = _room_db(outcome, row, curve)
            region.high = min(region.high, max(0, int(np.floor(room / STEP_DB))))
            if limiter is None and room < 0.0:
                region.low = max(region.low, 0)
            elif limiter is not None:
                wishes_behind = [
                    regions[at].wish or 0.0
                    for end, at in ends
                    if end.stage in outcome.project.topology.fed_by(key)
                ]
                if wishes_behind:
                    louder = max(wishes_behind)
                    least = 0 if abs(louder) <= ON_TARGET_DB else round(louder / STEP_DB)
                    region.low = max(region.low, min(least, region.high))


def _room_db(outcome: Outcome, row: int, curve: Dynamics) -> float:
    """How far the level may rise before the curve acts [dB]; negative where it acts."""
    lane = PEAK if curve.limiter or curve.detector == "peak" else PROGRAMME
    plan = outcome.plan
    parent = int(plan.graph.first_parent[row])
    heard = float(
        (outcome.solution.spectra[parent, lane, 0] * plan.rows.gain[row, 0]) @ plan.axis.weights[:, FLAT]
    )
    threshold = float(np.asarray(curve.threshold).ravel()[0])
    if not heard > 0.0 or not np.isfinite(threshold):
        return np.inf
    return 10.0 * float(np.log10(threshold / heard))


def limiter_margin_db(outcome: Outcome) -> float | None:
    """How far the programme's peaks stay below the limiters [dB]: the widest of all branches; None without a limiter.

    A branch's own is that of its first limiter to act.
    """
    found: dict[str, float] = {}
    for each in limiter_thresholds(outcome.plan):
        if each.present is None:
            continue
        section = next(s for s in outcome.project.stage[each.limiter].limiters() if s.control == each.control)
        row = outcome.plan.section_row(each.limiter, section.section)
        curve = outcome.plan.rows.dynamics.get(row)
        if curve is not None:
            room = _room_db(outcome, row, curve)
            found[each.loudspeaker] = min(found.get(each.loudspeaker, np.inf), room)
    return max(found.values(), default=None)


def reset_limiters(before: Outcome, after: Outcome, wishes: Wishes) -> Changes:
    """The edit that moves free thresholds against the gain that changed behind them, never letting more through."""
    old = {(each.limiter, each.control, each.loudspeaker): each for each in limiter_thresholds(before.plan)}
    free = free_thresholds(before, wishes)
    wanted: dict[Hand, tuple[float, float]] = {}  # threshold, and the gain it is made for
    for each in limiter_thresholds(after.plan):
        hand = (each.limiter, each.control)
        known = old.get((*hand, each.loudspeaker))
        if hand not in free or known is None or known.present is None:
            continue
        more = each.gain_db - known.gain_db
        level = known.present - (more if abs(more) > RESET_DB else 0.0)
        if hand not in wanted or level < wanted[hand][0]:
            wanted[hand] = level, each.gain_db
    found: dict[str, tuple[Stage, Stage]] = {}
    for (key, control), (level, made_for_db) in wanted.items():
        stage = found[key][1] if key in found else after.project.stage[key]
        steps = stage.control_range(control).positions
        fitting = steps[steps <= level + 1e-6]
        value = round(float(fitting[-1] if fitting.size else steps[0]), 6)
        if abs(value - float(getattr(stage, control).value)) < 1e-9:
            continue
        moved = stage.with_control(control, value)
        if control in stage.made_for:
            moved = moved.with_fields(made_for={**stage.made_for, control: round(made_for_db, 3)})
        found[key] = (after.project.stage[key], moved)
    return {key: pair for key, pair in found.items() if pair[0] != pair[1]}
