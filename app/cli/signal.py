"""`gainwright signal KIND -o OUT.wav`: a test signal at an exact level."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from pathlib import Path

from app.cautions import CAUTION_LINE

from .arguments import Arguments, CommandError, command


@command
def run(argv: Sequence[str]) -> int:
    """Write a test signal; status 2 where it cannot be made or written."""
    from engine.signals import RATES_HZ, SIGNALS, SignalError, TestSignal, write_signal

    arguments = Arguments(
        "signal", "Write a test signal as a WAV file, at an exact level re a full-scale sine.", file=False
    )
    arguments.add_argument("kind", choices=SIGNALS, help="which signal")
    arguments.add_argument(
        "-o", "--out", type=Path, required=True, metavar="OUT.wav", help="the file to write"
    )
    arguments.add_argument("--level", type=float, default=-20.0, metavar="DBFS", help="rms level (-20)")
    arguments.add_argument("--seconds", type=float, default=30.0, help="how long (30)")
    arguments.add_argument(
        "--rate", type=int, default=48000, choices=RATES_HZ, help="sample rate in Hz (48000)"
    )
    arguments.add_argument(
        "--bits", type=int, default=24, choices=(16, 24, 32), help="16 or 24 with dither, 32 as float (24)"
    )
    arguments.add_argument("--frequency", type=float, default=1000.0, metavar="HZ", help="of the sine (1000)")
    arguments.add_argument(
        "--crest", type=float, default=12.0, metavar="DB", help="crest factor of the noise (12)"
    )
    given = arguments.parse_args(argv)
    wanted = TestSignal(
        given.kind, given.level, given.seconds, given.rate, given.bits, given.frequency, given.crest
    )
    try:
        write_signal(given.out, wanted)
    except (SignalError, OSError) as reason:
        raise CommandError(str(reason)) from None
    print(f"{given.out}: {given.kind}, {given.level:g} dBFS, {given.seconds:g} s")
    print(CAUTION_LINE, file=sys.stderr)
    return 0
