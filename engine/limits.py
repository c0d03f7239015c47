"""Limiter thresholds that protect a loudspeaker: in volts at the load, and in the unit of the stage that limits.

rms      V = sqrt(P_continuous Z)
peak     V_peak = sqrt(P_peak Z); on the sine scale V = V_peak / sqrt(2)

A threshold is true for one gain between limiter and voice coil only: it is tied to the gain it was made for, and marked
*to be re-set* when that gain changes. The maker's instructions come before these numbers.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from .compile import Plan
from .levels import ZERO_POWER
from .loudspeaker import loudspeakers_of
from .project import Changes
from .sections.base import Domain
from .stages import Limiter, Stage
from .stages.panel import marking

RESET_DB = 0.1  # a change of gain below this needs no new threshold
RATING_OF = {"rms": "continuous", "peak": "peak"}


@dataclass(frozen=True)
class Dependence:
    """A control between limiter and voice coil, and where it stands on its panel."""

    stage: str
    name: str
    control: str
    marking: str


@dataclass(frozen=True)
class LimiterThreshold:
    """One limiter ahead of one loudspeaker. Levels in `unit`; a peak threshold is sine-scaled.

    `wanted` protects the loudspeaker's rating, `present` is where the limiter stands (None: not in circuit).
    `gain_db` is the gain from the limiter to the voice coil (dB of volts, or from full scale to volts re 1 V);
    `made_for_db` the gain the present threshold was set for, None where nobody has said.
    """

    limiter: str
    limiter_name: str
    control: str
    sort: str
    unit: str
    loudspeaker: str
    loudspeaker_name: str
    load_v: float
    load_w: float
    gain_db: float
    wanted: float
    present: float | None
    made_for_db: float | None
    depends_on: tuple[Dependence, ...]

    @property
    def over_db(self) -> float | None:
        """How far the present threshold lies above the wanted one [dB]; None where it is out."""
        return None if self.present is None else self.present - self.wanted

    @property
    def is_stale(self) -> bool:
        """Whether the gain has changed since the threshold was made."""
        return self.made_for_db is not None and abs(self.made_for_db - self.gain_db) > RESET_DB


def limiter_thresholds(plan: Plan) -> tuple[LimiterThreshold, ...]:
    """Every limiter ahead of every loudspeaker that has the rating it protects, in signal order of the loudspeakers."""
    owners = _section_owners(plan)
    return tuple(each for stage in loudspeakers_of(plan) for each in _ahead_of(plan, stage, owners))


def _section_owners(plan: Plan) -> dict[int, tuple[str, str]]:
    """Row to the stage and section it is."""
    return {row: (key, s.name) for key in plan.answers for s, row in plan.section_list(key)}


def _ahead_of(plan: Plan, stage: Stage, owners: dict[int, tuple[str, str]]) -> Iterator[LimiterThreshold]:
    values = stage.values()
    load_ohm = float(np.asarray(stage.load_ohm(values)).ravel()[0])
    passed: list[str] = []
    gain = 1.0
    row = plan.input_row(stage.id)
    while row:
        key, section = owners.get(row, ("", ""))
        if key and (not passed or passed[-1] != key):
            passed.append(key)
        limiter = _limiter_at(plan, key, section) if key else None
        if limiter is not None and gain > 0.0:
            watts = stage.rated_w(values, RATING_OF[limiter.sort])
            if watts is not None:
                yield _threshold(plan, stage, key, limiter, watts, load_ohm, gain, passed)
        gain *= float(plan.rows.gain[row, 0, -1])
        row = int(plan.graph.first_parent[row])


def _limiter_at(plan: Plan, key: str, section: str) -> Limiter | None:
    return next((each for each in plan.project.stage[key].limiters() if each.section == section), None)


def _threshold(
    plan: Plan,
    stage: Stage,
    key: str,
    limiter: Limiter,
    watts: float,
    load_ohm: float,
    gain: float,
    passed: list[str],
) -> LimiterThreshold:
    owner = plan.project.stage[key]
    volts2 = watts * load_ohm / (2.0 if limiter.sort == "peak" else 1.0)
    zero = ZERO_POWER[Domain.DIGITAL if limiter.unit == "dBFS" else Domain.ANALOGUE]
    setting = getattr(owner, limiter.control)
    made = owner.made_for.get(limiter.control)
    return LimiterThreshold(
        limiter=key, limiter_name=owner.name, control=limiter.control, sort=limiter.sort, unit=limiter.unit,
        loudspeaker=stage.id, loudspeaker_name=stage.name,
        load_v=float(np.sqrt(watts * load_ohm)), load_w=watts, gain_db=float(10.0 * np.log10(gain)),
        wanted=float(10.0 * np.log10(volts2 / gain / zero)), present=setting.value if limiter.is_in else None,
        made_for_db=made, depends_on=tuple(_dependences(plan, passed)),
    )  # fmt: skip


def _dependences(plan: Plan, passed: list[str]) -> Iterator[Dependence]:
    """Controls that stand behind a limiter on the way to the voice coil; the limiting stage's own among them."""
    for key in reversed(passed):
        stage = plan.project.stage[key]
        limits = {limiter.control for limiter in stage.limiters()}
        for name, spec, setting in stage.controls():
            if name not in limits:
                yield Dependence(
                    key, stage.name, spec.label, marking(spec, stage.control_range(name), setting)
                )


def set_limiters(plan: Plan, only: frozenset[str] | None = None, *, locked_too: bool = False) -> Changes:
    """The edit that sets every limiter in circuit to the threshold its loudspeakers need, on its own steps, never above.

    `only` names the limiting stages to set; a limiter ahead of several loudspeakers takes the lowest threshold. Each
    setting is noted with the gain it was made for. Locked controls are left alone unless `locked_too`.
    """
    lowest: dict[tuple[str, str], LimiterThreshold] = {}
    for each in limiter_thresholds(plan):
        key = (each.limiter, each.control)
        if each.present is not None and (key not in lowest or each.wanted < lowest[key].wanted):
            lowest[key] = each
    changes: dict[str, tuple[Stage, Stage]] = {}
    for (owner, control), each in lowest.items():
        stage = changes[owner][1] if owner in changes else plan.project.stage[owner]
        is_locked = getattr(stage, control).state == "locked"
        if (only is not None and owner not in only) or (is_locked and not locked_too):
            continue
        steps = stage.control_range(control).positions
        fitting = steps[steps <= each.wanted + 1e-9]
        value = float(fitting[-1] if fitting.size else steps[0])
        made = {**stage.made_for, control: round(each.gain_db, 3)}
        after = stage.with_control(control, round(value, 6)).with_fields(made_for=made)
        changes[owner] = (plan.project.stage[owner], after)
    return {key: pair for key, pair in changes.items() if pair[0] != pair[1]}
