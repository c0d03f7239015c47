"""Seats: off their target, hiss over the room's own noise."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

TARGET_TOLERANCE_DB = 1.0


@finder
def seat_off_target(outcome: Outcome) -> Iterator[Finding]:
    """Seats more than 1 dB off the level they should have."""
    for seat in outcome.seats:
        off = seat.off_target
        if seat.target is None:
            continue
        if off is None:
            yield Finding(
                "mend", "seat-silent", seat.stage, f"Nothing arrives at {seat.name}.",
                "Link a loudspeaker to it, and look for a fader that is off or a mute.",
            )  # fmt: skip
        elif abs(off) > TARGET_TOLERANCE_DB:
            side, how = ("under", "Raise") if off < 0.0 else ("over", "Lower")
            yield Finding(
                "mend", "seat-off-target", seat.stage,
                f"{abs(off):.1f} dB {side} target at {seat.name}: {seat.level:.1f} dB SPL instead of {seat.target:.1f}.",
                f"{how} the level where the margin allows it: input to output, amplifiers last.",
            )  # fmt: skip


@finder
def hiss_over_room(outcome: Outcome) -> Iterator[Finding]:
    """Seats at which the system's noise is heard over the room's own."""
    for seat in outcome.seats:
        margin = seat.hiss_margin
        if margin is None or margin >= 0.0 or seat.ambient is None:
            continue
        owner = seat.budget[0]
        where = f" in the {seat.margin_band_hz:g} Hz octave" if seat.margin_band_hz else ""
        yield Finding(
            "mend", "hiss-over-room", seat.stage,
            f"Hiss is {-margin:.1f} dB over the room ({seat.ambient.name}) at {seat.name}{where}; "
            f"{owner.name}, {owner.origin}, owns {owner.share * 100:.0f} % of it.",
            f"Attenuate behind {owner.name}, not ahead of it, and make up the level before it.",
        )  # fmt: skip
