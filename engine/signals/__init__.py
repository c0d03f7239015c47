"""Test signals at an exact level, and what a recording of the show's own programme holds. Needs scipy and soundfile when used."""

from __future__ import annotations

from .against import Moment, moments
from .make import RATES_HZ, SIGNALS, SignalError, TestSignal, make_signal, write_signal
from .programme import Programme, read_programme

__all__ = [
    "RATES_HZ",
    "SIGNALS",
    "Moment",
    "Programme",
    "SignalError",
    "TestSignal",
    "make_signal",
    "moments",
    "read_programme",
    "write_signal",
]
