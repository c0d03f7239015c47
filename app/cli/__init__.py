"""The command line: one file per command, each imported when it is called. `table` and `check` need no Qt."""

from __future__ import annotations

import importlib
from collections.abc import Callable, Mapping, Sequence
from types import MappingProxyType

Command = Callable[[Sequence[str]], int]


def _lazily(name: str) -> Command:
    def command(argv: Sequence[str]) -> int:
        run: Command = importlib.import_module(f"{__name__}.{name}").run
        return run(argv)

    return command


#: What each first word of the command line runs: its arguments in, its exit status out.
COMMANDS: Mapping[str, Command] = MappingProxyType(
    {
        name: _lazily(name)
        for name in ("table", "check", "propose", "tolerance", "sheet", "diagram", "signal", "programme")
    }
)
