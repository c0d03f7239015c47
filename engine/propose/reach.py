"""How far noise reaches: what a power added at any row makes at the ends of the project, over the programme there."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.graph import Rank
from engine.outcome import Outcome
from engine.rows import Array
from engine.seat import seats_of, target_of
from engine.solve import FLAT, NOISE, PROGRAMME

OTHER_ENDS = 0.01  # a recorder's or a stream's noise decides where no seat's does


@dataclass(frozen=True)
class End:
    """Where a path ends: a seat, or a stage that feeds nothing. `off_db` is target less level now, None without a target."""

    stage: str
    row: int
    is_seat: bool
    is_reference: bool
    off_db: float | None


def find_ends(outcome: Outcome) -> tuple[End, ...]:
    """Every end at which something sounds, in signal order."""
    plan, topology = outcome.plan, outcome.project.topology
    seats = {stage.id for stage in seats_of(plan)}
    levels = outcome.solution.sums[:, PROGRAMME, 0, FLAT]
    found: list[End] = []
    for key in topology.order:
        stage = outcome.project.stage[key]
        if key in seats:
            target, seat_row = target_of(stage), plan.input_row(key)
            power = float(levels[seat_row])
            if power > 0.0:
                off = None if target is None else target - 10.0 * float(np.log10(power / 4e-10))
                found.append(End(key, seat_row, True, getattr(stage, "role", "") == "reference", off))
            continue
        used = {link.output for link in topology.out_of[key]}
        if used:
            continue
        outputs = [port for port in stage.outputs() if not port.tap]
        rows = [plan.output_row(key, port.name) for port in outputs] or [
            plan.input_row(key, port.name) for port in stage.inputs()
        ]
        found.extend(End(key, row, False, False, None) for row in rows if row and levels[row] > 0.0)
    return tuple(found)


def noise_reach(outcome: Outcome, ends: tuple[End, ...]) -> Array:
    """[row, F]: a power added at a row's output times this, summed over F, is its share of noise over programme at the ends.

    One sweep backward for all ends, as engine.budget does for one place.
    """
    plan, solution = outcome.plan, outcome.solution
    graph, gain = plan.graph, plan.rows.gain[:, 0]
    reach = np.zeros(gain.shape)
    has_seat = any(end.is_seat for end in ends)
    for end in ends:
        level = float(solution.sums[end.row, PROGRAMME, 0, FLAT])
        share = 1.0 if end.is_seat or not has_seat else OTHER_ENDS
        reach[end.row] += share / level * plan.axis.flat_weight
    factors = {row: factor[NOISE, 0] for row, factor in solution.factors.items()}
    for rank in reversed(graph.ranks):
        _apply_dynamics(reach, rank, factors)
        at = rank.joins
        if at.stop > at.start:
            counts = np.diff(rank.join_starts, append=rank.join_parents.size)
            heard = np.repeat(reach[at], counts, axis=0) * rank.join_weights[:, None]
            np.add.at(reach, rank.join_parents, heard)
        at = rank.singles
        if at.stop > at.start:
            through = reach[at] * gain[at]
            if isinstance(rank.parents, slice):
                reach[rank.parents] += through
            else:
                np.add.at(reach, rank.parents, through)
        reach[0] = 0.0
    return reach


def _apply_dynamics(reach: Array, rank: Rank, factors: dict[int, Array]) -> None:
    for row in rank.dynamic:
        reach[row] = reach[row] * factors[row]
    for row, of, exponent in rank.dynamic_pairs:
        reach[row] = reach[row] * factors[of] ** exponent
