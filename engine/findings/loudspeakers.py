"""Loudspeakers: driven past their ratings by the programme."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome


@finder
def loudspeaker_overdriven(outcome: Outcome) -> Iterator[Finding]:
    """Loudspeakers whose average or peak power passes the rating."""
    for load in outcome.loudspeakers:
        for rating, margin, watts in (
            ("continuous", load.continuous_margin_db, load.average_w),
            ("peak", load.peak_margin_db, load.peak_w),
        ):
            if margin is not None and margin < 0.0:
                yield Finding(
                    "stop", f"loudspeaker-over-{rating}", load.stage,
                    f"{watts:.0f} W into {load.name}: {-margin:.1f} dB over its {rating} rating.",
                    f"Lower the drive by {-margin:.1f} dB or set a limiter ahead of its amplifier; the maker's instructions come first.",
                )  # fmt: skip
