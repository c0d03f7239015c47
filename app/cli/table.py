"""`gainwright table FILE`: every node, seat and loudspeaker as text, JSON or CSV."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from typing import TYPE_CHECKING

from app import tabular

from .arguments import Arguments, command, frequency_hz, read_outcome

if TYPE_CHECKING:
    from engine.outcome import Outcome


_OBJECT = """\
--json prints one object; numbers are unrounded, null where there is none:
  nodes         stage (the id), name (its label), port (in or out), index (0 unless there are several), domain, unit,
                level, peak, clip, ceiling, noise, noise_a in that unit; headroom, peak_margin, snr in dB
  seats         stage, name, level, level_a, peak, hiss, hiss_a in dB SPL, hiss_margin in dB, budget: the largest
                share first, each with stage, name, origin, hiss, hiss_a, share (0 to 1)
  loudspeakers  stage, name, average_w, peak_w, continuous_margin_db, peak_margin_db
  findings      severity (stop, mend or note), code, stage, message
--csv prints the nodes, one a line, with the same names. The peak is sine-scaled: level + crest factor - 3.01 dB.
"""


@command
def run(argv: Sequence[str]) -> int:
    """Print the table; status 0, or 2 where the file cannot be read."""
    arguments = Arguments("table", "Print the level, clip point, noise and margins at every node.", _OBJECT)
    form = arguments.add_mutually_exclusive_group()
    form.add_argument("--json", action="store_true", help="one JSON object, numbers unrounded")
    form.add_argument("--csv", action="store_true", help="one line per node, numbers unrounded")
    arguments.add_argument(
        "--tone", metavar="HZ", type=frequency_hz, help="levels of a test tone at this frequency"
    )
    given = arguments.parse_args(argv)
    outcome = read_outcome(given.file, given.tone)
    text = (
        tabular.to_json(outcome) if given.json else tabular.to_csv(outcome) if given.csv else _text(outcome)
    )
    sys.stdout.write(text.rstrip("\n") + "\n")
    sys.stdout.flush()
    return 0


def _text(outcome: Outcome) -> str:
    tables = [tabular.aligned(tabular.node_table(outcome), left=2)]
    if outcome.seats:
        tables.append(tabular.aligned(tabular.seat_table(outcome)))
    if outcome.loudspeakers:
        tables.append(tabular.aligned(tabular.loudspeaker_table(outcome)))
    return "\n\n".join(tables)
