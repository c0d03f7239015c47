"""Thermal noise of passive stages that reaches a sum by several ways, and of stages that stand for several alike."""

from __future__ import annotations

import numpy as np
import pytest

from engine.figures import Figure
from engine.outcome import evaluate
from engine.sections.base import ideal_transformer, series, shunt
from engine.sections.net import Driver, Edge, Net
from engine.sections.thermal import Thermal
from engine.stages import Stage, template
from engine.units import thermal_noise_v2_per_hz
from tests.engine.plain_kinds import PlainSplitter, amplifier, project, source

QUIET = "0.01 nV"


def pad(id: str, column: int, loss: str = "20 dB", count: int = 1, shape: str = "H") -> Stage:
    return template("pad", id, column=column, loss_db=Figure(text=loss), shape=shape, count=count)


def alone(two_port, near_s: float, far_s: float) -> Thermal:
    """One two-port between two noiseless loads [S]."""
    net = Net((Edge("n", "f", two_port, "p"),), (Driver("n", 1.0 / near_s),), {"f": far_s}, 293.15)
    return Thermal(net, {"n": None, "f": None}, {})


@pytest.mark.parametrize("r_ohm", [10.0, 1e4])
def test_a_resistance_between_two_loads(r_ohm):
    """Johnson–Nyquist: a voltage 4kTR in series drives both loads, in opposite phase."""
    near, far = 1.0 / 50.0, 1.0 / 2000.0
    thermal = alone(series(r_ohm), near, far)
    edge = thermal.net.edges[0]
    current2 = thermal_noise_v2_per_hz(r_ohm) / (50.0 + 2000.0 + r_ohm) ** 2
    assert thermal.v2_per_hz(edge, "f", "f") == pytest.approx(current2 * 2000.0**2, rel=1e-12)
    assert thermal.v2_per_hz(edge, "n", "n") == pytest.approx(current2 * 50.0**2, rel=1e-12)
    assert thermal.v2_per_hz(edge, "n", "f") == pytest.approx(-current2 * 50.0 * 2000.0, rel=1e-12)


@pytest.mark.parametrize("r_ohm", [10.0, 1e4])
def test_a_resistance_across_both(r_ohm):
    """Johnson–Nyquist: a current 4kT/R into all in parallel, the same voltage at either end."""
    thermal = alone(shunt(r_ohm), 1.0 / 50.0, 1.0 / 2000.0)
    edge = thermal.net.edges[0]
    together = 1.0 / (1.0 / 50.0 + 1.0 / 2000.0 + 1.0 / r_ohm)
    expected = thermal_noise_v2_per_hz(r_ohm) / r_ohm**2 * together**2
    for one, other in (("n", "n"), ("f", "f"), ("n", "f")):
        assert thermal.v2_per_hz(edge, one, other) == pytest.approx(expected, rel=1e-12)


def test_open_at_both_ends():
    """Johnson–Nyquist: a matched pad with nothing at its near end shows 4kTR of what its far end looks like."""
    two_port = series(200.0) @ shunt(400.0) @ series(200.0)
    net = Net((Edge("n", "f", two_port, "p"),), (), {}, 293.15)
    thermal = Thermal(net, {"n": None, "f": None}, {})
    assert thermal.v2_per_hz(net.edges[0], "f", "f") == pytest.approx(
        thermal_noise_v2_per_hz(600.0), rel=1e-12
    )


def test_a_lossless_transformer_makes_none():
    """An ideal transformer has no resistance, so no thermal noise."""
    thermal = alone(ideal_transformer(3.0), 1.0 / 50.0, 1.0 / 2000.0)
    assert thermal.v2_per_hz(thermal.net.edges[0], "f", "f") == pytest.approx(0.0, abs=1e-40)


def test_a_complex_two_port_in_equilibrium():
    """Nyquist: fed by a resistance at the same temperature the whole comes to 4kT Re(Z) seen at the end."""
    line = series(200.0 + 300j) @ shunt(1000.0 - 700j) @ series(50.0 + 10j)
    noisy_source = series(600.0)
    net = Net(
        (Edge("s", "n", noisy_source, "s"), Edge("n", "f", line, "p")), (Driver("s", 1e-9),), {}, 293.15
    )
    thermal = Thermal(net, dict.fromkeys(("s", "n", "f"), None), {})
    total = sum(thermal.v2_per_hz(edge, "f", "f") for edge in net.edges)
    both = noisy_source @ line
    z_out = both.b / both.a  # behind a stiff driver
    assert total == pytest.approx(4.0 * 1.380649e-23 * 293.15 * np.real(z_out), rel=1e-6)


def same(one, many, *places: tuple[str, str]) -> None:
    for place in places:
        for number in ("level", "noise", "noise_a"):
            assert getattr(one.node(*place), number) == pytest.approx(
                getattr(many.node(*place), number), abs=1e-9
            )


@pytest.mark.parametrize("count", [2, 3, 5])
def test_a_pad_ahead_of_several_alike(count):
    """What a pad hisses reaches all members alike: one block with a count equals N blocks, to 1e-9 dB."""
    ends = [source("s"), amplifier("a", 1, noise=QUIET, z_out="600 ohm"), pad("p", 2)]
    last = amplifier("d", 4, noise=QUIET)
    as_one = project(
        [*ends, amplifier("b", 3, noise=QUIET, z_in="1 k", count=count), last],
        ("s", "a"),
        ("a", "p"),
        ("p", "b"),
        ("b", "d"),
    )
    many = [amplifier(f"b{k}", 3, noise=QUIET, z_in="1 k") for k in range(count)]
    drawn = project(
        [*ends, *many, last],
        ("s", "a"),
        ("a", "p"),
        *(("p", b.id) for b in many),
        *((b.id, "d") for b in many),
    )
    same(evaluate(as_one), evaluate(drawn), ("a", "out"), ("p", "out"), ("d", "in"), ("d", "out"))


@pytest.mark.parametrize("count", [2, 3, 5])
def test_several_pads_alike(count):
    """Pads that are members themselves hear each other through the output they hang on; then all are summed."""
    ends = [source("s"), amplifier("a", 1, noise=QUIET, z_out="600 ohm")]
    last = amplifier("d", 4, noise=QUIET)
    as_one = project(
        [*ends, pad("p", 2, count=count), amplifier("b", 3, noise=QUIET, z_in="1 k", count=count), last],
        ("s", "a"), ("a", "p"), ("p", "b"), ("b", "d"),
    )  # fmt: skip
    several = range(count)
    drawn = project(
        [*ends, *(pad(f"p{k}", 2) for k in several), *(amplifier(f"b{k}", 3, noise=QUIET, z_in="1 k") for k in several), last],
        ("s", "a"), *(("a", f"p{k}") for k in several), *((f"p{k}", f"b{k}") for k in several),
        *((f"b{k}", "d") for k in several),
    )  # fmt: skip
    one, many = evaluate(as_one), evaluate(drawn)
    same(one, many, ("a", "out"), ("d", "in"), ("d", "out"))
    assert one.node("p", "out").noise == pytest.approx(many.node("p0", "out").noise, abs=1e-9)


def test_both_legs_of_a_split_into_one_sum():
    """The source's and the splitter's thermal noise reaches a sum by both legs: as one voltage what is common to them.

    By hand: the source's 150 ohm and the shunt are heard by both legs alike, each leg's own resistance mostly by its own.
    """
    split = PlainSplitter(
        id="x", name="x", column=1, leg_ohm=Figure(text="100 ohm"), across_ohm=Figure(text="1 k")
    )
    sum_ = amplifier("m", 2, noise=QUIET, z_in="10 M")
    outcome = evaluate(
        project([source("s", z="150 ohm"), split, sum_], ("s", "x"), ("x.a", "m"), ("x.b", "m"))
    )
    parallel = 150.0 * 1000.0 / 1150.0
    density = thermal_noise_v2_per_hz(4.0 * parallel + 2.0 * 100.0)
    expected = 10.0 * np.log10(density * 19_980.0 / 0.6)
    assert outcome.node("m", "in").noise == pytest.approx(expected, abs=1e-3)


def test_ahead_of_a_pad_and_behind_it():
    """A pad's noise stands at both its ends; a sum of both hears what is common in their phase.

    By hand, series R and shunt R into open loads from a stiff driver: only the parallel of both is heard behind it.
    """
    u_pad = pad("p", 2, loss="6.0206 dB", shape="U")
    stages = [
        source("s", z="0.001 ohm"),
        amplifier("a", 1, noise=QUIET, z_out="600 ohm"),
        u_pad,
        amplifier("m", 3, noise=QUIET, z_in="100 M"),
    ]
    outcome = evaluate(project(stages, ("s", "a"), ("a", "p"), ("a", "m"), ("p", "m")))
    # 600 ohm noiseless, 300 ohm in series (n1), 300 ohm across (n2): V_near = (n2 - n1) / 2, V_far = (3 n2 + n1) / 4
    far = np.array([0.25, 0.75])
    near = np.array([-0.5, 0.5])
    density = float(((far + near) ** 2).sum() * thermal_noise_v2_per_hz(300.0))
    assert outcome.node("m", "in").noise == pytest.approx(10.0 * np.log10(density * 19_980.0 / 0.6), abs=1e-3)
