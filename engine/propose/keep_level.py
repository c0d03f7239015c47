"""Keep the seat's level: while one control is moved, a chosen other one follows on its own steps."""

from __future__ import annotations

from math import log10

import numpy as np

from engine.outcome import Outcome, evaluate
from engine.project import Changes, Project
from engine.rows import Array
from engine.solve import FLAT, PROGRAMME
from engine.stages import Stage

from .levers import Hand, Reader
from .proposal import reference_seat

NEAR = 2  # neighbours of the first guess that are solved too


class LevelKeeper:
    """One gesture: the level at the reference seat when it began is the level to keep.

    Raises ValueError, in plain words, where the follower cannot do it.
    """

    def __init__(self, outcome: Outcome, follower: Hand, seat: str | None = None) -> None:
        project = outcome.project
        stage = project.stage.get(follower[0])
        if stage is None or follower[1] not in dict.fromkeys(name for name, _, _ in stage.controls()):
            raise ValueError(f"{follower[0]} has no control {follower[1]!r} that could follow")
        spec = stage.control_specs()[follower[1]]
        called = f"{spec.label} of {stage.name}"
        if getattr(stage, follower[1]).state == "locked":
            raise ValueError(f"{called} is locked: unlock it, or let another control follow")
        reference = reference_seat(outcome)
        key = seat or (None if reference is None else reference.stage)
        if key is None:
            raise ValueError("There is no seat whose level could be kept: add one")
        self._row = outcome.plan.input_row(key)
        if not outcome.solution.flat[self._row, PROGRAMME, 0] > 0.0:
            raise ValueError(f"Nothing sounds at {project.stage[key].name}: there is no level to keep")
        self._outcome, self._follower = outcome, follower
        self._level_db = _level_db(outcome, self._row)
        reader = Reader(outcome, np.zeros((outcome.plan.graph.size, outcome.plan.axis.size)))
        rows, nets = reader.moved_by(follower)
        lever = reader.lever([follower], nets) if rows else None
        gain = None if lever is None else _gain_at(outcome, self._row, {r.row: r.gain_db for r in lever.rows})
        if lever is None or gain is None or not np.ptp(gain) > 0.0:
            raise ValueError(
                f"{called} does not set the level at {project.stage[key].name}: let another control follow"
            )
        order = np.argsort(lever.values[:, 0], kind="stable")
        self._values, self._gain = lever.values[order, 0], gain[order]

    def follow(self, stage: str, control: str, value: float | None) -> Changes:
        """The edit that moves one control and the follower with it, against the project the gesture began with."""
        if (stage, control) == self._follower:
            raise ValueError("A control cannot follow itself: let another one follow")
        before = self._outcome.project
        moved = _moved(before, before, stage, control, value)
        project = before.with_changes(moved)
        change = _level_db(evaluate(project, self._outcome), self._row) - self._level_db
        best: tuple[float, Changes] | None = None
        for place in np.argsort(np.abs(self._gain + change), kind="stable")[: NEAR + 1].tolist():
            both = _moved(before, project, *self._follower, float(self._values[place]))
            found = {**moved, **both}
            off = abs(
                _level_db(evaluate(before.with_changes(found), self._outcome), self._row) - self._level_db
            )
            if best is None or off < best[0] - 1e-9:
                best = (off, found)
            if off < 0.05:
                break
        assert best is not None
        return best[1]


def keep_level(
    outcome: Outcome, stage: str, control: str, value: float | None, follower: Hand, seat: str | None = None
) -> Changes:
    """The edit that sets one control and moves `follower` so that the (reference) seat keeps its level.

    Raises ValueError where the follower is locked or does not set that level.
    """
    return LevelKeeper(outcome, follower, seat).follow(stage, control, value)


def _moved(before: Project, now: Project, stage: str, control: str, value: float | None) -> Changes:
    after: Stage = now.stage[stage].with_control(control, None if value is None else round(value, 9))
    return {stage: (before.stage[stage], after)}


def _level_db(outcome: Outcome, row: int) -> float:
    power = float(outcome.solution.sums[row, PROGRAMME, 0, FLAT])
    return 10.0 * log10(power) if power > 0.0 else float("-inf")


def _gain_at(outcome: Outcome, row: int, gains: dict[int, Array]) -> Array | None:
    """What positions do to the level at a row [position], along the loudest way there; None where they do nothing."""
    graph, levels = outcome.plan.graph, outcome.solution.flat[:, PROGRAMME, 0]
    total: Array | None = None
    while row:
        if row in gains:
            total = gains[row] if total is None else total + gains[row]
        parents = graph.parents_of(row)
        row = int(parents[np.argmax(levels[parents])]) if parents.size else 0
    return total
