"""`gainwright [FILE]` opens the window; the first word is a command if it is one of ours."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from pathlib import Path

from app.cli import COMMANDS

USAGE = """\
gainwright [FILE]                     open the window, on a project if one is named
gainwright table FILE [--json|--csv]  every node's levels
gainwright check FILE                 findings; status 1 where one says stop
gainwright propose FILE [-o OUT]      the settings worked out, and why
gainwright tolerance FILE             what the figures' tolerances leave
gainwright sheet FILE -o OUT.pdf      the sheets for the crew
gainwright diagram FILE -o OUT.png    the level diagram (.png, .svg or .pdf)
gainwright COMMAND --help             more about one of them
"""


def main(argv: Sequence[str] | None = None) -> int:
    """Run what the arguments ask for; the answer is the exit status."""
    arguments = list(sys.argv[1:] if argv is None else argv)
    first = arguments[0] if arguments else ""
    if first in COMMANDS:
        return COMMANDS[first](arguments[1:])
    if first in ("-h", "--help"):
        print(USAGE, end="")
        return 0
    if first == "--version":
        from app.version import VERSION

        print(f"gainwright {VERSION}")
        return 0
    if first.startswith("-") or len(arguments) > 1:
        print(f"gainwright: {' '.join(arguments)} is not understood\n{USAGE}", end="", file=sys.stderr)
        return 2
    from app.start import run

    return run(Path(first) if first else None)


if __name__ == "__main__":
    sys.exit(main())
