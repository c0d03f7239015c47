"""Run ngspice in batch on a circuit, and read what it found."""

from __future__ import annotations

import shutil
import subprocess
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from tests.judges.netlist import Circuit, Place

#: Points per decade of a noise run; ngspice integrates between them.
NOISE_POINTS = 40


@dataclass(frozen=True)
class Measured:
    """What ngspice found: rms volts of the programme by frequency and place, and noise volts 20 Hz to 20 kHz by place."""

    level_v: Mapping[tuple[float, Place], float]
    noise_v: Mapping[Place, float]


def program() -> str:
    """Where ngspice is. Raises RuntimeError where it is not: the tests that ask for it cannot do without."""
    found = shutil.which("ngspice")
    if found is None:
        raise RuntimeError(
            "ngspice is not installed: install it (Debian: apt-get install ngspice); it judges the engine"
        )
    return found


def measure(
    circuit: Circuit, folder: Path, frequencies_hz: Sequence[float], *, noise: bool = True
) -> Measured:
    """Levels at every place of a circuit, all its sources sounding with unlike programmes, and its noise."""
    names = sorted(set(circuit.nodes.values()))
    first = next(iter(circuit.sources))
    celsius = circuit.temperature_k - 273.15
    control = ["set numdgt=12", "set wr_vecnames"]
    for name in circuit.sources:
        control += [f"alter @{name}[acmag]=1"]
        for place, hertz in enumerate(frequencies_hz):
            control += [f"ac lin 1 {hertz:.12g} {hertz:.12g}"]
            control += [f"wrdata {name}_{place}.txt " + " ".join(f"v({each})" for each in names)]
        control += [f"alter @{name}[acmag]=0"]
    if noise:
        control += [f"alter @{first}[acmag]=1"]
        for each in names:
            control += [f"noise v({each}) {first} dec {NOISE_POINTS} 20 20k", "print onoise_total"]
    text = _netlist(circuit, celsius, control)
    (folder / "chain.cir").write_text(text, encoding="ascii")
    done = subprocess.run(
        [program(), "-b", "chain.cir"], cwd=folder, capture_output=True, text=True, timeout=120, check=False
    )
    printed = done.stdout
    level: dict[tuple[float, str], float] = {}
    for place, hertz in enumerate(frequencies_hz):
        squares = np.zeros(len(names))
        for name, volts in circuit.sources.items():
            found = folder / f"{name.lower()}_{place}.txt"
            found = found if found.exists() else folder / f"{name}_{place}.txt"
            if not found.exists():
                raise RuntimeError(f"ngspice measured nothing:\n{text}\n{done.stdout}\n{done.stderr}")
            row = found.read_text(encoding="ascii").splitlines()[-1].split()
            # Every vector is written as its scale, its real and its imaginary part.
            numbers = np.array(row, dtype=float).reshape(len(names), 3)
            squares += (numbers[:, 1] ** 2 + numbers[:, 2] ** 2) * volts**2
        level.update(
            {(hertz, name): float(np.sqrt(square)) for name, square in zip(names, squares, strict=True)}
        )
    totals = [float(line.split("=")[1]) for line in printed.splitlines() if "onoise_total =" in line]
    if noise and len(totals) != len(names):
        raise RuntimeError(
            f"ngspice measured {len(totals)} noises of {len(names)}:\n{text}\n{printed}\n{done.stderr}"
        )
    noises = dict(zip(names, totals, strict=True)) if noise else {}
    return Measured(
        {
            (hertz, place): level[hertz, name]
            for hertz in frequencies_hz
            for place, name in circuit.nodes.items()
        },
        {place: noises[name] for place, name in circuit.nodes.items()} if noise else {},
    )


def _netlist(circuit: Circuit, celsius: float, control: Sequence[str]) -> str:
    return "\n".join(
        [
            "* a chain",
            *circuit.lines,
            f".options temp={celsius:.6g} noinit",
            ".control",
            *control,
            ".endc",
            ".end",
            "",
        ]
    )
