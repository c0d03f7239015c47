"""The three answers always in view: what clips first, who owns the hiss, where it is loudest. No Qt here."""

from __future__ import annotations

from dataclasses import dataclass

from app import words
from engine.outcome import Outcome
from engine.seat import SeatLevels


@dataclass(frozen=True)
class Answer:
    """A quiet label, what it says, the stage to go to (None: none), and whether it needs a hand at once."""

    label: str
    text: str
    stage: str | None = None
    grave: bool = False


def answers(outcome: Outcome) -> tuple[Answer, Answer, Answer]:
    """Narrowest peak margin, hiss at the nearest seat, loudest seat."""
    return narrowest(outcome), hiss(outcome), loudest(outcome)


def narrowest(outcome: Outcome) -> Answer:
    """The first clip point that programme peaks reach."""
    found = outcome.narrowest
    if found is None:
        return Answer("Narrowest", "nothing sounds yet")
    where = f"{found.name}, {found.section}"
    if found.margin_db < 0.0:
        return Answer("Clips", f"{words.margin(-found.margin_db)} over at {where}", found.stage, grave=True)
    return Answer("Narrowest", f"{words.margin(found.margin_db)} at {where}", found.stage)


def hiss(outcome: Outcome) -> Answer:
    """Hiss at the seat marked nearest (else where it is loudest): level, under the room, and whose it is."""
    audible = [seat for seat in outcome.seats if seat.hiss_a is not None]
    if not audible:
        return Answer("Hiss", "no seat hears any")
    nearest = [seat for seat in audible if seat.role == "nearest"] or audible
    seat = max(nearest, key=lambda each: each.hiss_a or -1e9)
    parts = [words.with_unit(words.number(seat.hiss_a), "dB(A)")]
    if seat.hiss_margin is not None:
        side = "over" if seat.hiss_margin < 0.0 else "under"
        parts.append(f"{words.number(abs(seat.hiss_margin))} {side} the room")
    owner = next(iter(seat.budget), None)
    text = ", ".join(parts)
    if owner is not None:
        text += f" · {owner.name} owns {words.share(owner.share)}"
    grave = seat.hiss_margin is not None and seat.hiss_margin < 0.0
    return Answer(f"Hiss at {seat.name}", text, owner.stage if owner else seat.stage, grave)


def loudest(outcome: Outcome) -> Answer:
    """The seat with the highest A-weighted level."""
    loud = [seat for seat in outcome.seats if seat.level_a is not None]
    if not loud:
        return Answer("Loudest seat", "no seat hears any")
    seat: SeatLevels = max(loud, key=lambda each: each.level_a or -1e9)
    return Answer(
        "Loudest seat", f"{seat.name}, {words.with_unit(words.number(seat.level_a), 'dB(A)')}", seat.stage
    )
