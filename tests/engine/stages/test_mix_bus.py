"""Mix buses: sums by rule, noise ahead of and behind the fader, N alike."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from tests.engine.stages.alone import NO_LOAD, NO_OHM, SILENT, end, line, make, solved

BUS = {"z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM, "residual": SILENT}


def summed(*sources, **fields):
    bus = make("mix_bus", **{**BUS, **fields}).with_fields(column=1)
    links = tuple(Link(id=f"l{s.id}", source=s.id, target="mix_bus") for s in sources)
    return evaluate(Project(stages=(*sources, bus), links=links))


@pytest.mark.parametrize("count", [2, 4, 8, 12])
def test_n_alike_add_as_power(count):
    """S16: 10 log N: 3.01, 6.02, 9.03, 10.79 dB for unlike programmes and for their noise."""
    source = line("0 dBu", noise="-90 dBu unweighted").with_fields(count=count)
    node = summed(source).node("mix_bus", "out")
    expected = {2: 3.01, 4: 6.02, 8: 9.03, 12: 10.79}[count]
    assert node.level == pytest.approx(expected, abs=0.005)
    assert node.noise == pytest.approx(-90.0 + expected, abs=0.005)


def test_rules_of_the_sum():
    """Two at 0 dBu: by origin and by power +3.01 dB, coherent +6.02 dB; noise of two origins always +3.01 dB (C27)."""
    pair = line("0 dBu", "a", noise="-90 dBu unweighted"), line("0 dBu", "b", noise="-90 dBu unweighted")
    for rule, expected in (("by origin", 3.01), ("power", 3.01), ("coherent", 6.02)):
        node = summed(*pair, adds=rule).node("mix_bus", "out")
        assert node.level == pytest.approx(expected, abs=0.005)
        assert node.noise == pytest.approx(-86.99, abs=0.005)


def test_one_source_by_two_channels_adds_as_voltage():
    channel = {"z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM, "noise": SILENT}
    stages = (
        line("0 dBu"), make("mixer_channel", "a", **channel).with_fields(column=1),
        make("mixer_channel", "b", **channel).with_fields(column=1), make("mix_bus", **BUS).with_fields(column=2),
    )  # fmt: skip
    ends = (("source", "a"), ("source", "b"), ("a", "mix_bus"), ("b", "mix_bus"))
    links = tuple(Link(id=f"{s}{t}", source=s, target=t) for s, t in ends)
    assert evaluate(Project(stages=stages, links=links)).node("mix_bus", "out").level == pytest.approx(
        6.02, abs=0.005
    )


def test_the_residual_does_not_fall_with_the_fader_and_summing_noise_does():
    """S01: the mixer's residual stays; what stands ahead of the fader moves with it."""
    for fader in (0.0, -30.0):
        bus = {"fader_db": fader, "residual": "-86 dBu unweighted", "summing_noise": SILENT}
        assert solved(line("0 dBu"), make("mix_bus", **{**BUS, **bus}), end()).node(
            "mix_bus", "out"
        ).noise == pytest.approx(-86.0, abs=1e-3)
        bus = {"fader_db": fader, "residual": SILENT, "summing_noise": "-86 dBu unweighted"}
        assert solved(line("0 dBu"), make("mix_bus", **{**BUS, **bus}), end()).node(
            "mix_bus", "out"
        ).noise == pytest.approx(-86.0 + fader, abs=1e-3)
