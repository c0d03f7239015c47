"""A circuit for ngspice from a project's figures and controls: what the texts say, with none of the engine's own sums.

Only `engine.figures` is used, to read the texts. Each electrical stage kind has one writer here. A device's input and output
impedances carry `noisy=0`; its own noise is a resistor of e²/4kT in series with its controlled source; the resistances of
passive stages are noisy.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from math import sqrt
from typing import Any

from engine.figures import parse

BOLTZMANN_J_PER_K = 1.380649e-23
BAND_HZ = 19_980.0
#: White noise 20 Hz to 20 kHz reads this much less A-weighted (integral of IEC 61672-1's formula).
A_ON_WHITE_DB = -2.046
#: How many pieces a cable is cut into.
PIECES = 16

Stage = Mapping[str, Any]
#: A node of the project: stage, "in" or "out", port.
Place = tuple[str, str, str]


@dataclass
class Circuit:
    """The netlist while it is written, and what its nodes are called."""

    temperature_k: float
    lines: list[str] = field(default_factory=list)
    nodes: dict[Place, str] = field(default_factory=dict)
    sources: dict[str, float] = field(default_factory=dict)  # name of the voltage source, rms level [V]
    _count: int = 0

    def new(self, prefix: str) -> str:
        """A name used nowhere else."""
        self._count += 1
        return f"{prefix}{self._count}"

    def node(self, place: Place) -> str:
        """The circuit's node for a place, made at first use."""
        if place not in self.nodes:
            self.nodes[place] = self.new("n")
        return self.nodes[place]

    def resistor(self, one: str, two: str, ohm: float, *, noisy: bool) -> None:
        self.lines.append(f"{self.new('R')} {one} {two} {ohm:.12g}{'' if noisy else ' noisy=0'}")

    def capacitor(self, one: str, two: str, farad: float) -> None:
        self.lines.append(f"{self.new('C')} {one} {two} {farad:.12g}")

    def inductor(self, one: str, two: str, henry: float) -> None:
        self.lines.append(f"{self.new('L')} {one} {two} {henry:.12g}")

    def source(self, node: str, volts: float) -> None:
        """A programme source of rms `volts`, silent until the run asks for it."""
        name = self.new("V")
        self.sources[name] = volts
        self.lines.append(f"{name} {node} 0 DC 0 AC 0")

    def amplify(self, one: str, gain: float) -> str:
        """A new node with `gain` times the voltage of `one`."""
        made = self.new("n")
        self.lines.append(f"{self.new('E')} {made} 0 {one} 0 {gain:.15g}")
        return made

    def add(self, several: list[str]) -> str:
        """A new node with the sum of several voltages: controlled sources stacked on one another."""
        below = "0"
        for each in several:
            made = self.new("n")
            self.lines.append(f"{self.new('E')} {made} {below} {each} 0 1")
            below = made
        return below

    def wire(self, one: str, two: str) -> None:
        """The same node under two names."""
        self.lines.append(f"{self.new('V')} {one} {two} 0")

    def transformer(self, primary: str, ratio: float) -> str:
        """The secondary of an ideal transformer of `ratio` : 1."""
        made, sensed, sense = self.new("n"), self.new("n"), self.new("V")
        self.lines.append(f"{self.new('E')} {sensed} 0 {primary} 0 {1.0 / ratio:.15g}")
        self.lines.append(f"{sense} {sensed} {made} 0")
        self.lines.append(f"{self.new('F')} {primary} 0 {sense} {1.0 / ratio:.15g}")
        return made

    def thermal_v2(self, ohm: float) -> float:
        """Open-circuit thermal noise of a resistance over the whole band [V²]."""
        return 4.0 * BOLTZMANN_J_PER_K * self.temperature_k * ohm * BAND_HZ

    def hiss(self, one: str, noise_v: float) -> str:
        """A new node: the voltage of `one` with white noise of `noise_v` over the whole band added."""
        if not noise_v:
            return one
        made, buffered = self.new("n"), self.amplify(one, 1.0)
        ohm = noise_v**2 / BAND_HZ / (4.0 * BOLTZMANN_J_PER_K * self.temperature_k)
        self.resistor(buffered, made, ohm, noisy=True)
        return self.amplify(made, 1.0)


Ports = Mapping[str, list[str]]
Writer = Callable[[Circuit, Stage, Ports], None]
WRITERS: dict[str, Writer] = {}


def writes(*kinds: str) -> Callable[[Writer], Writer]:
    """Register the writer of some stage kinds."""

    def keep(writer: Writer) -> Writer:
        WRITERS.update(dict.fromkeys(kinds, writer))
        return writer

    return keep


def write(project: Mapping[str, Any]) -> Circuit:
    """The circuit of a project given as plain data, the way its file holds it.

    Raises KeyError for a stage kind that has no writer.
    """
    celsius = parse(project["header"]["temperature_c"]["text"], "temperature").amount
    circuit = Circuit(celsius + 273.15)
    fed: dict[str, dict[str, list[str]]] = defaultdict(lambda: defaultdict(list))
    for link in project["links"]:
        fed[link["target"]][link["input"]].append(circuit.node((link["source"], "out", link["output"])))
    for stage in project["stages"]:
        if stage["count"] != 1:
            raise ValueError(f"{stage['id']}: draw {stage['count']} alike out before they go into a circuit")
        WRITERS[stage["kind"]](circuit, stage, fed[stage["id"]])
    return circuit


def amount(stage: Stage, name: str, quantity: str) -> float:
    """A figure in base units."""
    return parse(stage[name]["text"], quantity).amount


def setting(stage: Stage, name: str) -> float:
    """Where a control stands."""
    return float(stage[name]["value"])


def times(level_db: float) -> float:
    """A voltage ratio."""
    return float(10.0 ** (level_db / 20.0))


def enter(circuit: Circuit, stage: Stage, ports: Ports, z_ohm: float, port: str = "in") -> str:
    """An input's node, each link loaded by the input's impedance and all of them added."""
    arriving = ports.get(port, [])
    for each in arriving:
        circuit.resistor(each, "0", z_ohm, noisy=False)
    node = circuit.add(arriving) if len(arriving) != 1 else arriving[0]
    circuit.nodes[stage["id"], "in", port] = node
    return node


def leave(
    circuit: Circuit, stage: Stage, node: str, z_ohm: float, port: str = "out", *, noisy: bool = False
) -> None:
    """An output behind its impedance."""
    circuit.resistor(node, circuit.node((stage["id"], "out", port)), max(z_ohm, 1e-6), noisy=noisy)


def pass_in(circuit: Circuit, stage: Stage, ports: Ports, port: str = "in") -> str:
    """A passive stage's input: the very node that feeds it."""
    (node,) = ports[port]
    circuit.nodes[stage["id"], "in", port] = node
    return node


# -- plain stages ------------------------------------------------------------------------------------------------


@writes("plain_source")
def plain_source(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    node = circuit.new("n")
    circuit.source(node, amount(stage, "emf_v", "voltage"))
    leave(circuit, stage, node, amount(stage, "z_ohm", "impedance"), noisy=True)


@writes("plain_amplifier")
def plain_amplifier(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    node = enter(circuit, stage, ports, amount(stage, "z_in_ohm", "impedance"))
    node = circuit.amplify(
        circuit.hiss(node, amount(stage, "noise_v", "voltage")), times(setting(stage, "gain_db"))
    )
    leave(circuit, stage, node, amount(stage, "z_out_ohm", "impedance"))


@writes("plain_splitter")
def plain_splitter(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    node = pass_in(circuit, stage, ports)
    circuit.resistor(node, "0", amount(stage, "across_ohm", "impedance"), noisy=True)
    for port in ("a", "b"):
        out = circuit.node((stage["id"], "out", port))
        circuit.resistor(node, out, amount(stage, "leg_ohm", "impedance"), noisy=True)


# -- the shelf's stages ------------------------------------------------------------------------------------------


@writes("pad")
def pad(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    node, out = pass_in(circuit, stage, ports), circuit.node((stage["id"], "out", "out"))
    z_ohm, k = amount(stage, "z_ohm", "impedance"), times(amount(stage, "loss_db", "loss"))
    if not setting(stage, "inserted"):
        circuit.wire(node, out)
    elif stage["shape"] == "U":
        circuit.resistor(node, out, z_ohm * (1.0 - 1.0 / k), noisy=True)
        circuit.resistor(out, "0", z_ohm / k, noisy=True)
    else:
        middle = circuit.new("n")
        circuit.resistor(node, middle, z_ohm * (k - 1.0) / (k + 1.0), noisy=True)
        circuit.resistor(middle, "0", 2.0 * z_ohm * k / (k * k - 1.0), noisy=True)
        circuit.resistor(middle, out, z_ohm * (k - 1.0) / (k + 1.0), noisy=True)


def noise_v(stage: Stage, name: str, references_v: Mapping[str, float]) -> float:
    """White noise over the whole band of a figure: a level, or a ratio re something; 0 where none is given."""
    if stage.get(name) is None:
        return 0.0
    parsed = parse(stage[name]["text"], "noise")
    volts = parsed.amount
    if parsed.reference not in (None, "level"):
        volts = references_v[str(parsed.reference)] / times(parsed.amount)
    return volts / times(A_ON_WHITE_DB) if parsed.weighting == "A" else volts


@writes("line_source")
def line_source(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    nominal, most = amount(stage, "nominal_v", "voltage"), amount(stage, "max_output_v", "voltage")
    node = circuit.new("n")
    circuit.source(node, nominal)
    node = circuit.hiss(node, noise_v(stage, "noise", {"nominal": nominal, "max": most}))
    position = round(setting(stage, "level_switch"))
    drop_db = parse(stage["lower_by_db"][position - 1]["text"], "loss").amount if position else 0.0
    out_ohm = amount(stage, "z_out_ohm", "impedance")
    leave(circuit, stage, circuit.amplify(node, times(-drop_db)), out_ohm, noisy=stage.get("noise") is None)


@writes("line_cable")
def line_cable(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    """A ladder of sixteen pieces, as the cable is in truth."""
    node, out = pass_in(circuit, stage, ports), circuit.node((stage["id"], "out", "out"))
    length, resistance = (
        amount(stage, "length_m", "length"),
        parse(stage["resistance_ohm_per_m"]["text"], "resistance_per_length"),
    )
    ohm = resistance.amount * length * (2.0 if resistance.reference == "one-way" else 1.0)
    farad = amount(stage, "capacitance_f_per_m", "capacitance_per_length") * length
    for piece in range(PIECES):
        after = out if piece == PIECES - 1 else circuit.new("n")
        middle = circuit.new("n")
        circuit.resistor(node, middle, ohm / PIECES / 2.0, noisy=True)
        circuit.capacitor(middle, "0", farad / PIECES)
        circuit.resistor(middle, after, ohm / PIECES / 2.0, noisy=True)
        node = after


@writes("speaker_line")
def speaker_line(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    node, out = pass_in(circuit, stage, ports), circuit.node((stage["id"], "out", "out"))
    ohm = 2.0 * 0.0172 * amount(stage, "length_m", "length") / amount(stage, "area_mm2", "area")
    circuit.resistor(node, out, ohm, noisy=True)


@writes("splitter")
def splitter(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    node = pass_in(circuit, stage, ports)
    for way in range(1, stage["ways"] + 1):
        out = circuit.node((stage["id"], "out", "out" if way == 1 else f"out_{way}"))
        if stage["build"] == "parallel" or (stage["build"] == "transformer" and way == 1):
            circuit.wire(node, out)
        elif stage["build"] == "resistive":
            circuit.resistor(node, out, amount(stage, "leg_ohm", "impedance"), noisy=True)
        else:
            secondary = circuit.transformer(node, times(amount(stage, "loss_db", "loss")))
            circuit.resistor(secondary, out, amount(stage, "leg_ohm", "impedance"), noisy=True)


@writes("combiner")
def combiner(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    """Resistive: each leg to one point, which is the stage's input and output alike."""
    out = circuit.node((stage["id"], "out", "out"))
    for node in ports["in"]:
        circuit.resistor(node, out, amount(stage, "leg_ohm", "impedance"), noisy=True)


@writes("preamplifier")
def preamplifier(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    """EIN ahead of the gain; behind it what the residual at lowest gain holds beyond EIN and its source."""
    node = enter(circuit, stage, ports, amount(stage, "z_in_ohm", "impedance"))
    (ein,) = stage["ein_v"]
    own_v, source_ohm = device_ein(circuit, ein["text"])
    if setting(stage, "pad"):
        loss = times(amount(stage, "pad_db", "loss"))
        node = circuit.amplify(node, 1.0 / loss)
        node = circuit.hiss(node, sqrt(circuit.thermal_v2(source_ohm) * (1.0 - 1.0 / loss**2)))
    node = circuit.amplify(circuit.hiss(node, own_v), times(setting(stage, "gain_db")))
    lowest = times(amount(stage, "gain_min_db", "gain"))
    beyond2 = noise_v(stage, "residual", {}) ** 2 - (own_v**2 + circuit.thermal_v2(source_ohm)) * lowest**2
    leave(
        circuit, stage, circuit.hiss(node, sqrt(max(beyond2, 0.0))), amount(stage, "z_out_ohm", "impedance")
    )


def device_ein(circuit: Circuit, text: str) -> tuple[float, float]:
    """A device's own input noise, EIN without the thermal part of the source it was measured with; and that source."""
    parsed = parse(text, "ein")
    total = parsed.amount / (times(A_ON_WHITE_DB) if parsed.weighting == "A" else 1.0)
    source_ohm = parsed.at["source_ohm"]
    return sqrt(total**2 - circuit.thermal_v2(source_ohm)), source_ohm


@writes("mixer_channel")
def mixer_channel(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    """Trim, noise of the strip, fader; its filters flat."""
    node = enter(circuit, stage, ports, amount(stage, "z_in_ohm", "impedance"))
    node = circuit.amplify(node, times(setting(stage, "trim_db")))
    references = {"nominal": amount(stage, "nominal_v", "voltage"), "max": amount(stage, "max_v", "voltage")}
    node = circuit.hiss(node, noise_v(stage, "noise", references))
    node = circuit.amplify(node, times(setting(stage, "fader_db")))
    leave(circuit, stage, node, amount(stage, "z_out_ohm", "impedance"))


@writes("mix_bus")
def mix_bus(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    """Sum, noise of the summing amplifier, bus fader, residual noise."""
    node = enter(circuit, stage, ports, amount(stage, "z_in_ohm", "impedance"))
    references = {
        "nominal": amount(stage, "nominal_v", "voltage"),
        "max": amount(stage, "max_output_v", "voltage"),
    }
    node = circuit.amplify(
        circuit.hiss(node, noise_v(stage, "summing_noise", references)), times(setting(stage, "fader_db"))
    )
    node = circuit.hiss(node, noise_v(stage, "residual", references))
    leave(circuit, stage, node, amount(stage, "z_out_ohm", "impedance"))


@writes("power_amplifier")
def power_amplifier(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    """Attenuator, gain at the terminals into the rated load, noise behind the attenuator, output impedance by damping."""
    node = enter(circuit, stage, ports, amount(stage, "z_in_ohm", "impedance"))
    rating = parse(stage["rated_power_w"][0]["text"], "power_at_load")
    load = rating.at["load_ohm"]
    z_out = load / amount(stage, "damping_factor", "damping_factor")
    open_circuit = (load + z_out) / load
    node = circuit.amplify(
        node, times(setting(stage, "attenuator_db") + amount(stage, "gain_db", "gain")) * open_circuit
    )
    rated_v = sqrt(rating.amount * load)
    node = circuit.hiss(node, noise_v(stage, "noise", {"rated": rated_v, "1 W": sqrt(load)}) * open_circuit)
    leave(circuit, stage, node, z_out)


@writes("feed")
def feed(circuit: Circuit, stage: Stage, ports: Ports) -> None:
    """It ends here: only its load is felt."""
    enter(circuit, stage, ports, amount(stage, "z_in_ohm", "impedance"))
