"""Limiters: above what the loudspeaker takes, made for another gain, or not there."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

TOO_HIGH_DB = 0.25
SORT = {"rms": "rms limiter", "peak": "peak limiter"}


def _level(value: float, unit: str) -> str:
    return f"{value:+.1f} {unit}".replace("-", "\u2212").replace("+", "+" if unit == "dBu" else "")


@finder
def limiter_too_high(outcome: Outcome) -> Iterator[Finding]:
    """Limiters that let more through than the loudspeaker's rating."""
    for each in outcome.limiters:
        over = each.over_db
        if over is not None and over > TOO_HIGH_DB:
            rating = "continuous" if each.sort == "rms" else "peak"
            yield Finding(
                "mend", "limiter-too-high", each.limiter,
                f"{over:.1f} dB more than {each.loudspeaker_name} may take ({rating} rating) passes "
                f"the {SORT[each.sort]} of {each.limiter_name}.",
                f"Set it to {_level(each.wanted, each.unit)}, which is {each.load_v:.1f} V{' peak' if each.sort == 'peak' else ''} there. "
                "The maker's instructions come first.",
            )  # fmt: skip


@finder
def limiter_to_be_reset(outcome: Outcome) -> Iterator[Finding]:
    """Limiters whose threshold was made for another gain than stands behind them now."""
    for each in outcome.limiters:
        if each.is_stale and each.made_for_db is not None:
            change = each.gain_db - each.made_for_db
            side = "more" if change > 0.0 else "less"
            yield Finding(
                "mend", "limiter-to-be-reset", each.limiter,
                f"{abs(change):.1f} dB {side} gain behind the {SORT[each.sort]} of {each.limiter_name} than it was set for: to be re-set.",
                f"Set it to {_level(each.wanted, each.unit)} for {each.loudspeaker_name}, or put the gain back.",
            )  # fmt: skip


@finder
def no_limiter(outcome: Outcome) -> Iterator[Finding]:
    """Loudspeakers whose amplifier can give more than their continuous rating with no limiter in between."""
    guarded = {each.loudspeaker for each in outcome.limiters if each.present is not None}
    for load in outcome.loudspeakers:
        stage = outcome.project.stage[load.stage]
        rated = stage.rated_w(stage.values(), "continuous")
        if load.stage in guarded or rated is None:
            continue
        able_w = _able_w(outcome, load.stage)
        if able_w is not None and able_w > rated * 1.26:
            yield Finding(
                "note", "no-limiter", load.stage,
                f"No limiter ahead of {load.name}: its amplifier can give {able_w:.0f} W, its continuous rating is {rated:.0f} W.",
                "Put an rms and a peak limiter in its processor, or make sure that nobody can turn it up so far.",
            )  # fmt: skip


def _able_w(outcome: Outcome, loudspeaker: str) -> float | None:
    """The watts at which the amplifier clips, into this loudspeaker."""
    row = outcome.plan.input_row(loudspeaker)
    clip = float(outcome.margins.clip_level[row, 0])
    stage = outcome.project.stage[loudspeaker]
    ohm = float(stage.load_ohm(stage.values()))
    return clip / ohm if 0.0 < clip < float("inf") else None
