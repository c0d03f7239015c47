"""Propose: search, solve exactly, put right what the search left out, and say what was found, or why nothing was."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from math import log10

import numpy as np

from engine.figures import format_db
from engine.outcome import Outcome, evaluate
from engine.project import difference

from .bounds import NoWalk
from .explain import gains_and_costs, limiter_notes, with_reasons
from .impossible import Impossible, Relief, is_between_steps, least_deviation, reliefs
from .order import alignment_miss
from .passes import FLOOR_DB
from .proposal import Proposal, edit_of, standing, touched_by
from .protect import reset_limiters
from .search import WINDOW_DB, Choice, Problem, pose, search
from .wishes import Wishes

Progress = Callable[[float], bool | None]
ROUNDS = 3
OFF_DB = 0.05
CLIP_DB = 0.05  # what the steps of the search may leave below a clip point


def propose(
    outcome: Outcome, wishes: Wishes | None = None, progress: Progress | None = None
) -> Proposal | Impossible:
    """The best settings of all free controls, in the order of aims of the design, on their real steps.

    `progress` hears how much is done, 0 to 1; where it answers False the search ends with what it has. Exact for the
    linear chain; where dynamics act at another level than now the search is corrected and repeated.
    """
    wishes = wishes or Wishes()
    report = _Report(progress)
    corrections: dict[str, float] = {}
    problem = pose(outcome, wishes)
    report(0.3)
    if not problem.ends:
        return Impossible(
            "level", 0.0, None, "Nothing sounds at any end of this project: look for a fader that is off."
        )
    notes: list[str] = []
    try:
        choice = search(problem, cancelled=report.cancelled)
    except NoWalk:
        return _out_of_reach(problem, report)
    for turn in range(ROUNDS):
        report(0.5 + 0.1 * turn)
        after = _solved(outcome, wishes, choice)
        missed = _missed(problem, after, corrections)
        if not missed or report.cancelled():
            break
        try:
            corrections = {stage: corrections.get(stage, 0.0) + miss for stage, miss in missed.items()}
            problem = pose(outcome, wishes, corrections)
            choice = search(problem, cancelled=report.cancelled)
        except NoWalk:
            break
    else:
        after = _solved(outcome, wishes, choice)
    if choice.kept_level:
        notes.append(
            "Paths meet again behind a split here: they were searched with the level where they part held."
        )
    found = describe(outcome, after, notes)
    report(0.9)
    if choice.margin_db < -CLIP_DB and (found.after.margin_db or 0.0) < -CLIP_DB:
        return _clips(outcome, wishes, found)
    miss, words = alignment_miss(after, wishes)
    if miss > 0.0:
        can = wishes.by_db - miss
        ways = (
            (Relief(f"Ask for {format_db(can, 'dB')} instead.", miss),)
            if np.isfinite(miss) and wishes.by_db
            else ()
        )
        return Impossible("alignment", miss, found.after.margin_stage, words, ways, found)
    report(1.0)
    return found


def describe(before: Outcome, after: Outcome, notes: list[str] | None = None) -> Proposal:
    """What leads from one outcome to another, as a proposal."""
    changes = difference(before.project, after.project)
    standings = standing(before), standing(after)
    touched = with_reasons(touched_by(before, after), before, after)
    reasons = [f"{t.name}, {t.label.lower()}: {t.before}, then {t.after}. {t.reason}" for t in touched]
    if changes:
        reasons += gains_and_costs(*standings)
    else:
        reasons.append("The present settings are as good as any within the tolerances: nothing to touch.")
    said = [*(notes or []), *limiter_notes(before, after)]
    return Proposal(changes, *standings, touched, tuple(reasons), tuple(said), after, tuple(notes or ()))


def _solved(outcome: Outcome, wishes: Wishes, choice: Choice) -> Outcome:
    """The project with a choice, solved, its free limiters re-set."""
    changes = edit_of(outcome, choice.values)
    if not changes:
        return outcome
    after = evaluate(outcome.project.with_changes(changes), outcome)
    resets = reset_limiters(outcome, after, wishes)
    if resets:
        after = evaluate(after.project.with_changes(resets), after)
    return after


def _missed(problem: Problem, after: Outcome, corrections: Mapping[str, float]) -> dict[str, float]:
    """How far the exact solve leaves ends off their windows [dB], by stage: to be added to what they wish."""
    wished: dict[int, str] = {}
    found: dict[str, float] = {}
    before = problem.outcome
    for end, index in problem.ends:
        if index in wished:
            continue
        wished[index] = end.stage
        region = problem.web.regions[index]
        asked = (region.wish or 0.0) - corrections.get(end.stage, 0.0)
        power = [float(each.solution.flat[end.row, 0, 0]) for each in (before, after)]
        if min(power) <= 0.0:
            continue
        off = 10.0 * log10(power[1] / power[0]) - asked
        if abs(off) > WINDOW_DB + OFF_DB:
            found[end.stage] = -off
    return found


def _out_of_reach(problem: Problem, report: _Report) -> Impossible:
    """Nothing puts the ends where they want to be: the nearest that can be, and why."""
    outcome, wishes = problem.outcome, problem.wishes
    off = least_deviation(problem, FLOOR_DB)
    if off is None:
        return Impossible(
            "level",
            0.0,
            None,
            "Locked dynamics and limiters leave no way to set the levels: unlock a control.",
        )
    corrections = {stage: miss for stage, miss in off.items() if abs(miss) > WINDOW_DB}
    nearest: Proposal | None = None
    try:
        choice = search(pose(outcome, wishes, corrections), cancelled=report.cancelled)
        after = _solved(outcome, wishes, choice)
        nearest = describe(outcome, after)
    except NoWalk:
        pass
    worst = max(off, key=lambda stage: abs(off[stage]))
    miss = off[worst]
    name = outcome.project.stage[worst].name
    if not problem.levers:
        message = f"{format_db(abs(miss), 'dB')} {_side(miss)} at {name}, and no control that may be moved leads there: unlock one."
        return Impossible("nothing to move", abs(miss), worst, message, (), nearest)
    message = (
        f"{format_db(abs(miss), 'dB')} {_side(miss)} target at {name} with every free control at its end."
    )
    if is_between_steps(problem, worst):
        message = f"{format_db(abs(miss), 'dB')} {_side(miss)} target at {name} is the nearest that the steps of the free controls allow."
    return Impossible("level", abs(miss), worst, message, reliefs(outcome, wishes), nearest)


def _side(miss: float) -> str:
    return "over" if miss > 0.0 else "under"


def _clips(outcome: Outcome, wishes: Wishes, found: Proposal) -> Impossible:
    miss = -(found.after.margin_db or 0.0)
    message = (
        f"Peaks pass the clip point by {format_db(miss, 'dB')} at {found.after.margin_where}, "
        "whatever the free controls do while the seats have their level."
    )
    return Impossible("clip", miss, found.after.margin_stage, message, reliefs(outcome, wishes), found)


class _Report:
    """Tells progress and hears whether to go on."""

    def __init__(self, progress: Progress | None) -> None:
        self._progress, self._stopped = progress, False

    def __call__(self, done: float) -> None:
        if self._progress is not None and self._progress(done) is False:
            self._stopped = True

    def cancelled(self) -> bool:
        return self._stopped


__all__ = ["Progress", "describe", "propose"]
