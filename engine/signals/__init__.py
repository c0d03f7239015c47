"""Test signals at an exact level, and what a recording of the show's own programme holds. Needs scipy and soundfile when used."""

from __future__ import annotations

from .make import RATES_HZ, SIGNALS, SignalError, TestSignal, make_signal, write_signal
from .programme import Programme, read_programme

__all__ = [
    "RATES_HZ",
    "SIGNALS",
    "Programme",
    "SignalError",
    "TestSignal",
    "make_signal",
    "read_programme",
    "write_signal",
]
