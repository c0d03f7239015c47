"""Read a recording of the show's own programme: levels, peaks, crest factor and spectrum, streamed in blocks.

rms levels are dBFS with a full-scale sine at 0 (AES17); several channels are taken as one programme by the mean of their
powers, peaks by the largest. True peak: 4-fold oversampling (ITU-R BS.1770, annex 2; our own 48-tap polyphase filter).
The result does not depend on the size of the blocks that are read: everything is counted in frames of its own.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from engine.bands import BAND_COUNT, BAND_EDGE_HZ

from .make import SignalError

Array = NDArray[np.float64]
Progress = Callable[[float], bool]  # share done; answers whether to go on

FRAME_S = 0.1  # levels over time are counted in tenths of a second
BLOCK = 1 << 17
OVERSAMPLE = 4
TAPS = 48
FFT_SIZE = 8192
PERCENTILES = (1, 5, 10, 25, 50, 75, 90, 95, 99)


@dataclass(frozen=True)
class Programme:
    """What a recording holds. Levels in dBFS; -inf for silence.

    `frame_rms_dbfs` and `frame_peak_dbfs` [n] are its level and sample peak over time, `frame_s` apart;
    `band_shares` [31] its power by one-third-octave band, adding up to one (all zero for silence).
    """

    channels: int
    rate_hz: int
    seconds: float
    rms_dbfs: float
    sample_peak_dbfs: float
    true_peak_dbfs: float
    crest_db: float
    frame_s: float
    frame_rms_dbfs: Array
    frame_peak_dbfs: Array
    band_shares: Array

    @property
    def percentiles_dbfs(self) -> dict[int, float]:
        """Level exceeded not more than that share of the time [%]: percentiles of the frame levels that sound."""
        sounding = self.frame_rms_dbfs[np.isfinite(self.frame_rms_dbfs)]
        if not sounding.size:
            return dict.fromkeys(PERCENTILES, -np.inf)
        return {p: float(np.percentile(sounding, p)) for p in PERCENTILES}

    def over(self, ceiling_dbfs: float) -> tuple[int, float]:
        """How often (runs) and for how long [s] the sample peak passes a ceiling."""
        above = self.frame_peak_dbfs > ceiling_dbfs
        starts = int(np.count_nonzero(above[1:] & ~above[:-1]) + (above[0] if above.size else 0))
        return starts, float(np.count_nonzero(above) * self.frame_s)


@dataclass
class _Tally:
    """What has been counted so far; frames and FFT segments keep what does not fill them yet."""

    rate_hz: int
    channels: int
    frame: int
    power: float = 0.0
    count: int = 0
    peak: float = 0.0
    true_peak: float = 0.0
    rms: list[float] = field(default_factory=list)
    peaks: list[float] = field(default_factory=list)
    spectrum: Array = field(default_factory=lambda: np.zeros(FFT_SIZE // 2 + 1))
    segments: int = 0
    rest: Array = field(default_factory=lambda: np.zeros((0, 1)))
    tail: Array = field(default_factory=lambda: np.zeros((0, 1)))
    waiting: Array = field(default_factory=lambda: np.zeros((0, 1)))


def read_programme(path: Path, progress: Progress | None = None, *, block: int = BLOCK) -> Programme | None:
    """Read WAV, FLAC or OGG; None where `progress` said to stop. Raises SignalError for what is no readable recording."""
    import soundfile

    try:
        with soundfile.SoundFile(path) as file:
            if file.frames == 0:
                raise SignalError(f"{path.name} holds no sound: choose a recording with something in it")
            tally = _new_tally(file.samplerate, file.channels)
            done = 0
            for samples in file.blocks(blocksize=block, dtype="float64", always_2d=True):
                if not np.isfinite(samples).all():
                    raise SignalError(
                        f"{path.name} holds values that are no numbers near {done / file.samplerate:.1f} s"
                    )
                _take(tally, samples)
                done += len(samples)
                if progress is not None and not progress(min(1.0, done / file.frames)):
                    return None
    except soundfile.LibsndfileError as reason:
        raise SignalError(
            f"{path.name} cannot be read as a recording: {reason}; WAV, FLAC and OGG can"
        ) from None
    return _finish(tally)


def _new_tally(rate_hz: int, channels: int) -> _Tally:
    tally = _Tally(rate_hz, channels, max(1, round(FRAME_S * rate_hz)))
    tally.rest = np.zeros((0, channels))
    tally.tail = np.zeros((TAPS - 1, channels))
    tally.waiting = np.zeros((0, channels))
    return tally


def _take(tally: _Tally, samples: Array) -> None:
    tally.peak = max(tally.peak, float(np.abs(samples).max(initial=0.0)))
    _take_frames(tally, np.concatenate((tally.rest, samples)))
    _take_true_peak(tally, np.concatenate((tally.tail, samples)))
    _take_spectrum(tally, np.concatenate((tally.waiting, samples)))


def _take_frames(tally: _Tally, joined: Array) -> None:
    whole = len(joined) // tally.frame
    used = joined[: whole * tally.frame].reshape(whole, tally.frame, tally.channels)
    means = np.mean(used**2, axis=(1, 2))
    tally.rms.extend(means.tolist())
    tally.peaks.extend(np.abs(used).max(axis=(1, 2), initial=0.0).tolist())
    tally.rest = joined[whole * tally.frame :]


def _polyphase() -> Array:
    """Interpolating low-pass for 4-fold oversampling, one row per phase [4, TAPS], unity gain at every phase."""
    n = np.arange(OVERSAMPLE * TAPS) - (OVERSAMPLE * TAPS - 1) / 2.0
    ideal = np.sinc(n / OVERSAMPLE) * np.kaiser(n.size, 8.0)
    rows = ideal.reshape(TAPS, OVERSAMPLE).T
    return np.asarray(rows / rows.sum(axis=1, keepdims=True))


_PHASES = _polyphase()


def _take_true_peak(tally: _Tally, joined: Array) -> None:
    from scipy.signal import oaconvolve

    for channel in range(tally.channels):
        line = joined[:, channel]
        if np.abs(line).max(initial=0.0) * 1.6 <= tally.true_peak:
            continue  # no filter of this length lifts it above what was found already
        for phase in _PHASES:
            tally.true_peak = max(
                tally.true_peak, float(np.abs(oaconvolve(line, phase, mode="valid")).max(initial=0.0))
            )
    tally.tail = joined[len(joined) - (TAPS - 1) :]


def _take_spectrum(tally: _Tally, joined: Array) -> None:
    """Welch's method: half-overlapping Hann segments, their powers added."""
    step = FFT_SIZE // 2
    whole = max(0, (len(joined) - FFT_SIZE) // step + 1)
    if whole:
        window = np.hanning(FFT_SIZE + 1)[:-1]
        starts = np.arange(whole) * step
        for channel in range(tally.channels):
            for some in np.array_split(starts, max(1, whole // 64)):
                segments = joined[some[:, None] + np.arange(FFT_SIZE), channel] * window
                tally.spectrum += (np.abs(np.fft.rfft(segments, axis=1)) ** 2).sum(axis=0)
        tally.segments += whole
        joined = joined[whole * step :]
    tally.waiting = joined


def _finish(tally: _Tally) -> Programme:
    rest = tally.rest
    powers, counts = list(tally.rms), [tally.frame] * len(tally.rms)
    if len(rest):
        powers.append(float(np.mean(rest**2)))
        counts.append(len(rest))
        tally.peaks.append(float(np.abs(rest).max()))
    total = float(np.average(powers, weights=counts)) if powers else 0.0
    if not tally.segments:
        padded = np.zeros((FFT_SIZE, tally.channels))
        padded[: len(tally.waiting)] = tally.waiting
        _take_spectrum(tally, padded)
    rms = _dbfs(2.0 * total)
    true_peak = max(tally.true_peak, tally.peak)
    return Programme(
        channels=tally.channels, rate_hz=tally.rate_hz, seconds=sum(counts) / tally.rate_hz, rms_dbfs=rms,
        sample_peak_dbfs=_dbfs(tally.peak**2), true_peak_dbfs=_dbfs(true_peak**2),
        crest_db=_dbfs(tally.peak**2) - rms + 3.0103 if total > 0.0 else 0.0, frame_s=tally.frame / tally.rate_hz,
        frame_rms_dbfs=_dbfs_array(2.0 * np.array(powers)), frame_peak_dbfs=_dbfs_array(np.array(tally.peaks) ** 2),
        band_shares=_bands(tally),
    )  # fmt: skip


def _bands(tally: _Tally) -> Array:
    """Power per band, bins shared between bands by where their edges cut them."""
    width = tally.rate_hz / FFT_SIZE
    edges = np.arange(FFT_SIZE // 2 + 2) * width - width / 2.0
    running = np.concatenate(([0.0], np.cumsum(tally.spectrum)))
    at_edges = np.interp(BAND_EDGE_HZ, edges, running)
    powers = np.diff(at_edges)
    total = powers.sum()
    return np.asarray(powers / total) if total > 0.0 else np.zeros(BAND_COUNT)


def _dbfs(power: float) -> float:
    return float(10.0 * np.log10(power)) if power > 0.0 else -np.inf


def _dbfs_array(power: Array) -> Array:
    with np.errstate(divide="ignore"):
        return np.asarray(10.0 * np.log10(power))
