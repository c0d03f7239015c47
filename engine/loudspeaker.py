"""What a loudspeaker has to carry: average and peak watts of the programme, and the margins to its ratings."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from .compile import Plan
from .sections.base import ActiveStage
from .solve import FLAT, PEAK, PROGRAMME, Solution
from .stages import Stage


@dataclass(frozen=True)
class LoudspeakerLoad:
    """One loudspeaker stage, per member where it stands for several.

    Watts into its nominal impedance, V²/Z: `average_w` of the programme, `peak_w` the largest instantaneous power
    (twice the sine-scaled peak's: the waveform's peak is sqrt(2) times the sine's rms). Margins are to the
    continuous and the peak rating [dB], None where the rating is not given. `damping` is its impedance over what it looks back into,
    line and amplifier together; None where nothing drives it.
    """

    stage: str
    name: str
    volts: float
    average_w: float
    peak_w: float
    continuous_margin_db: float | None
    peak_margin_db: float | None
    damping: float | None = None


def loudspeaker_loads(plan: Plan, solution: Solution, setting: int = 0) -> tuple[LoudspeakerLoad, ...]:
    """Every loudspeaker driven by an amplifier, in signal order."""
    found = []
    damping = _damping(plan)
    for stage in loudspeakers_of(plan):
        values = stage.values()
        row = plan.input_row(stage.id)
        programme, peak = solution.flat[row, PROGRAMME, setting], solution.sums[row, PEAK, setting, FLAT]
        z_ohm = _scalar(stage.load_ohm(values))
        average, largest = programme / z_ohm, 2.0 * peak / z_ohm
        found.append(
            LoudspeakerLoad(
                stage.id, stage.name, float(np.sqrt(programme)), float(average), float(largest),
                _margin(stage.rated_w(values, "continuous"), average), _margin(stage.rated_w(values, "peak"), largest),
                damping.get(stage.id),
            )
        )  # fmt: skip
    return tuple(found)


def _damping(plan: Plan) -> dict[str, float]:
    """Load impedance over source impedance at each loudspeaker's terminals, at the test tone (IEC 60268-3, damping factor)."""
    ends = {stage.id for stage in loudspeakers_of(plan)}
    found: dict[str, float] = {}
    for net in plan.layout.nets:
        if not net.shape.drivers or not ends & net.shape.stages:
            continue
        solved = net.shape.with_numbers(plan.answers, plan.project.header.temperature_k)
        for stage, port, node in net.shape.loads:
            if stage in ends:
                answer = plan.answers[stage]
                assert isinstance(answer, ActiveStage)
                own = 1.0 / np.asarray(answer.inputs[port].z_ohm, dtype=complex)
                seen = np.abs(np.asarray(solved.at(node)) - own).ravel()[-1]
                if seen > 0.0:
                    found[stage] = float(seen / np.abs(own).ravel()[-1])
    return found


def loudspeakers_of(plan: Plan) -> Iterator[Stage]:
    """The stages whose voice coils an amplifier drives."""
    order = plan.project.topology.order
    return (plan.project.stage[key] for key in order if plan.project.stage[key].is_loudspeaker)


def _margin(rating_w: float | None, power_w: float) -> float | None:
    if rating_w is None or not power_w > 0.0:
        return None
    return float(10.0 * np.log10(rating_w / power_w))


def _scalar(value: object) -> float:
    return float(np.asarray(value).ravel()[0])
