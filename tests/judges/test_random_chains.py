"""Random chains and trees against ngspice: every node's level at three frequencies, and every node's noise."""

from __future__ import annotations

from random import Random

import numpy as np
import pytest

from engine.figures import Figure
from engine.outcome import evaluate
from engine.project import Project
from engine.stages import KINDS as SHELF
from engine.stages import Setting, Stage
from engine.units import dbu_from_v
from tests.engine.plain_kinds import PlainAmplifier, PlainSource, PlainSplitter, project
from tests.judges.netlist import write
from tests.judges.ngspice import measure

FREQUENCIES_HZ = (20.0, 1000.0, 20_000.0)
DRAWS = 48

KINDS: dict[str, type[Stage]] = {
    **SHELF, "plain_source": PlainSource, "plain_amplifier": PlainAmplifier, "plain_splitter": PlainSplitter,
}  # fmt: skip
FIGURES = {name: kind.figure_specs() for name, kind in KINDS.items()}
CONTROLS = {name: kind.control_specs() for name, kind in KINDS.items()}


class Draw:
    """One random tree: sources, pads, cables, splitters, amplifiers and mixing inputs, column by column."""

    def __init__(self, seed: int) -> None:
        self.random = Random(seed)
        self.stages: list[Stage] = []
        self.ends: list[tuple[str, str]] = []
        self.open: list[str] = []  # outputs that feed nothing yet
        self.ahead: dict[str, set[str]] = {}  # the stages ahead of each
        self.column = 0

    def project(self) -> Project:
        for _ in range(self.random.randint(1, 3)):
            self._add_source()
        for _ in range(self.random.randint(3, 9)):
            self.column += 1
            self._add_stage()
        self.column += 1
        for end in list(self.open):  # most open outputs drive an input at last
            if self.random.random() < 0.8:
                self._put("feed", [end], z_in_ohm=self._ohm(500.0, 50_000.0))
        return project(self.stages, *self.ends)

    # -- stages ------------------------------------------------------------------------------------------------
    def _put(self, kind: str, fed_by: list[str], *outs: str, **fields: object) -> None:
        name = f"{kind}{len(self.stages)}"
        texts = {
            key: Figure(text=value) if isinstance(value, str) and key in FIGURES[kind] else value
            for key, value in fields.items()
        }
        settings = {
            key: Setting(value=value) if key in CONTROLS[kind] else value for key, value in texts.items()
        }
        self.stages.append(
            KINDS[kind].model_validate({"id": name, "name": name, "column": self.column, **settings})
        )
        self.ahead[name] = {name}.union(*(self.ahead[end.partition(".")[0]] for end in fed_by))
        for end in fed_by:
            self.ends.append((end, name))
            self.open.remove(end)
        self.open.extend(name if port == "out" else f"{name}.{port}" for port in outs)

    def _add_source(self) -> None:
        level = f"{self._between(1.0, 1000.0):.6f} mV"
        if self.random.random() < 0.5:
            self._put("plain_source", [], "out", emf_v=level, z_ohm=self._ohm(20.0, 2000.0))
            return
        noise = self.random.choice([None, "90 dB(A) re max", "80 dB re nominal unweighted"])
        self._put(
            "line_source", [], "out", nominal_v=level, max_output_v="5 V", noise=noise, z_out_ohm=self._ohm(20.0, 2000.0),
            level_switch=self.random.choice([0.0, 1.0]),
        )  # fmt: skip

    def _add_stage(self) -> None:
        end = self.random.choice(self.open)
        sort = self.random.choice(
            ["pad", "line_cable", "split", "amplify", "amplify", "mix", "combine", "branch"]
        )
        if sort == "pad":
            self._put(
                "pad", [end], "out", loss_db=f"{self.random.uniform(1.0, 40.0):.2f} dB", z_ohm=self._ohm(100.0, 10_000.0),
                shape=self.random.choice(["U", "H"]), inserted=self.random.choice([1.0, 1.0, 0.0]),
            )  # fmt: skip
        elif sort == "line_cable":
            way = self.random.choice(["loop", "one-way"])
            self._put(
                "line_cable", [end], "out", length_m=f"{self.random.uniform(1.0, 150.0):.1f} m",
                resistance_ohm_per_m=f"{self.random.uniform(50.0, 200.0):.1f} ohm/km {way}",
            )  # fmt: skip
        elif sort == "split":
            self._split(end)
        elif sort in ("mix", "combine"):
            chosen = self._some_that_may_meet(again=sort == "mix")
            if sort == "combine":
                self._put("combiner", chosen, "out", leg_ohm=self._ohm(100.0, 10_000.0))
            else:
                self._put(
                    "mix_bus", chosen, "out", z_in_ohm=self._ohm(500.0, 50_000.0), z_out_ohm=self._ohm(10.0, 1000.0),
                    fader_db=self._step(-30.0, 10.0), residual="-86 dBu unweighted", summing_noise="-90 dBu(A)",
                )  # fmt: skip
        else:
            self._amplify(end)
            if sort == "branch":  # the same output feeds a second input
                self.open.append(end)
                self._amplify(end)

    def _split(self, end: str) -> None:
        build = self.random.choice(["plain", "parallel", "resistive", "transformer"])
        if build == "plain":
            across = self._ohm(1000.0, 100_000.0)
            self._put("plain_splitter", [end], "a", "b", leg_ohm=self._ohm(10.0, 1000.0), across_ohm=across)
            return
        ways = self.random.randint(2, 4)
        outs = ["out", *(f"out_{n}" for n in range(2, ways + 1))]
        loss = f"{self.random.uniform(0.0, 6.0):.2f} dB"
        self._put(
            "splitter", [end], *outs, build=build, ways=ways, leg_ohm=self._ohm(10.0, 1000.0), loss_db=loss
        )

    def _amplify(self, end: str) -> None:
        ends = {"z_in_ohm": self._ohm(500.0, 50_000.0), "z_out_ohm": self._ohm(10.0, 1000.0)}
        kind = self.random.choice(["plain_amplifier", "preamplifier", "mixer_channel", "power_amplifier"])
        if kind == "plain_amplifier":
            hiss = f"{self.random.uniform(0.2, 20.0):.3f} uV"
            self._put(kind, [end], "out", **ends, gain_db=self._step(-20.0, 40.0), noise_v=hiss)
        elif kind == "preamplifier":
            ein = (Figure(text=f"{self.random.uniform(-129.0, -115.0):.2f} dBu @ 150 ohm unweighted"),)
            self._put(
                kind, [end], "out", **ends, gain_db=self._step(0.0, 60.0), ein_v=ein, residual="-95 dBu(A)",
                pad=self.random.choice([0.0, 1.0]),
            )  # fmt: skip
        elif kind == "mixer_channel":
            faders = {"trim_db": self._step(-20.0, 20.0), "fader_db": self._step(-40.0, 10.0)}
            self._put(kind, [end], "out", **ends, **faders, noise="98 dB re nominal unweighted")
        else:
            del ends["z_out_ohm"]
            self._put(
                kind, [end], "out", **ends, attenuator_db=self._step(-20.0, 0.0), gain_db="32 dB", noise="105 dB(A) re rated",
                damping_factor=f"{self.random.uniform(5.0, 500.0):.1f}",
            )  # fmt: skip

    # -- numbers ----------------------------------------------------------------------------------------------
    def _between(self, low: float, high: float) -> float:
        return float(np.exp(self.random.uniform(np.log(low), np.log(high))))

    def _ohm(self, low: float, high: float) -> str:
        return f"{self._between(low, high):.3f} ohm"

    def _step(self, low: float, high: float) -> float:
        return round(self.random.uniform(low, high), 1)

    def _some_that_may_meet(self, *, again: bool) -> list[str]:
        """One to three open outputs. `again`: they may have something ahead of them in common, if it is no cable.

        A sum adds magnitudes, not phases; and what meets again in a passive stage would be a ring.
        """
        found: list[str] = []
        met: set[str] = set()
        for end in self.random.sample(self.open, min(len(self.open), self.random.randint(1, 3))):
            ahead = self.ahead[end.partition(".")[0]]
            if not met & ahead or (
                again and not any(stage.startswith("line_cable") for stage in met | ahead)
            ):
                found.append(end)
                met |= ahead
        return found


@pytest.mark.parametrize("seed", range(DRAWS))
def test_random_chain_agrees_with_ngspice(seed, tmp_path):
    """ngspice: levels within 0.01 dB at 20 Hz, 1 kHz and 20 kHz at every node, noise 20 Hz to 20 kHz within 0.05 dB."""
    drawn = Draw(seed).project()
    judged = measure(write(drawn.model_dump()), tmp_path, FREQUENCIES_HZ)
    assert judged.noise_v
    outcome = evaluate(drawn)
    for hertz in FREQUENCIES_HZ:
        toned = evaluate(drawn, tone_hz=hertz)
        for (stage, direction, port), volts in _at(judged.level_v, hertz).items():
            found = toned.node(stage, direction, port).level
            assert found == pytest.approx(dbu_from_v(volts), abs=0.01), (stage, direction, port, hertz)
    for (stage, direction, port), volts in judged.noise_v.items():
        found = outcome.node(stage, direction, port).noise
        assert found == pytest.approx(dbu_from_v(volts), abs=0.05), (stage, direction, port)


def _at(level_v, hertz):
    return {place: volts for (f, place), volts in level_v.items() if f == hertz}
