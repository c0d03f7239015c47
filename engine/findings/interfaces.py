"""Interfaces: starved inputs, unlike level standards, heavy loading."""

from __future__ import annotations

from collections.abc import Iterator
from math import log10
from typing import TYPE_CHECKING

from engine.sections.base import ActiveStage, Domain

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

ENOUGH_SNR_DB = 75.0  # with so much left nobody hears what was lost
STARVED_DB = 6.0  # S/N a stage's own noise may cost before it is said
LINE_CLIP_DBU = 0.0  # an output that clips above this is at line level
UNLIKE_DB = 10.0  # -10 dBV against +4 dBu is 11.8 dB
HEAVY_DB = 1.0


@finder
def starved_input(outcome: Outcome) -> Iterator[Finding]:
    """Stages whose own noise costs more than 6 dB of S/N: their input is fed too little."""
    for key, answer in outcome.plan.answers.items():
        if not isinstance(answer, ActiveStage) or not answer.inputs or not answer.outputs:
            continue
        into, out_of = outcome.node(key, "in"), outcome.node(key, "out")
        if into.snr is None or out_of.snr is None or into.snr - out_of.snr < STARVED_DB:
            continue
        if out_of.snr > ENOUGH_SNR_DB:
            continue
        name, spare = outcome.project.stage[key].name, into.peak_margin
        room = f" and its input has {spare:.1f} dB to spare" if spare is not None and spare > 0.0 else ""
        yield Finding(
            "mend", "starved-input", key,
            f"{into.snr - out_of.snr:.1f} dB of S/N lost in {name}: its own noise leads{room}.",
            f"Send {name} more level and turn it down behind that point.",
        )  # fmt: skip


@finder
def unlike_level_standards(outcome: Outcome) -> Iterator[Finding]:
    """Line outputs and inputs whose clip points differ as -10 dBV and +4 dBu gear do."""
    for link in outcome.project.links:
        source, target = outcome.project.stage[link.source], outcome.project.stage[link.target]
        if not isinstance(outcome.plan.answers[link.source], ActiveStage):
            continue
        ref = next(
            (
                r
                for r in outcome.plan.nodes
                if (r.stage, r.direction, r.port) == (link.target, "in", link.input)
            ),
            None,
        )
        if ref is None or not ref.has_clip or ref.domain is not Domain.ANALOGUE:
            continue
        sends = next((n for n in [outcome.node(link.source, "out")] if n.port == link.output), None)
        takes = outcome.node(link.target, "in", link.input)
        if sends is None or sends.clip is None or takes.clip is None or sends.clip < LINE_CLIP_DBU:
            continue
        step = sends.clip - takes.clip
        if abs(step) < UNLIKE_DB or (
            takes.peak_margin is not None and step > 0 and takes.peak_margin > UNLIKE_DB
        ):
            continue
        if step < 0.0:
            message = (
                f"{source.name} clips {-step:.1f} dB under what {target.name} takes: unlike level standards."
            )
            mend = f"Expect about {-step:.0f} dB more gain at {target.name} (−10 dBV and +4 dBu differ by 11.8 dB); look for a switch."
        else:
            message = (
                f"{source.name} can send {step:.1f} dB more than {target.name} takes: unlike level standards."
            )
            mend = f"Put a pad of {step:.0f} dB in the line, or limit what {source.name} sends: matching nominals still clip on peaks."
        yield Finding("note" if step < 0.0 else "mend", "unlike-levels", link.target, message, mend)


@finder
def heavy_loading(outcome: Outcome) -> Iterator[Finding]:
    """Outputs that lose more than 1 dB into what hangs on them."""
    for key, answer in outcome.plan.answers.items():
        if not isinstance(answer, ActiveStage) or outcome.project.stage[key].domain is not Domain.ANALOGUE:
            continue
        for port in outcome.project.stage[key].outputs():
            if port.domain is not Domain.ANALOGUE or port.tap:
                continue
            gain = outcome.plan.rows.gain[outcome.plan.output_row(key, port.name), 0, -1]
            loss_db = -10.0 * log10(gain) if gain > 0.0 else 0.0
            if loss_db > HEAVY_DB and not answer.emission:
                yield Finding(
                    "mend", "heavy-load", key,
                    f"{loss_db:.1f} dB lost at {outcome.project.stage[key].name} into what hangs on its output.",
                    "Feed fewer inputs from it, use a distribution amplifier, or take a terminating resistor out.",
                )  # fmt: skip
