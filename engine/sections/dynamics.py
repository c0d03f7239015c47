"""Static curves of compressors and limiters, with a switch that takes them out of circuit."""

from __future__ import annotations

import numpy as np

from .base import NEVER, Dynamics, Number


def compressor(
    threshold: Number, ratio: Number, make_up: Number, is_in: Number, *, detector: str = "rms"
) -> Dynamics | None:
    """Above `threshold` (a power) the level rises 1/`ratio` dB per dB; then `make_up` (a power gain).

    None where it is out in every setting of the batch: a section without dynamics solves faster.
    """
    switched = np.asarray(is_in) > 0.5
    if not np.any(switched):
        return None
    return Dynamics(
        np.where(switched, threshold, NEVER), ratio, np.where(switched, make_up, 1.0), detector=detector
    )


def rms_limiter(threshold: Number, is_in: Number) -> Dynamics | None:
    """Holds the programme's rms at `threshold`; the peaks come down by as much."""
    return compressor(threshold, NEVER, 1.0, is_in, detector="rms")


def peak_limiter(threshold: Number, is_in: Number) -> Dynamics | None:
    """Cuts sine-scaled peaks at `threshold`."""
    switched = np.asarray(is_in) > 0.5
    if not np.any(switched):
        return None
    return Dynamics(np.where(switched, threshold, NEVER), NEVER, limiter=True)
