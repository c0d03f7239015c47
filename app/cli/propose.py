"""`gainwright propose FILE`: the settings worked out, and why; a new file only when asked for."""

from __future__ import annotations

import sys
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from app import tabular, words

from .arguments import Arguments, CommandError, command, output, read_outcome

if TYPE_CHECKING:
    from engine.outcome import Outcome
    from engine.project import Project
    from engine.propose import Alternative, Impossible, Proposal, Standing, Wishes

IMPOSSIBLE_STATUS = 1

_MORE = """\
--align:
  together             all clip points as far from the programme as they can be, the smallest margin as wide as possible
  amplifier-first:X    amplifiers clip X dB before anything else
  amplifier-last:X     something ahead of the amplifiers clips X dB before they do
  limiter-first        every limiter acts before anything clips
Without it the project's wanted reserve is kept and hiss made small.
Status 1 where no settings meet the aims; what would help is said, and no file is written.
"""


@command
def run(argv: Sequence[str]) -> int:
    """Print a proposal; status 0, 1 where there is none, 2 where something cannot be read or written."""
    from engine.propose import Impossible, alternatives, propose
    from engine.store import write

    arguments = Arguments("propose", "Work out the settings of all free controls, and say why.", _MORE)
    arguments.add_argument("--align", metavar="HOW", help="how clip points are to meet, see below")
    arguments.add_argument(
        "--lock", metavar="STAGE[.CONTROL]", action="append", default=[],
        help="hold a stage or one of its controls, by id or name; may be given several times",
    )  # fmt: skip
    arguments.add_argument(
        "--amplifiers",
        choices=("free", "locked"),
        default="free",
        help="locked: leave them at their known gain",
    )
    arguments.add_argument(
        "--alternatives", action="store_true", help="list the ways to place the gain, side by side"
    )
    arguments.add_argument(
        "-o", "--output", metavar="OUT", type=Path, help="write the project with these settings"
    )
    given = arguments.parse_args(argv)
    outcome = read_outcome(given.file)
    wishes = _wishes(outcome.project, given)
    if given.alternatives:
        _print(_side_by_side(outcome, alternatives(outcome, wishes)))
        return 0
    found = propose(outcome, wishes)
    if isinstance(found, Impossible):
        _print("\n".join(_impossible(found)))
        return IMPOSSIBLE_STATUS
    _print("\n".join(_proposal(found)))
    if given.output is not None:
        project = outcome.project.with_changes(found.changes) if found.changes else outcome.project
        output(given.output, lambda target: write(target, project))
    return 0


def _print(text: str) -> None:
    sys.stdout.write(text.rstrip("\n") + "\n")
    sys.stdout.flush()


def _wishes(project: Project, given: Any) -> Wishes:
    from engine.propose import Wishes

    name, _, by = (given.align or "reserve").partition(":")
    alignment = name.replace("-", " ")
    try:
        by_db = float(by.replace("\u2212", "-").replace("dB", "")) if by else 0.0
        if by and not alignment.startswith("amplifier"):
            raise CommandError(f"--align {name} takes no number")
        return Wishes(alignment, by_db, given.amplifiers, locked=frozenset(_locked(project, given.lock)))  # type: ignore[arg-type]
    except ValueError:
        raise CommandError(
            f"--align {given.align} is not understood: together, amplifier-first:X, amplifier-last:X or limiter-first, "
            "X in dB from -60 to 60"
        ) from None


def _locked(project: Project, texts: Sequence[str]) -> Iterator[tuple[str, str]]:
    for text in texts:
        whole = _stage(project, text)
        if whole is not None:
            yield whole, ""
            continue
        first, _, control = text.rpartition(".")
        stage = _stage(project, first)
        if stage is None:
            raise CommandError(f"--lock {text}: there is no stage of that id or name")
        known = {name: spec.label for name, spec, _ in project.stage[stage].controls()}
        names = [name for name, label in known.items() if control in (name, label)]
        if not names:
            raise CommandError(
                f"--lock {text}: {project.stage[stage].name} has no control {control!r}; it has {', '.join(known)}"
            )
        yield stage, names[0]


def _stage(project: Project, text: str) -> str | None:
    if text in project.stage:
        return text
    return next((stage.id for stage in project.stages if stage.name == text), None)


def _proposal(found: Proposal) -> Iterator[str]:
    if found.touched:
        yield tabular.aligned([["order", "stage", "control", "now", "set to"], *_touched(found)], left=3)
        yield ""
    yield tabular.aligned([["", "now", "then"], *_numbers(found.before, found.after)])
    yield ""
    yield from found.reasons
    yield from (f"Note: {note}" for note in found.notes)


def _touched(found: Proposal) -> Iterator[list[str]]:
    for place, each in enumerate(found.touched, start=1):
        yield [str(place), each.name, each.label, each.before, each.after]


def _numbers(before: Standing, after: Standing) -> Iterator[list[str]]:
    both = (before, after)
    yield ["smallest peak margin dB", *(words.number(each.margin_db) for each in both)]
    yield ["  where", *(each.margin_where or words.NOTHING for each in both)]
    yield ["level dB SPL", *(words.number(each.level) for each in both)]
    yield ["hiss dB SPL", *(words.number(each.hiss) for each in both)]
    yield ["  under the room dB", *(words.number(each.hiss_margin) for each in both)]
    yield ["  who owns it", *(each.owner or words.NOTHING for each in both)]


def _impossible(found: Impossible) -> Iterator[str]:
    yield found.message
    if found.reliefs:
        yield "Any one of these would make it possible:"
        yield from (f"  {relief.text}" for relief in found.reliefs)
    if found.nearest is not None and found.nearest.touched:
        yield ""
        yield "What comes nearest:"
        yield from _proposal(found.nearest)


def _side_by_side(outcome: Outcome, ways: Sequence[Alternative]) -> str:
    from engine.propose import standing

    rows = [["way", "margin dB", "hiss dB SPL", "misses by dB", "who owns the hiss", "to touch"]]
    now = standing(outcome)
    rows.append(["As it is", words.number(now.margin_db), words.number(now.hiss), "", now.owner, ""])
    for each in ways:
        held = each.standing
        found = each.proposal or each.nearest
        touched = (
            "; ".join(f"{t.name} {t.label.lower()} {t.after}" for t in found.touched)
            if found
            else words.NOTHING
        )
        rows.append([
            each.title, words.number(None if held is None else held.margin_db),
            words.number(None if held is None else held.hiss),
            "" if each.proposal is not None else words.number(each.miss_db),
            held.owner if held is not None else words.NOTHING, touched,
        ])  # fmt: skip
    return tabular.aligned(rows)
