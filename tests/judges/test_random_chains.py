"""Random chains and trees against ngspice: every node's level at three frequencies, and every node's noise."""

from __future__ import annotations

from random import Random

import numpy as np
import pytest

from engine.figures import Figure
from engine.outcome import evaluate
from engine.project import Project
from engine.stages import Setting, Stage, template
from engine.units import dbu_from_v
from tests.engine.plain_kinds import PlainSplitter, amplifier, project, source
from tests.judges.netlist import write
from tests.judges.ngspice import measure

FREQUENCIES_HZ = (20.0, 1000.0, 20_000.0)
DRAWS = 36


class Draw:
    """One random tree: sources, pads, cables, splitters, amplifiers and mixing inputs, column by column."""

    def __init__(self, seed: int) -> None:
        self.random = Random(seed)
        self.stages: list[Stage] = []
        self.ends: list[tuple[str, str]] = []
        self.open: list[str] = []  # outputs that feed nothing yet
        self.column = 0

    def project(self) -> Project:
        for _ in range(self.random.randint(1, 3)):
            self._add_source()
        for _ in range(self.random.randint(3, 9)):
            self.column += 1
            self._add_stage()
        self.column += 1
        for end in list(self.open):  # every open output drives an input at last
            if self.random.random() < 0.8:
                self._amplify([end])
        return project(self.stages, *self.ends)

    def _name(self, sort: str) -> str:
        return f"{sort}{len(self.stages)}"

    def _ohm(self, low: float, high: float) -> str:
        return f"{np.exp(self.random.uniform(np.log(low), np.log(high))):.3f} ohm"

    def _put(self, stage: Stage, fed_by: list[str], *outs: str) -> None:
        self.stages.append(stage)
        for end in fed_by:
            self.ends.append((end, stage.id))
            self.open.remove(end)
        self.open.extend(f"{stage.id}.{port}" if port != "out" else stage.id for port in outs)

    def _add_source(self) -> None:
        level = f"{np.exp(self.random.uniform(np.log(1e-3), np.log(1.0))) * 1e3:.6f} mV"
        name = self._name("source")
        if self.random.random() < 0.5:
            self._put(source(name, emf=level, z=self._ohm(20.0, 2000.0)), [], "out")
            return
        noise = self.random.choice([None, Figure(text="90 dB(A) re max"), Figure(text="80 dB re nominal unweighted")])
        drawn = template(
            "line_source", name, nominal_v=Figure(text=level), max_output_v=Figure(text="5 V"), noise=noise,
            z_out_ohm=Figure(text=self._ohm(20.0, 2000.0)), level_switch=Setting(value=self.random.choice([0.0, 1.0])),
        )  # fmt: skip
        self._put(drawn, [], "out")

    def _add_stage(self) -> None:
        end = self.random.choice(self.open)
        sort = self.random.choice(["pad", "split", "amplify", "mix", "branch"])
        name = self._name(sort)
        if sort == "pad":
            pad = template(
                "pad", name, column=self.column, loss_db=Figure(text=f"{self.random.uniform(1.0, 40.0):.2f} dB"),
                z_ohm=Figure(text=self._ohm(100.0, 10_000.0)), shape=self.random.choice(["U", "H"]),
                inserted=Setting(value=self.random.choice([1.0, 1.0, 0.0])),
            )  # fmt: skip
            self._put(pad, [end], "out")
        elif sort == "cable":
            self._put(self._cable(name), [end], "out")
        elif sort == "split":
            splitter = PlainSplitter(
                id=name, name=name, column=self.column, leg_ohm=Figure(text=self._ohm(10.0, 1000.0)),
                across_ohm=Figure(text=self._ohm(1000.0, 100_000.0)),
            )  # fmt: skip
            self._put(splitter, [end], "a", "b")
        elif sort == "mix":
            self._amplify(self.random.sample(self.open, min(len(self.open), self.random.randint(1, 3))))
        else:
            self._amplify([end])
            if sort == "branch":  # the same output feeds a second input
                self.open.append(end)
                self._amplify([end])

    def _cable(self, name: str) -> Stage:
        return template(
            "line_cable",
            name,
            column=self.column,
            length_m=Figure(text=f"{self.random.uniform(1.0, 300.0):.1f} m"),
        )

    def _amplify(self, fed_by: list[str]) -> None:
        drawn = amplifier(
            self._name("amplifier"), self.column, round(self.random.uniform(-20.0, 40.0), 1),
            noise=f"{self.random.uniform(0.2, 20.0):.3f} uV", z_in=self._ohm(500.0, 50_000.0),
            z_out=self._ohm(10.0, 1000.0),
        )  # fmt: skip
        self._put(drawn, fed_by, "out")


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
