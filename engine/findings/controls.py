"""Controls: faders outside their working range, and boosts that spend headroom where they boost."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

import numpy as np

from engine.bands import BAND_NOMINAL_HZ

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

BOOST_DB = 4.0


@finder
def fader_out_of_range(outcome: Outcome) -> Iterator[Finding]:
    """Faders that stand where a small move of the hand is many dB, or with nothing left above."""
    for stage in outcome.project.stages:
        for _, spec, setting in stage.controls():
            if setting.value is None or spec.work_low is None or spec.work_high is None:
                continue
            if not spec.work_low <= setting.value <= spec.work_high:
                side, how = ("below", "less") if setting.value < spec.work_low else ("above", "more")
                stands = f"{setting.value:.1f} dB".replace("-", "\u2212")
                yield Finding(
                    "mend", "fader-out-of-range", stage.id,
                    f"{stands} at {stage.name}, {spec.label.lower()}: {side} its working range.",
                    f"Give it {how} gain ahead of it, so that the fader stands near 0 dB.",
                )  # fmt: skip


@finder
def boost_spends_headroom(outcome: Outcome) -> Iterator[Finding]:
    """Sections whose gain at one frequency is far above what the programme's meter shows."""
    plan, solution = outcome.plan, outcome.solution
    for key in plan.answers:
        for section, row in plan.section_list(key):
            if np.ndim(section.gain) == 0 or np.shape(section.gain)[-1] != plan.axis.size:
                continue
            parent = int(plan.graph.first_parent[row])
            before, after = solution.flat[parent, 0, 0], solution.flat[row, 0, 0]
            gain_db = 10.0 * np.log10(np.maximum(plan.axis.bands(plan.rows.gain[row, 0]), 1e-30))
            worst = int(np.argmax(gain_db))
            shown = 10.0 * np.log10(after / before) if before > 0.0 and after > 0.0 else 0.0
            spent = float(gain_db[worst])
            if spent < BOOST_DB or spent - shown < BOOST_DB:
                continue
            name = outcome.project.stage[key].name
            yield Finding(
                "note", "boost-spends-headroom", key,
                f"{spent:.1f} dB of headroom spent at {BAND_NOMINAL_HZ[worst]:g} Hz by {name}, {section.name}; "
                f"the programme rises only {shown:.1f} dB.",
                "Cut elsewhere instead, or lower the level ahead of the equaliser by as much.",
            )  # fmt: skip
