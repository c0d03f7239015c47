"""Amplifiers: too sensitive for what feeds them, loaded too heavily, over-tapped lines."""

from __future__ import annotations

from collections.abc import Iterator
from math import log10
from typing import TYPE_CHECKING

from engine.levels import ZERO_POWER
from engine.loads import amplifier_loads, amplifiers_of
from engine.sections.base import Domain

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

TOO_SENSITIVE_DB = 12.0
FULL_LINE = 0.8  # of the amplifier's rating (common practice, no source)


@finder
def amplifier_too_sensitive(outcome: Outcome) -> Iterator[Finding]:
    """Amplifiers that reach full output long before what feeds them does, and what that forces upstream."""
    for stage in amplifiers_of(outcome.plan):
        excess = excess_gain_db(outcome, stage.id)
        if excess is None or excess < TOO_SENSITIVE_DB:
            continue
        forced = _forced_upstream(outcome, stage.id)
        yield Finding(
            "mend", "amplifier-too-sensitive", stage.id,
            f"{excess:.1f} dB more than {stage.name} needs for full output can come from what feeds it: it is too sensitive.{forced}",
            f"Turn it down by about {excess:.0f} dB, use its lower-gain range, or put a pad ahead of it; then raise the levels before it.",
        )  # fmt: skip


def excess_gain_db(outcome: Outcome, amplifier: str) -> float | None:
    """How far the feeding output's clip point lies above the level that drives the amplifier to its own [dB]."""
    into, out_of = outcome.node(amplifier, "in"), outcome.node(amplifier, "out")
    row = outcome.plan.input_row(amplifier)
    driver = float(outcome.margins.clip_level[row, 0])
    if out_of.clip is None or into.level is None or out_of.level is None or not 0.0 < driver < float("inf"):
        return None
    full_in = out_of.clip - (out_of.level - into.level)
    return 10.0 * log10(driver / ZERO_POWER[Domain.ANALOGUE]) - full_in


def _forced_upstream(outcome: Outcome, amplifier: str) -> str:
    """In words: faders low and how much of the hiss the stages ahead of the amplifier own."""
    project = outcome.project
    low = []
    for key in outcome.path_through(amplifier):
        for _, spec, setting in project.stage[key].controls():
            if spec.work_low is not None and setting.value is not None and setting.value < spec.work_low:
                low.append(
                    f"{spec.label.lower()} of {project.stage[key].name} at {setting.value:.0f} dB".replace(
                        "-", "\u2212"
                    )
                )
    words = (
        f" It forces {low[0]}" + (f" and {len(low) - 1} more" if len(low) > 1 else "") + "." if low else ""
    )
    behind = {amplifier, *project.topology.fed_by(amplifier)}
    seat = next((seat for seat in outcome.seats if seat.stage in behind and seat.budget), None)
    if seat is not None:
        ahead = sum(share.share for share in seat.budget if share.stage not in behind)
        if ahead > 0.5:
            words += f" Stages ahead of it own {ahead * 100:.0f} % of the hiss at {seat.name}."
    return words


@finder
def below_minimum_load(outcome: Outcome) -> Iterator[Finding]:
    """Amplifiers that drive less impedance than they may."""
    for load in amplifier_loads(outcome.plan):
        if load.z_ohm is not None and load.z_ohm < load.least_ohm * 0.99:
            yield Finding(
                "stop", "below-minimum-load", load.stage,
                f"{load.z_ohm:.1f} Ω hang on {load.name}, whose least load is {load.least_ohm:.1f} Ω.",
                "Take loudspeakers off, wire them in series, or lower the taps; check with an impedance meter before power.",
            )  # fmt: skip


@finder
def over_tapped_line(outcome: Outcome) -> Iterator[Finding]:
    """Constant-voltage lines whose taps ask for more than the amplifier gives."""
    for load in amplifier_loads(outcome.plan):
        if load.line_w is None or load.rated_w is None or load.line_w <= FULL_LINE * load.rated_w:
            continue
        share = load.line_w / load.rated_w
        over = share > 1.0
        step = f": {10.0 * log10(share):.2f} dB over" if over else ""
        yield Finding(
            "stop" if over else "note", "over-tapped", load.stage,
            f"{load.line_w:.0f} W of taps hang on {load.name}, {share * 100:.0f} % of its {load.rated_w:.0f} W{step}.",
            "Go down one tap (3 dB) where it can be spared; 80 % is a usual limit.",
        )  # fmt: skip
