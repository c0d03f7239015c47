"""Clip points: which is reached first, and which are passed already."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

import numpy as np

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

SIDE = {"in": "input", "out": "output"}


@finder
def first_to_clip(outcome: Outcome) -> Iterator[Finding]:
    """Which clip point is reached first when all sources rise together."""
    first = outcome.narrowest
    if first is not None and first.margin_db >= 0.0:
        yield Finding(
            "note", "first-to-clip", first.stage,
            f"{first.margin_db:.1f} dB left at {first.name}, {first.section} {SIDE[first.side]}: the first to clip.",
            "Everything else has more. Raise it by lowering the level there, or bring the others down to meet it.",
        )  # fmt: skip


@finder
def clips(outcome: Outcome) -> Iterator[Finding]:
    """Sections whose programme peaks pass their clip point."""
    margins = outcome.margins
    for stage in outcome.plan.answers:
        worst: tuple[float, str, str] | None = None
        for section, row in outcome.plan.section_list(stage):
            for side, column in (("in", margins.at_in_db), ("out", margins.at_out_db)):
                margin = float(column[row, 0])
                if np.isfinite(margin) and margin < -1e-9 and (worst is None or margin < worst[0]):
                    worst = (margin, section.name, side)
        if worst is not None:
            margin, section_name, side = worst
            name = outcome.project.stage[stage].name
            yield Finding(
                "stop", "clips", stage,
                f"Peaks pass the clip point by {-margin:.1f} dB at {name}, {section_name} {SIDE[side]}.",
                f"Lower the level ahead of it by {-margin:.1f} dB or more: a control behind this point does not help.",
            )  # fmt: skip
