"""What all commands share: arguments in plain words, the project file read, errors on stderr with status 2."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, NoReturn

if TYPE_CHECKING:
    from engine.outcome import Outcome
    from engine.project import Project

ERROR_STATUS = 2


class CommandError(Exception):
    """What the person at the command line has to mend, in plain words."""


class Arguments(argparse.ArgumentParser):
    """Arguments of one command, with the project file first. Raises `CommandError` instead of leaving the program."""

    def __init__(self, command: str, description: str, more: str = "", *, file: bool = True) -> None:
        super().__init__(
            prog=f"gainwright {command}",
            description=description,
            epilog=more,
            formatter_class=argparse.RawDescriptionHelpFormatter,
            allow_abbrev=False,
        )
        if file:
            self.add_argument("file", metavar="FILE", type=Path, help="the project, a .gainwright file")

    def error(self, message: str) -> NoReturn:
        raise CommandError(f"{message}\n{self.format_usage().rstrip()}")


def command(run: Callable[[Sequence[str]], int]) -> Callable[[Sequence[str]], int]:
    """Let a command end with its status: what it raises for people goes to stderr, status 2."""

    def guarded(argv: Sequence[str]) -> int:
        try:
            return run(argv)
        except CommandError as reason:
            print(f"gainwright: {reason}", file=sys.stderr)
            return ERROR_STATUS
        except BrokenPipeError:
            # Whoever was reading has gone, as `head` does: no reason to complain, now or when Python closes.
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
            return 0
        except SystemExit as leaving:  # --help
            return leaving.code if isinstance(leaving.code, int) else 0

    return guarded


def read_project(path: Path) -> Project:
    """The project in a file; what was noticed while reading goes to stderr. Raises `CommandError`."""
    from engine.store import StoreError, read

    try:
        project, notes = read(path)
    except StoreError as reason:
        raise CommandError(str(reason)) from None
    except OSError as reason:
        raise CommandError(f"{path} cannot be read: {_why(reason)}") from None
    for note in notes:
        print(f"gainwright: note: {note}", file=sys.stderr)
    return project


def read_outcome(path: Path, tone_hz: float | None = None) -> Outcome:
    """The project in a file, solved. Raises `CommandError`."""
    from engine.outcome import evaluate

    try:
        return evaluate(read_project(path), tone_hz=tone_hz)
    except ValueError as reason:
        raise CommandError(str(reason)) from None


def frequency_hz(text: str) -> float:
    """A frequency as typed: "1000", "1 kHz", "400 Hz"."""
    from engine.figures import FigureError, parse

    try:
        amount = parse(text if text.strip()[-1:].isalpha() else f"{text} Hz", "frequency").amount
    except FigureError as reason:
        raise argparse.ArgumentTypeError(str(reason)) from None
    if not 20.0 <= amount <= 20_000.0:
        raise argparse.ArgumentTypeError(f"{text} is outside 20 Hz to 20 kHz")
    return float(amount)


def output(path: Path, write: Callable[[Path], None]) -> None:
    """Write a file; the trouble with it as `CommandError`."""
    if not path.parent.is_dir():
        raise CommandError(f"{path} cannot be written: there is no folder {path.parent}")
    if path.is_dir():
        raise CommandError(f"{path} cannot be written: it is a folder")
    try:
        write(path)
    except OSError as reason:
        raise CommandError(f"{path} cannot be written: {_why(reason)}") from None


def _why(reason: OSError) -> str:
    return (reason.strerror or str(reason)).lower() if reason.errno else str(reason)
