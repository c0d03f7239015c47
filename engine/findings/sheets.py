"""Figures: still guesses, or leaving something open."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from .registry import Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

TOGETHER = 3  # stages whose guesses are told one by one


@finder
def figures_still_guesses(outcome: Outcome) -> Iterator[Finding]:
    """Figures that nobody has taken from a sheet or measured, told together where many stages have them."""
    guessed = [
        (stage, labels)
        for stage in outcome.project.stages
        if (labels := [spec.label for _, spec, given in stage.figures() if given.origin == "guess"])
    ]
    mend = "Type them from the data sheet or measure them, and mark where they came from."
    if len(guessed) > TOGETHER:
        total = sum(len(labels) for _, labels in guessed)
        most, its = max(guessed, key=lambda each: len(each[1]))
        message = f"{total} figures of {len(guessed)} stages are still guesses, most of them ({len(its)}) at {most.name}."
        yield Finding("note", "still-a-guess", most.id, message, mend)
        return
    for stage, labels in guessed:
        number = (
            "1 figure is still a guess" if len(labels) == 1 else f"{len(labels)} figures are still guesses"
        )
        named = ", ".join(labels[:3]) + (" …" if len(labels) > 3 else "")
        yield Finding("note", "still-a-guess", stage.id, f"{number} at {stage.name}: {named}.", mend)


@finder
def figures_left_open(outcome: Outcome) -> Iterator[Finding]:
    """Figures whose sheet does not say what they refer to: they enter as an interval."""
    for each in outcome.assumptions.open:
        stage = each.key if each.key in outcome.project.stage else None
        name = outcome.project.stage[each.key].name if stage else each.key
        yield Finding(
            "note", "figure-left-open", stage,
            f"{each.label} of {name}, {each.text!r}, may mean {each.meaning}: what depends on it is shown as a range.",
            "Look on the sheet for the reference and weighting, and type them behind the number.",
        )  # fmt: skip
