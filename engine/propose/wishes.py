"""What a person wishes of a proposal: how clip points are to meet, whether amplifiers may move, what is in scope."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from engine.figures import parse
from engine.loads import amplifiers_of
from engine.outcome import Outcome
from engine.sections.base import ActiveStage

from .levers import Hand

Alignment = Literal["reserve", "together", "amplifier first", "amplifier last", "limiter first"]
ALIGNMENTS: tuple[Alignment, ...] = (
    "reserve", "together", "amplifier first", "amplifier last", "limiter first",
)  # fmt: skip


@dataclass(frozen=True)
class Wishes:
    """What is asked for.

    `alignment`: "reserve" keeps the project's wanted reserve and then makes hiss small; "together" makes the smallest
    margin as wide as it can be; "amplifier first" and "last" by `by_db`; "limiter first" keeps every clip point behind
    the limiters. `amplifiers` "locked" leaves them at their known gain. `stages` limits the hands to some stages; `locked`
    and `freed` are controls held or let go beside their own states; with `only` nothing else moves.
    """

    alignment: Alignment = "reserve"
    by_db: float = 0.0
    amplifiers: Literal["free", "locked"] = "free"
    stages: frozenset[str] | None = None
    locked: frozenset[Hand] = field(default_factory=frozenset)
    freed: frozenset[Hand] = field(default_factory=frozenset)
    only: frozenset[Hand] | None = None

    def __post_init__(self) -> None:
        if self.alignment not in ALIGNMENTS:
            raise ValueError(f"alignment {self.alignment!r} is unknown: it is one of {', '.join(ALIGNMENTS)}")
        if not -60.0 <= self.by_db <= 60.0:
            raise ValueError(f"alignment by {self.by_db:g} dB: give a number from -60 to 60")


def free_hands(outcome: Outcome, wishes: Wishes) -> Iterator[Hand]:
    """The controls a proposal may touch, in signal order. Locked ones, and those left to the operator, are not among them.

    A stage whose id is held by `wishes.locked` with an empty control is held whole.
    """
    project = outcome.project
    amplifiers = {stage.id for stage in amplifiers_of(outcome.plan)}
    thresholds = {
        (key, limiter.control) for key, stage in project.stage.items() for limiter in stage.limiters()
    }
    for key in project.topology.order:
        if wishes.stages is not None and key not in wishes.stages:
            continue
        if (key, "") in wishes.locked or (wishes.amplifiers == "locked" and key in amplifiers):
            continue
        for name, _, setting in project.stage[key].controls():
            hand = (key, name)
            is_free = setting.state == "adjustable" or hand in wishes.freed
            is_asked = wishes.only is None or hand in wishes.only
            if is_free and is_asked and hand not in wishes.locked and hand not in thresholds:
                yield hand


def wanted_margin_db(outcome: Outcome, wishes: Wishes) -> float:
    """The margin above which more counts as equal [dB]."""
    if wishes.alignment != "reserve":
        return float("inf")
    return parse(outcome.project.header.reserve_db.text, "level_db").amount


def held_back_db(outcome: Outcome, wishes: Wishes) -> NDArray[np.float64]:
    """How much later than the first each row's clip point is to come [row], in dB."""
    held = np.zeros(outcome.plan.graph.size)
    if wishes.alignment == "amplifier first":
        held[:] = wishes.by_db
        held[amplifier_rows(outcome)] = 0.0
    elif wishes.alignment == "amplifier last":
        held[amplifier_rows(outcome)] = wishes.by_db
    return held


def amplifier_rows(outcome: Outcome) -> list[int]:
    """The rows of the amplifiers' output sections."""
    plan = outcome.plan
    found = []
    for stage in amplifiers_of(plan):
        answer = plan.answers[stage.id]
        assert isinstance(answer, ActiveStage)
        found += [plan.section_row(stage.id, output.section) for output in answer.outputs.values()]
    return found
