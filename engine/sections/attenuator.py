"""Attenuators, faders and switches: a control's position as a power gain."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from engine.units import power_from_db

from .base import Number

Array = NDArray[np.float64]


def position_gain(position_db: Number) -> Array:
    """Power gain of a control marked in dB; minus infinity (off) is 0."""
    return np.asarray(power_from_db(position_db))


def chosen(index: Number, amounts: Sequence[Number]) -> Number:
    """Of several amounts, the one a switch's position 0, 1, 2 … chooses; broadcasting over positions in a batch."""
    place = np.asarray(index)
    found: Number = np.asarray(amounts[0], dtype=float)
    for position, amount in enumerate(amounts[1:], start=1):
        found = np.where(np.abs(place - position) < 0.5, amount, found)
    return found


def is_on(value: Number) -> NDArray[np.bool_]:
    """Whether a switch (0 or 1) is in."""
    return np.asarray(np.asarray(value) > 0.5)
