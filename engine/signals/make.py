"""Make test signals: a sine, band-limited pink noise of a stated crest factor, noise in the shape of speech. Exact levels.

Levels are dBFS, where a full-scale sine reads 0 (AES17): a signal at L dBFS has rms = 10^(L/20) / sqrt(2).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from engine.bands import BAND_EDGE_HZ, BAND_MID_HZ
from engine.spectra import band_shares

Array = NDArray[np.float64]

RATES_HZ = (44100, 48000, 88200, 96000, 176400, 192000)
SUBTYPES: Mapping[int, str] = {16: "PCM_16", 24: "PCM_24", 32: "FLOAT"}
SIGNALS = ("sine", "pink", "speech")
LEAST_CREST_DB, MOST_CREST_DB = 6.0, 14.0
FADE_S = 0.005


class SignalError(ValueError):
    """A signal that cannot be made or read. Says why, and what would do."""


@dataclass(frozen=True)
class TestSignal:
    """What to make: `kind` one of SIGNALS, `level_dbfs` its rms level, `crest_db` the crest factor of noise."""

    __test__ = False  # no test case, whatever its name

    kind: str
    level_dbfs: float
    seconds: float
    rate_hz: int = 48000
    bits: int = 24
    frequency_hz: float = 1000.0
    crest_db: float = 12.0
    seed: int = 1

    def check(self) -> None:
        """Raise SignalError for what cannot be made."""
        if self.kind not in SIGNALS:
            raise SignalError(f"signal {self.kind!r} is unknown: it is one of {', '.join(SIGNALS)}")
        if self.rate_hz not in RATES_HZ:
            raise SignalError(
                f"{self.rate_hz} Hz is no sample rate for this: take one of {', '.join(map(str, RATES_HZ))}"
            )
        if self.bits not in SUBTYPES:
            raise SignalError(f"{self.bits} bit is not possible: take 16, 24 or 32")
        if not 0.1 <= self.seconds <= 3600.0:
            raise SignalError(f"{self.seconds:g} s is not possible: from 0.1 s to one hour")
        if not 1.0 <= self.frequency_hz < self.rate_hz / 2.0:
            raise SignalError(
                f"{self.frequency_hz:g} Hz does not fit {self.rate_hz} Hz: stay below half the sample rate"
            )
        if self.kind != "sine" and not LEAST_CREST_DB <= self.crest_db <= MOST_CREST_DB:
            raise SignalError(
                f"crest factor {self.crest_db:g} dB is not possible: from {LEAST_CREST_DB:g} to {MOST_CREST_DB:g} dB"
            )
        crest = 3.0103 if self.kind == "sine" else self.crest_db
        peak_dbfs = self.level_dbfs + crest - 3.0103
        if peak_dbfs > 0.0005:
            raise SignalError(
                f"peaks would reach {peak_dbfs:+.1f} dBFS: lower the level by {peak_dbfs:.1f} dB or more"
            )


def make_signal(wanted: TestSignal) -> Array:
    """The samples [n], full scale ±1. Raises SignalError for what cannot be made."""
    wanted.check()
    count = round(wanted.seconds * wanted.rate_hz)
    target_rms = 10.0 ** (wanted.level_dbfs / 20.0) / np.sqrt(2.0)
    if wanted.kind == "sine":
        return np.asarray(_whole_periods(wanted, count) * target_rms * np.sqrt(2.0))
    shaped = _shaped_noise(wanted, count)
    return np.asarray(_with_crest(shaped, wanted.crest_db) * target_rms)


def _whole_periods(wanted: TestSignal, count: int) -> Array:
    return np.asarray(np.sin(2.0 * np.pi * wanted.frequency_hz * np.arange(count) / wanted.rate_hz))


def _shaped_noise(wanted: TestSignal, count: int) -> Array:
    """Gaussian noise with the band powers of the spectrum, nothing outside 20 Hz to 20 kHz, unit rms."""
    random = np.random.default_rng(wanted.seed)
    frequency = np.asarray(np.fft.rfftfreq(count, 1.0 / wanted.rate_hz), dtype=float)
    density = _density(wanted.kind, frequency)
    phases = random.normal(size=frequency.size) + 1j * random.normal(size=frequency.size)
    noise = np.fft.irfft(phases * np.sqrt(density), n=count)
    return np.asarray(noise / np.sqrt(np.mean(noise**2)))


def _density(kind: str, frequency: Array) -> Array:
    """Power per bin: 1/f within the bands for pink, the speech bands' own levels drawn out over frequency for speech."""
    inside = (frequency >= BAND_EDGE_HZ[0]) & (frequency <= BAND_EDGE_HZ[-1])
    if kind == "pink":
        return np.where(inside, 1.0 / np.maximum(frequency, 1e-9), 0.0)
    shares = band_shares("speech")
    band = np.clip(np.searchsorted(BAND_EDGE_HZ, frequency) - 1, 0, BAND_MID_HZ.size - 1)
    return np.where(inside, shares[band] / np.diff(BAND_EDGE_HZ)[band], 0.0)


def _with_crest(noise: Array, crest_db: float, rounds: int = 60) -> Array:
    """The noise at unit rms with peaks held to the crest factor: clipped, brought back to unit rms, until it stays.

    The largest sample stands exactly at the stated crest factor.
    """
    ceiling = 10.0 ** (crest_db / 20.0)
    for _ in range(rounds):
        noise = noise / np.sqrt(np.mean(noise**2))
        over = np.abs(noise) > ceiling
        if not over.any():
            break
        noise = np.clip(noise, -ceiling, ceiling)
    noise = noise / np.sqrt(np.mean(noise**2))
    top = int(np.argmax(np.abs(noise)))
    noise[top] = np.copysign(ceiling, noise[top])
    return np.asarray(np.clip(noise, -ceiling, ceiling))


def write_signal(path: Path, wanted: TestSignal) -> None:
    """Write the signal as a mono WAV file; integers are dithered (triangular, 2 LSB), floats are not.

    Raises SignalError for what cannot be made, OSError where the file cannot be written.
    """
    import soundfile

    samples = make_signal(wanted)
    if wanted.bits < 32:
        step = 2.0 ** (1 - wanted.bits)
        random = np.random.default_rng(wanted.seed + 1)
        dither = (random.random(samples.size) - random.random(samples.size)) * step
        whole = np.round((samples + dither) / step)
        top = 2.0 ** (wanted.bits - 1)
        samples = np.clip(whole, -top, top - 1.0) * step
    try:
        soundfile.write(path, samples, wanted.rate_hz, subtype=SUBTYPES[wanted.bits], format="WAV")
    except soundfile.LibsndfileError as reason:
        raise OSError(f"{path} cannot be written: {reason}") from None
