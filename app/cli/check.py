"""`gainwright check FILE`: what was noticed; status 1 where something says stop."""

from __future__ import annotations

import sys
from collections.abc import Sequence

from app import tabular

from .arguments import Arguments, command, read_outcome

STOP_STATUS = 1


@command
def run(argv: Sequence[str]) -> int:
    """Print the findings, the gravest first; status 1 with a stop among them, 2 where the file cannot be read."""
    given = Arguments("check", "Print what was noticed. Status 1 where a finding says stop.").parse_args(argv)
    findings = read_outcome(given.file).findings
    for group in tabular.grouped(findings):
        for each in group:
            print(f"{each.severity:<4}  {each.message}")
        if group[0].mend:
            print(f"      {group[0].mend}")
    if not findings:
        print("Nothing to mend.")
    sys.stdout.flush()
    return STOP_STATUS if any(each.severity == "stop" for each in findings) else 0
