"""What hangs on an amplifier: the impedance it drives and, on a constant-voltage line, the watts its taps ask for."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from .compile import Plan
from .sections.base import ActiveStage
from .stages import Stage


@dataclass(frozen=True)
class AmplifierLoad:
    """One amplifier output. `z_ohm` is what it drives at the test tone, magnitude; `least_ohm` the least it may.

    `line_w` is what the taps of a constant-voltage line take together, `rated_w` what the amplifier gives; None
    where there is no such line or no rating.
    """

    stage: str
    name: str
    z_ohm: float | None
    least_ohm: float
    line_w: float | None
    rated_w: float | None


def amplifier_loads(plan: Plan) -> tuple[AmplifierLoad, ...]:
    """Every amplifier that drives something, in signal order."""
    impedances = _driven_ohm(plan)
    found = []
    for stage in amplifiers_of(plan):
        values = stage.values()
        watts = [line.total_w(line.values()) for line in _lines_behind(plan, stage)]  # type: ignore[attr-defined]
        rated = values.numbers.get("rated_power_w.0")
        found.append(
            AmplifierLoad(
                stage.id, stage.name, impedances.get(stage.id), _number(stage.least_load_ohm(values)),  # type: ignore[attr-defined]
                float(sum(_number(each) for each in watts)) if watts else None, None if rated is None else _number(rated),
            )
        )  # fmt: skip
    return tuple(found)


def amplifiers_of(plan: Plan) -> Iterator[Stage]:
    """The stages that say what least load they may drive."""
    order = plan.project.topology.order
    return (plan.project.stage[key] for key in order if hasattr(plan.project.stage[key], "least_load_ohm"))


def _lines_behind(plan: Plan, stage: Stage) -> Iterator[Stage]:
    for link in plan.project.topology.out_of[stage.id]:
        target = plan.project.stage[link.target]
        if hasattr(target, "total_w"):
            yield target


def _driven_ohm(plan: Plan) -> dict[str, float]:
    """The impedance at each output's terminals at the test tone; members alike each their own."""
    found: dict[str, float] = {}
    for net in plan.layout.nets:
        solved = net.shape.with_numbers(plan.answers, plan.project.header.temperature_k)
        for place, (stage, _port, node) in enumerate(net.shape.drivers):
            if not isinstance(plan.answers[stage], ActiveStage) or not plan.project.topology.out_of[stage]:
                continue
            admittance = np.abs(np.asarray(solved.at(node, without=place))).ravel()
            if admittance.size and admittance[-1] > 0.0:
                found[stage] = min(found.get(stage, np.inf), float(1.0 / admittance[-1]))
    return found


def _number(value: object) -> float:
    return float(np.asarray(value).ravel()[0])
