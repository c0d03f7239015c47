"""In which order clip points come: whether an alignment that was wished for holds in a solved project."""

from __future__ import annotations

import numpy as np

from engine.figures import format_db
from engine.outcome import Outcome

from .protect import limiter_margin_db
from .wishes import Wishes, amplifier_rows

CLOSE_DB = 0.1


def alignment_miss(outcome: Outcome, wishes: Wishes) -> tuple[float, str]:
    """By how many dB a wished order of clipping is missed, and in words; 0 where it holds or none was wished."""
    if wishes.alignment in ("reserve", "together"):
        return 0.0, ""
    own = outcome.margins.own_db[:, 0]
    amplifiers = amplifier_rows(outcome)
    if wishes.alignment == "limiter first":
        limit = limiter_margin_db(outcome)
        if limit is None:
            return float("inf"), "There is no limiter in circuit that could act first."
        miss = limit - float(own.min())
        words = f"A clip point comes {format_db(miss, 'dB')} before the limiters act."
        return (miss, words) if miss > CLOSE_DB else (0.0, "")
    if not amplifiers or not np.isfinite(own[amplifiers]).any():
        return float("inf"), "There is no amplifier in this project that could clip first or last."
    others = own.copy()
    others[amplifiers] = np.inf
    lead = float(others.min()) - float(own[amplifiers].min())
    if wishes.alignment == "amplifier last":
        lead = -lead
    miss = wishes.by_db - lead
    side = "first" if wishes.alignment == "amplifier first" else "last"
    words = f"{format_db(miss, 'dB')} are missing for the amplifiers to clip {side} by {format_db(wishes.by_db, 'dB')}."
    return (miss, words) if miss > CLOSE_DB else (0.0, "")
