"""Passive chains against scikit-rf: loaded levels over frequency, and noise figures of cascaded pads."""

from __future__ import annotations

from itertools import pairwise
from random import Random

import numpy as np
import pytest
import skrf
from skrf.media import DefinedGammaZ0

from engine.figures import Figure
from engine.outcome import evaluate
from engine.stages import Stage, template
from engine.units import dbu_from_v
from tests.engine.plain_kinds import amplifier, project, source

FREQUENCIES_HZ = (20.0, 1000.0, 20_000.0)
FREQUENCY = skrf.Frequency.from_f(list(FREQUENCIES_HZ), unit="Hz")
#: Noise figures refer to a source at 290 K.
T0_CELSIUS = "16.85 °C"


def chained(stages: list[Stage], celsius: str = "20 °C"):
    """The stages one after another, in columns of their own."""
    placed = [stage.with_fields(column=column) for column, stage in enumerate(stages)]
    chain = project(placed, *((a.id, b.id) for a, b in pairwise(placed)))
    header = chain.header.with_fields(temperature_c={"text": celsius})
    return chain.with_changes({"project": (chain.header, header)})


def network(kind: str, values: dict[str, float]) -> skrf.Network:
    """One stage as scikit-rf makes it of resistors and capacitors, in a system of 50 ohm."""
    media = DefinedGammaZ0(FREQUENCY, z0=50.0, gamma=1j)
    if kind == "U pad":
        k = 10.0 ** (values["loss_db"] / 20.0)
        return media.resistor(values["z_ohm"] * (1.0 - 1.0 / k)) ** media.shunt(
            media.resistor(values["z_ohm"] / k) ** media.short()
        )
    if kind == "H pad":
        k = 10.0 ** (values["loss_db"] / 20.0)
        arm = media.resistor(values["z_ohm"] * (k - 1.0) / (k + 1.0))
        across = media.resistor(2.0 * values["z_ohm"] * k / (k * k - 1.0)) ** media.short()
        return arm ** media.shunt(across) ** arm
    pieces, total = 24, None
    for _ in range(pieces):
        half = media.resistor(values["ohm"] / pieces / 2.0)
        piece = half ** media.shunt_capacitor(values["farad"] / pieces) ** half
        total = piece if total is None else total**piece
    return total


def draw(random: Random, place: int) -> tuple[Stage, skrf.Network]:
    """A pad or a cable, and the same in scikit-rf."""
    if random.random() < 0.5:
        length, per_km = random.uniform(10.0, 300.0), random.uniform(50.0, 200.0)
        texts = {
            "length_m": f"{length:.6f} m",
            "resistance_ohm_per_m": f"{per_km:.6f} ohm/km loop",
            "capacitance_f_per_m": "100 pF/m",
        }
        stage = template(
            "line_cable", f"cable{place}", **{name: Figure(text=text) for name, text in texts.items()}
        )
        return stage, network("cable", {"ohm": length * per_km / 1000.0, "farad": length * 100e-12})
    shape, loss, z_ohm = random.choice(["U", "H"]), random.uniform(1.0, 30.0), random.uniform(100.0, 5000.0)
    texts = {"loss_db": f"{loss:.6f} dB", "z_ohm": f"{z_ohm:.6f} ohm"}
    stage = template(
        "pad", f"pad{place}", shape=shape, **{name: Figure(text=text) for name, text in texts.items()}
    )
    return stage, network(f"{shape} pad", {"loss_db": loss, "z_ohm": z_ohm})


@pytest.mark.parametrize("seed", range(30))
def test_loaded_level_of_a_passive_chain(seed):
    """scikit-rf: V_load/V_source = S21/2 · √(R_load/R_source) in the source's and load's own impedances, within 0.01 dB."""
    random = Random(seed)
    source_ohm, load_ohm = round(random.uniform(20.0, 2000.0), 3), round(random.uniform(500.0, 50_000.0), 3)
    drawn = [draw(random, place) for place in range(random.randint(1, 4))]
    whole = drawn[0][1]
    for _, part in drawn[1:]:
        whole = whole**part
    whole.renormalize(np.array([source_ohm, load_ohm]))
    expected = np.abs(whole.s[:, 1, 0]) / 2.0 * np.sqrt(load_ohm / source_ohm)
    chain = chained(
        [
            source("s", z=f"{source_ohm} ohm"),
            *(stage for stage, _ in drawn),
            amplifier("a", 0, z_in=f"{load_ohm} ohm"),
        ]
    )
    for hertz, ratio in zip(FREQUENCIES_HZ, expected, strict=True):
        level = evaluate(chain, tone_hz=hertz).node("a", "in").level
        assert level == pytest.approx(dbu_from_v(ratio), abs=0.01)


@pytest.mark.parametrize("seed", range(12))
def test_noise_figure_of_cascaded_pads(seed):
    """scikit-rf: a matched attenuator at 290 K has F = L, R_n = Z0 (L − 1/L)/4 and its optimum at Z0 (Friis 1944).

    The engine's noise behind the pads over what of it is the source's own: the same noise figure from any source.
    """
    random = Random(seed)
    source_ohm = round(random.uniform(50.0, 3000.0), 3)
    losses = [round(random.uniform(1.0, 20.0), 3) for _ in range(random.randint(1, 3))]
    total = None
    for loss in losses:
        scattering = np.zeros((3, 2, 2), dtype=complex)
        scattering[:, 0, 1] = scattering[:, 1, 0] = 10.0 ** (-loss / 20.0)
        part = skrf.Network(frequency=FREQUENCY, s=scattering, z0=600.0)
        ratio = 10.0 ** (loss / 10.0)
        part.set_noise_a(FREQUENCY, nfmin_db=loss, gamma_opt=0.0, rn=600.0 * (ratio - 1.0 / ratio) / 4.0)
        total = part if total is None else total**part
    assert total is not None
    judged_db = 10.0 * np.log10(total.nf(source_ohm)[1])
    pads = [
        template(
            "pad", f"p{place}", shape="H", loss_db=Figure(text=f"{loss} dB"), z_ohm=Figure(text="600 ohm")
        )
        for place, loss in enumerate(losses)
    ]
    chain = chained([source("s", z=f"{source_ohm} ohm"), *pads, amplifier("a", 0, z_in="10 k")], T0_CELSIUS)
    outcome = evaluate(chain)
    behind = outcome.node("a", "in")
    source_v2 = 4.0 * 1.380649e-23 * 290.0 * source_ohm * 19_980.0
    # The source's EMF is 1 V, so its own noise arrives at as much under it as it left.
    own = behind.level + 10.0 * np.log10(source_v2)
    assert behind.noise - own == pytest.approx(judged_db, abs=0.005)
