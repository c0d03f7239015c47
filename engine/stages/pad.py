"""A resistive attenuator in a line."""

from __future__ import annotations

from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.base import Domain, Number, PassiveStage, StageSections, TwoPort, series, shunt

from .base import Port, Stage
from .declare import Setting, figure, option, switch
from .declared import Values


def u_pad(loss_db: Number, z_ohm: Number) -> TwoPort:
    """Series resistance, then a shunt: `loss_db` between a stiff source and a light load, input impedance `z_ohm`.

    The loss into an open output is the plain divider's: 10**(loss/20) = (R_series + R_shunt) / R_shunt.
    """
    ratio = 10.0 ** (np.asarray(loss_db) / 20.0)
    shunt_ohm = z_ohm / ratio
    return series(z_ohm - shunt_ohm) @ shunt(shunt_ohm)


def h_pad(loss_db: Number, z_ohm: Number) -> TwoPort:
    """Symmetrical H (balanced T) pad, matched at both ends: image impedance `z_ohm`, loss `loss_db` when terminated.

    R_series = Z (k-1)/(k+1), R_shunt = 2 Z k/(k^2-1), k = 10**(loss/20) (handbook formulas of the T attenuator).
    """
    k = 10.0 ** (np.maximum(np.asarray(loss_db), 1e-6) / 20.0)
    arm = series(z_ohm * (k - 1.0) / (k + 1.0))
    return arm @ shunt(2.0 * z_ohm * k / (k**2 - 1.0)) @ arm


class Pad(Stage):
    """A pad: passive both ways, with the thermal noise of its own resistors."""

    title: ClassVar[str] = "Pad"
    family: ClassVar[str] = "Lines"
    order: ClassVar[int] = 510
    domain: ClassVar[Domain] = Domain.ANALOGUE
    help: ClassVar[str] = (
        "A resistive attenuator in the line. It lowers level, clip point and noise ahead of it together."
    )

    kind: Literal["pad"] = "pad"
    loss_db: Figure = figure(
        "Loss",
        "loss",
        "20 dB",
        help="What the pad takes away, as printed on it; 10, 15, 20 and 30 dB are usual.",
    )
    z_ohm: Figure = figure(
        "Impedance",
        "impedance",
        "600 ohm",
        help="Input impedance of a U pad, or the image impedance of an H pad.",
    )
    shape: Literal["U", "H"] = option(
        "Form", "U", choices=("U", "H"), help="U: series and shunt arms. H: symmetrical, matched both ways."
    )
    inserted: Setting = switch("Pad", help="Whether the pad is in the line.", typical=True)

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", self.domain),)

    def outputs(self) -> tuple[Port, ...]:
        return (Port("out", self.domain),)

    def sections(self, values: Values, axis: Axis) -> StageSections:
        build = u_pad if self.shape == "U" else h_pad
        pad = build(values["loss_db"], values["z_ohm"])
        is_in = np.asarray(values["inserted"]) > 0.5
        switched = TwoPort(
            np.where(is_in, pad.a, 1.0),
            np.where(is_in, pad.b, 0.0),
            np.where(is_in, pad.c, 0.0),
            np.where(is_in, pad.d, 1.0),
        )
        return PassiveStage({"in": switched}, {"out": TwoPort()})

    def summary(self) -> str:
        return f"{self.loss_db.text}" if self.inserted.value else "out"
