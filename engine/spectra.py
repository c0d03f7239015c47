"""Programme spectra: how a source's power is shared between the 31 bands."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .bands import BAND_COUNT, BAND_EDGE_HZ, BAND_WIDTH_HZ

Array = NDArray[np.float64]

SPECTRA = ("pink", "speech", "white", "own bands", "test tone")

_SPEECH_FIRST_BAND = 9  # 160 Hz
#: Normal vocal effort, spectrum levels [dB per Hz] of the bands 160 Hz ... 8 kHz (ANSI S3.5-1997, table 3).
SPEECH_LEVEL_DB_PER_HZ: Array = np.array(
    [32.41, 34.48, 34.75, 33.98, 34.59, 34.27, 32.06, 28.30, 25.01,
     23.00, 20.15, 17.32, 13.18, 11.55, 9.33, 5.31, 2.59, 1.13]
)  # fmt: skip

#: How many own levels may be given, and the first third-octave of each set.
_OWN_SETS = {31: (0, 1), 10: (1, 3), 8: (4, 3)}  # thirds; octaves 31.5 Hz ... 16 kHz; octaves 63 Hz ... 8 kHz


def band_shares(name: str, tone_hz: float = 1000.0, own_levels_db: Sequence[Any] = ()) -> Array:
    """Shares [..., 31] of a programme's power, summing to 1.

    "pink" has equal power in every whole band (the first and last are clipped, and have less), "white" power in
    proportion to width, "speech" the normal vocal effort of ANSI S3.5, "test tone" all in the band of `tone_hz`.
    "own bands" takes 31 third-octave levels 20 Hz ... 20 kHz, or octave levels: 10 from 31.5 Hz, 8 from 63 Hz;
    each may be an array [batch, 1]. Raises ValueError for another name or number of levels.
    """
    if name == "pink":
        power = np.log(BAND_EDGE_HZ[1:] / BAND_EDGE_HZ[:-1])
    elif name == "white":
        power = BAND_WIDTH_HZ.copy()
    elif name == "speech":
        power = np.zeros(BAND_COUNT)
        place = slice(_SPEECH_FIRST_BAND, _SPEECH_FIRST_BAND + SPEECH_LEVEL_DB_PER_HZ.size)
        power[place] = 10.0 ** (SPEECH_LEVEL_DB_PER_HZ / 10.0) * BAND_WIDTH_HZ[place]
    elif name == "test tone":
        power = np.zeros(BAND_COUNT)
        inside = np.searchsorted(BAND_EDGE_HZ, tone_hz, side="right") - 1
        power[int(np.clip(inside, 0, BAND_COUNT - 1))] = 1.0
    elif name == "own bands":
        power = _own_power(own_levels_db)
    else:
        raise ValueError(f"spectrum {name!r} is unknown: it is one of {', '.join(SPECTRA)}")
    return np.asarray(power / power.sum(axis=-1, keepdims=True))


def own_levels_fit(count: int) -> bool:
    """Whether so many own levels can be put on the bands."""
    return count in _OWN_SETS


def _own_power(levels_db: Sequence[Any]) -> Array:
    if not own_levels_fit(len(levels_db)):
        raise ValueError(
            f"own bands hold {len(levels_db)} levels: give 31 (third-octaves from 20 Hz), "
            "10 (octaves from 31.5 Hz) or 8 (octaves from 63 Hz)"
        )
    first, width = _OWN_SETS[len(levels_db)]
    columns = np.broadcast_arrays(*(np.asarray(level, dtype=float)[..., None] for level in levels_db))
    given = 10.0 ** (np.concatenate(columns, axis=-1) / 10.0)
    if given.ndim > 2:  # levels [batch, 1] were stacked behind their own unit axis
        given = given[..., 0, :]
    power = np.zeros((*given.shape[:-1], BAND_COUNT))
    power[..., first : first + width * given.shape[-1]] = np.repeat(given / width, width, axis=-1)
    return power
