"""Splitters: what each further load costs."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from tests.engine.stages.alone import NO_LOAD, line, make


def split(source, loads: list[str], **fields):
    stage = make("splitter", ways=max(2, len(loads)), **fields).with_fields(column=1)
    ends = [
        make("feed", f"load{n}", z_in_ohm=z, ein_v=None).with_fields(column=2) for n, z in enumerate(loads)
    ]
    links = [Link(id="in", source="source", target="splitter")]
    links += [
        Link(id=e.id + "l", source="splitter", output=p.name, target=e.id)
        for e, p in zip(ends, stage.outputs(), strict=False)
    ]
    return evaluate(Project(stages=(source, stage, *ends), links=tuple(links)))


@pytest.mark.parametrize(("count", "loss"), [(1, -1.09), (2, -2.05), (3, -2.92)])
def test_a_microphone_into_several_inputs(count, loss):
    """S39: 200 ohm into one, two and three inputs of 1.5 kohm."""
    out = split(line("0 dBu", z_out_ohm="200 ohm"), ["1.5 k"] * count)
    assert out.node("load0", "in").level == pytest.approx(loss, abs=0.005)


@pytest.mark.parametrize(
    ("zs", "loads", "loss"),
    [("75 ohm", ["10 k"], -0.06), ("150 ohm", ["10 k"], -0.13), ("75 ohm", ["10 k"] * 4, -0.26), ("600 ohm", ["10 k"], -0.51),
     ("600 ohm", ["10 k"] * 4, -1.87), ("75 ohm", ["600 ohm"], -1.02), ("75 ohm", ["600 ohm"] * 2, -1.94), ("600 ohm", ["600 ohm"], -6.02),
     ("600 ohm", ["600 ohm"] * 2, -9.54)],
)  # fmt: skip
def test_how_many_inputs_one_output_feeds(zs, loads, loss):
    """S14: loss = 20 log(ZL / (ZL + ZS))."""
    assert split(line("0 dBu", z_out_ohm=zs), loads).node("load0", "in").level == pytest.approx(
        loss, abs=0.006
    )


def test_a_resistive_split_shields_its_branches():
    """100 ohm legs: a shorted branch (1 mohm) still leaves the other what 600 ohm behind 100 ohm can give."""
    out = split(
        line("0 dBu", z_out_ohm="100 ohm"), [NO_LOAD, "0.001 ohm"], build="resistive", leg_ohm="100 ohm"
    )
    assert out.node("load0", "in").level == pytest.approx(-6.02, abs=0.005)


def test_an_isolated_output_steps_down():
    """A 2:1 transformer (6.02 dB) into an open input; behind it 1.5 kohm looks like 6 kohm to a source of 200 ohm."""
    open_ended = split(
        line("0 dBu"), [NO_LOAD, NO_LOAD], build="transformer", loss_db="6.0206 dB", leg_ohm="0.001 ohm"
    )
    assert open_ended.node("load1", "in").level == pytest.approx(-6.02, abs=0.005)
    loaded = split(
        line("0 dBu", z_out_ohm="200 ohm"),
        [NO_LOAD, "1.5 k"],
        build="transformer",
        loss_db="6.0206 dB",
        leg_ohm="0.001 ohm",
    )
    assert loaded.node("load0", "in").level == pytest.approx(-0.285, abs=0.005)  # 20 log(6000 / 6200)


def test_an_active_split_does_not_mind():
    out = split(
        line("0 dBu"),
        ["600 ohm", "10 k"],
        build="active",
        z_in_ohm=NO_LOAD,
        z_out_ohm="1 µohm",
        gain_db="0 dB",
        noise="-95 dBu unweighted",
    )
    for load in ("load0", "load1"):
        assert out.node(load, "in").level == pytest.approx(0.0, abs=1e-3)
        assert out.node(load, "in").noise == pytest.approx(-95.0, abs=1e-3)
