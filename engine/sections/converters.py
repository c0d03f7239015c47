"""Converters: a full-scale level, and the noise that a dynamic range or a word length leaves. 0 dBFS is a full-scale sine's rms
(AES17)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.bands import Axis
from engine.units import power_from_db

from .base import Active, Domain, Number
from .noise import white_total

Array = NDArray[np.float64]

#: What TPDF dither adds to the quantisation noise: three times its power (Lipshitz, Wannamaker and Vanderkooy 1992).
DITHERED = 3.0


def range_noise(axis: Axis, dynamic_range_db: Number, weighting: str | None) -> Array:
    """Noise re full scale² of a dynamic range: white, that many dB under a full-scale sine."""
    return white_total(axis, power_from_db(-np.asarray(dynamic_range_db)), weighting)


def word_noise(axis: Axis, bits: Number, *, dithered: bool) -> Array:
    """Noise re full scale² of a word length: 6.02 N + 1.76 dB under a full-scale sine (Bennett 1948), plus dither's own."""
    total = 2.0 / 3.0 * 4.0 ** -np.asarray(bits, dtype=float)
    return white_total(axis, total * (DITHERED if dithered else 1.0), "flat")


def analogue_to_digital(
    name: str, full_scale_v: Number, noise: Number, *, after: tuple[str, ...] = ()
) -> Active:
    """The section of an A/D converter: volts in, full scale out; it clips at 0 dBFS."""
    full2 = np.asarray(full_scale_v, dtype=float) ** 2
    return Active(
        name, gain=1.0 / full2, clip_in=full2, noise_behind=noise, after=after,
        domain=Domain.DIGITAL, full_scale_v=full_scale_v,
    )  # fmt: skip


def digital_to_analogue(
    name: str, full_scale_v: Number, noise: Number, *, after: tuple[str, ...] = ()
) -> Active:
    """The section of a D/A converter: full scale in, volts out; `noise` is re full scale²."""
    full2 = np.asarray(full_scale_v, dtype=float) ** 2
    return Active(
        name, gain=full2, clip_in=1.0, clip_out=full2, noise_behind=noise * full2, after=after,
        domain=Domain.ANALOGUE, full_scale_v=full_scale_v,
    )  # fmt: skip
