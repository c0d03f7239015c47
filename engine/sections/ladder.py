"""A cable with loads at its end or along it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from .base import Number

_LEAST_S = 1e-12  # an empty line


@dataclass(frozen=True)
class Ladder:
    """What a driver sees, and the share of its voltage that reaches each load."""

    input_ohm: Number
    voltage_shares: tuple[Number, ...]

    @classmethod
    def at_end(cls, cable_ohm: Number, loads_s: Sequence[Number]) -> Ladder:
        """All loads [S] behind the whole cable [ohm]."""
        total = np.maximum(
            np.sum(np.broadcast_arrays(*(np.asarray(load) for load in loads_s)), axis=0), _LEAST_S
        )
        share = 1.0 / (1.0 + cable_ohm * total)
        return cls(cable_ohm + 1.0 / total, (share,) * len(loads_s))

    @classmethod
    def along(cls, cable_ohm: Number, loads_s: Sequence[Number]) -> Ladder:
        """Each load behind the next equal piece of the cable: solved from the far end back, then forward."""
        piece = np.asarray(cable_ohm) / len(loads_s)
        beyond: list[Number] = []
        admittance: Number = 0.0
        for load in reversed(loads_s):
            admittance = np.maximum(np.asarray(load) + admittance, _LEAST_S)
            beyond.insert(0, admittance)
            admittance = admittance / (1.0 + piece * admittance)
        shares: list[Number] = []
        voltage: Number = 1.0
        for seen in beyond:
            voltage = voltage / (1.0 + piece * seen)
            shares.append(voltage)
        return cls(1.0 / admittance, tuple(shares))
