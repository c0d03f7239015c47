"""What a seat hears: programme, hiss against the room's own noise, and who owns the hiss."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from .acoustic_gain import AcousticGain, acoustic_gain
from .ambient import Ambient, hiss_margin, make_ambient
from .budget import Share, contributions, shares
from .compile import Plan
from .exposure import permitted_s
from .figures import parse
from .levels import ZERO_POWER
from .rows import Array
from .sections.base import Domain
from .solve import A_WEIGHTED, FLAT, NOISE, PEAK, PROGRAMME, Solution
from .stages import Stage

ZERO = ZERO_POWER[Domain.ACOUSTIC]
Ends = Sequence[tuple[Plan, Solution]]


@dataclass(frozen=True, eq=False)
class SeatLevels:
    """One seat. Levels in dB SPL, None where nothing sounds; `peak` is sine-scaled.

    `hiss_margin` is the smallest of (room - hiss), at `margin_band_hz` where the room is given as a curve.
    `low` and `high` bound the numbers that rest on an ambiguous figure.
    """

    stage: str
    name: str
    role: str
    level: float | None
    level_a: float | None
    peak: float | None
    hiss: float | None
    hiss_a: float | None
    hiss_margin: float | None
    margin_band_hz: float | None
    target: float | None
    ambient: Ambient | None
    level_bands: Array
    hiss_bands: Array
    plan: Plan = field(repr=False)
    solution: Solution = field(repr=False)
    low: Mapping[str, float] = field(default_factory=dict)
    high: Mapping[str, float] = field(default_factory=dict)

    @property
    def off_target(self) -> float | None:
        """Level less target [dB]; None without either."""
        return None if self.level is None or self.target is None else self.level - self.target

    @property
    def permitted_s(self) -> float | None:
        """How long the project's exposure criterion permits this level [s]; an estimate, local rules govern."""
        return None if self.level_a is None else permitted_s(self.level_a, self.plan.project.header.criterion)

    @cached_property
    def acoustic_gain(self) -> AcousticGain | None:
        """Needed and potential acoustic gain, where the seat's distances are given."""
        stage = self.plan.project.stage[self.stage]
        values = stage.values()
        names = ("talker_m", "equivalent_m", "microphone_loudspeaker_m", "talker_microphone_m")
        if any(name not in values for name in names):
            return None
        nearest = [
            link.values()["distance_m"]
            for link in self.plan.project.topology.into[self.stage]
            if link.distance_m
        ]
        if not nearest:
            return None
        given = {name: float(np.mean(values[name])) for name in names}
        return acoustic_gain(
            talker_listener_m=given["talker_m"], microphone_loudspeaker_m=given["microphone_loudspeaker_m"],
            loudspeaker_listener_m=float(min(np.mean(each) for each in nearest)),
            talker_microphone_m=given["talker_microphone_m"], equivalent_m=given["equivalent_m"],
            open_microphones=float(np.mean(values["open_microphones"])), feedback_margin_db=float(np.mean(values["feedback_margin_db"])),
        )  # fmt: skip

    @cached_property
    def budget(self) -> tuple[Share, ...]:
        """Every noise origin's own contribution, the largest first; their powers add up to the hiss."""
        names = {key: stage.name for key, stage in self.plan.project.stage.items()}
        row = self.plan.input_row(self.stage)
        return shares(
            contributions(self.plan.graph, self.plan.rows, self.solution, row), names, self.plan.axis, ZERO
        )


def seat_levels(plan: Plan, solution: Solution, ends: Ends, sum_kind: int = FLAT) -> tuple[SeatLevels, ...]:
    """Every seat in signal order; `ends` are the solutions at both ends of what sheets leave unsaid."""
    found = []
    for seat in seats_of(plan):
        numbers = _numbers(plan, solution, seat, sum_kind)
        low, high = _bounds(numbers, [_numbers(end, solved, seat, sum_kind) for end, solved in ends], seat)
        row = plan.input_row(seat.id)
        spectra = plan.axis.bands(solution.spectra[row, :, 0])
        ambient = ambient_of(seat)
        margin, band = _hiss_margin(plan, solution, seat)
        found.append(
            SeatLevels(
                seat.id, seat.name, str(getattr(seat, "role", "other")), **numbers,
                hiss_margin=margin, margin_band_hz=band, target=target_of(seat), ambient=ambient,
                level_bands=spectra[PROGRAMME], hiss_bands=spectra[NOISE], plan=plan, solution=solution,
                low=low, high=high,
            )
        )  # fmt: skip
    return tuple(found)


def seats_of(plan: Plan) -> Iterator[Stage]:
    """The stages at which people listen, in signal order."""
    return (plan.project.stage[key] for key in plan.project.topology.order if plan.project.stage[key].is_seat)


def target_of(seat: Stage) -> float | None:
    """The seat's target level [dB SPL]."""
    given = getattr(seat, "target_spl_db", None)
    return None if given is None else parse(given.text, "spl").amount


def ambient_of(seat: Stage) -> Ambient | None:
    """The room's own noise at the seat."""
    given = getattr(seat, "ambient", None)
    if given is None:
        return None
    parsed = parse(given.text, "ambient")
    return make_ambient(parsed.amount, parsed.reference or "flat")


def _numbers(plan: Plan, solution: Solution, seat: Stage, sum_kind: int) -> dict[str, float | None]:
    sums = solution.sums[plan.input_row(seat.id), :, 0]
    return {
        "level": _spl(sums[PROGRAMME, sum_kind]),
        "level_a": _spl(sums[PROGRAMME, A_WEIGHTED]),
        "peak": _spl(sums[PEAK, sum_kind]),
        "hiss": _spl(sums[NOISE, FLAT]),
        "hiss_a": _spl(sums[NOISE, A_WEIGHTED]),
    }


def _hiss_margin(plan: Plan, solution: Solution, seat: Stage) -> tuple[float | None, float | None]:
    ambient = ambient_of(seat)
    row = plan.input_row(seat.id)
    hiss, hiss_a = (solution.sums[row, NOISE, 0, kind] for kind in (FLAT, A_WEIGHTED))
    if ambient is None or not hiss > 0.0:
        return None, None
    bands = plan.axis.bands(solution.spectra[row, NOISE, 0])
    margin, band = hiss_margin(ambient, bands, 10.0 * np.log10(hiss / ZERO), 10.0 * np.log10(hiss_a / ZERO))
    return float(margin), band


def _bounds(
    numbers: Mapping[str, float | None], ends: list[dict[str, float | None]], seat: Stage
) -> tuple[dict[str, float], dict[str, float]]:
    low, high = {}, {}
    for name, value in numbers.items():
        known = [v for v in (value, *(end[name] for end in ends)) if v is not None]
        if known and max(known) - min(known) > 5e-4:
            low[name], high[name] = min(known), max(known)
    return low, high


def _spl(power: float) -> float | None:
    return float(10.0 * np.log10(power / ZERO)) if power > 0.0 else None
