"""`gainwright programme RECORDING`: what a recording of the show holds."""

from __future__ import annotations

import json
import sys
from collections.abc import Sequence
from pathlib import Path

from app import words

from .arguments import Arguments, CommandError, command


@command
def run(argv: Sequence[str]) -> int:
    """Print levels, peaks, crest factor and bands of a recording; status 2 where it cannot be read."""
    from engine.bands import BAND_NOMINAL_HZ
    from engine.signals import SignalError, read_programme

    arguments = Arguments(
        "programme", "Print what a recording holds: level, peaks, crest factor, bands.", file=False
    )
    arguments.add_argument("recording", type=Path, help="WAV, FLAC or OGG")
    arguments.add_argument("--json", action="store_true", help="as one JSON object")
    given = arguments.parse_args(argv)
    try:
        found = read_programme(given.recording, _tell if sys.stderr.isatty() else None)
    except SignalError as reason:
        raise CommandError(str(reason)) from None
    assert found is not None
    facts = {
        "channels": found.channels, "rate_hz": found.rate_hz, "seconds": found.seconds, "rms_dbfs": _finite(found.rms_dbfs),
        "sample_peak_dbfs": _finite(found.sample_peak_dbfs), "true_peak_dbfs": _finite(found.true_peak_dbfs), "crest_db": found.crest_db,
        "percentiles_dbfs": {str(p): _finite(v) for p, v in found.percentiles_dbfs.items()},
        "band_shares": dict(zip(map(str, BAND_NOMINAL_HZ), found.band_shares.tolist(), strict=True)),
    }  # fmt: skip
    if given.json:
        print(json.dumps(facts, indent=1))
        return 0
    print(f"{given.recording.name}: {found.seconds:.1f} s, {found.channels} channels at {found.rate_hz} Hz")
    for label, value in (
        ("rms", found.rms_dbfs),
        ("sample peak", found.sample_peak_dbfs),
        ("true peak", found.true_peak_dbfs),
    ):
        print(f"  {label:<12} {words.level(_finite(value), 'dBFS', 2)}")
    print(f"  {'crest factor':<12} {words.margin(found.crest_db, 2)}")
    print("  level under which it stays for a share of the time:")
    for percent, value in found.percentiles_dbfs.items():
        print(f"  {percent:>10} % {words.level(_finite(value), 'dBFS')}")
    return 0


def _tell(share: float) -> bool:
    print(f"\r{share * 100:3.0f} %", end="" if share < 1.0 else "\r     \r", file=sys.stderr, flush=True)
    return True


def _finite(value: float) -> float | None:
    return value if abs(value) != float("inf") else None
