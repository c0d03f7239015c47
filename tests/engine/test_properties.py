"""What must hold for every project, whatever its numbers: drawn by hypothesis."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from engine.figures import Figure
from engine.outcome import Outcome, evaluate
from engine.project import Link, Project
from engine.stages import Stage, template
from engine.units import power_from_db
from tests.engine.plain_kinds import amplifier, project, source

quick = settings(max_examples=40, deadline=None)

GAINS = st.floats(-30.0, 30.0).map(lambda gain: round(gain, 1))
IMPEDANCES = st.floats(1.0, 4.5).map(lambda decade: f"{10.0**decade:.3f} ohm")
NOISES = st.floats(0.1, 100.0).map(lambda microvolts: f"{microvolts:.4f} uV")
DB_NUMBERS = ("headroom", "peak_margin", "snr")
LEVELS = ("level", "peak", "noise", "noise_a", "clip", "ceiling", *DB_NUMBERS)


@st.composite
def amplifiers(draw: st.DrawFn, size: int | None = None) -> list[Stage]:
    """A run of amplifiers in columns 1, 2, … that load each other."""
    count = size or draw(st.integers(1, 5))
    return [
        amplifier(f"a{k}", k, draw(GAINS), noise=draw(NOISES), z_in=draw(IMPEDANCES), z_out=draw(IMPEDANCES))
        for k in range(1, count + 1)
    ]


@st.composite
def chains(draw: st.DrawFn) -> Project:
    """A source and a run of amplifiers."""
    return chained(
        [source("s", emf=f"{draw(st.floats(1.0, 1000.0)):.3f} mV", z=draw(IMPEDANCES)), *draw(amplifiers())]
    )


def chained(stages: list[Stage]) -> Project:
    """The stages one after another, in columns of their own."""
    placed = [stage.with_fields(column=column) for column, stage in enumerate(stages)]
    return project(placed, *((a.id, b.id) for a, b in pairwise(placed)))


def differences(
    one: Outcome, two: Outcome, names: tuple[str, ...] = LEVELS
) -> dict[tuple[str, str, str], float]:
    """By how much the second outcome's numbers stand over the first's, at the nodes both have."""
    found = {}
    for node in one.nodes:
        if node.stage not in two.project.stage:
            continue
        other = two.node(node.stage, node.direction, node.port)
        for name in names:
            before, after = getattr(one_value := node, name), getattr(other, name)
            assert (before is None) == (after is None), (one_value.stage, name)
            if before is not None:
                found[node.stage, node.direction, name] = after - before
    return found


@quick
@given(chains(), st.integers(0, 4))
def test_a_unity_stage_changes_nothing(chain, place):
    """An ideal stage of 0 dB, without noise or load or clip point, put into any link leaves every other node as it was.

    Its output impedance takes the place of what drives it, so the link is put behind a stage of the same impedance.
    """
    stages = list(chain.stages)
    place = min(place, len(stages) - 1)
    held = getattr(stages[place], "z_out_ohm", None) or stages[place].z_ohm
    if place == 0:
        return  # a source's own impedance is noisy: what stands behind it is its termination
    stiff = stages[place].with_fields(z_out_ohm=Figure(text="0.000001 ohm"))
    unity = amplifier("unity", 0, 0.0, noise="0.000001 nV", z_in="1000000 M").with_fields(z_out_ohm=held)
    before = chained(stages)
    after = chained([*stages[:place], stiff, unity, *stages[place + 1 :]])
    one, two = evaluate(before), evaluate(after)
    for (stage, direction, name), difference in differences(
        one, two, ("level", "noise", "noise_a", "peak")
    ).items():
        if (stage, direction) != (stiff.id, "out"):  # it drives no load now
            assert difference == pytest.approx(0.0, abs=1e-6), (stage, direction, name)


@quick
@given(st.floats(1.0, 25.0), st.floats(1.0, 25.0), IMPEDANCES, IMPEDANCES, GAINS)
def test_two_matched_pads_equal_one_of_their_sum(first_db, second_db, z_source, z_load, gain):
    """Two H pads of one image impedance in a row are one of the summed loss, loads, levels and noise alike."""

    def padded(*losses: float) -> Outcome:
        pads = [
            template("pad", f"p{k}", loss_db=Figure(text=f"{loss:.6f} dB"), shape="H")
            for k, loss in enumerate(losses)
        ]
        last = amplifier("a", 0, gain, z_in=z_load)
        return evaluate(chained([source("s", z=z_source), *pads, last]))

    two, one = padded(first_db, second_db), padded(round(first_db, 6) + round(second_db, 6))
    for stage, direction in (("s", "out"), ("a", "in"), ("a", "out")):
        for name in ("level", "noise", "noise_a", "peak"):
            found, expected = (getattr(o.node(stage, direction), name) for o in (two, one))
            assert found == pytest.approx(expected, abs=1e-5)


@quick
@given(chains(), st.floats(-20.0, 20.0))
def test_a_louder_source_changes_no_gain(chain, by_db):
    """With the source X dB up all levels rise by X, headroom falls by X, noise and clip points stay."""
    first = chain.stages[0]
    louder = float(first.emf_v.text.split()[0]) * 10.0 ** (by_db / 20.0)
    raised = chain.with_changes({"s": (first, first.with_fields(emf_v=Figure(text=f"{louder:.9f} mV")))})
    exactly = 20.0 * np.log10(round(louder, 9) / float(first.emf_v.text.split()[0]))
    moves = {
        "level": 1,
        "peak": 1,
        "noise": 0,
        "noise_a": 0,
        "clip": 0,
        "ceiling": 0,
        "headroom": -1,
        "peak_margin": -1,
        "snr": 1,
    }
    for (_, _, name), difference in differences(evaluate(chain), evaluate(raised)).items():
        assert difference == pytest.approx(moves[name] * exactly, abs=1e-6), name


@quick
@given(amplifiers(), st.floats(0.5, 2.0))
def test_scaling_all_voltages_changes_no_difference(run, factor):
    """Every noise and the source's level times one factor: all levels move alike, S/N stays."""

    def scaled(by: float) -> Outcome:
        stages: list[Stage] = [source("s", emf=f"{0.1 * by:.12f} V", z="0.000001 ohm")]
        for each in run:
            volts = float(each.noise_v.text.split()[0]) * by
            stages.append(each.with_fields(noise_v=Figure(text=f"{volts:.12f} uV")))
        return evaluate(chained(stages))

    moved = 20.0 * np.log10(factor)
    before, after = scaled(1.0), scaled(factor)
    for (stage, direction, _), difference in differences(
        before, after, ("level", "peak", "noise", "noise_a")
    ).items():
        if (stage, direction) in {("s", "out"), ("a1", "in")}:
            continue  # here stands nothing but the source, whose thermal noise is not scaled
        assert difference == pytest.approx(moved, abs=1e-6), (stage, direction)
    for (stage, direction, _), difference in differences(before, after, ("snr",)).items():
        if (stage, direction) not in {("s", "out"), ("a1", "in")}:
            assert difference == pytest.approx(0.0, abs=1e-6)


@quick
@given(chains(), st.data())
def test_adding_noise_never_lowers_noise(chain, data):
    """A noisier stage: no node's noise falls, and those ahead of it stay."""
    at = data.draw(st.integers(1, len(chain.stages) - 1))
    stage = chain.stages[at]
    noisier = stage.with_fields(noise_v=Figure(text=f"{float(stage.noise_v.text.split()[0]) * 3.0:.4f} uV"))
    before, after = evaluate(chain), evaluate(chain.with_changes({stage.id: (stage, noisier)}))
    for (name, direction, _), difference in differences(before, after, ("noise", "noise_a")).items():
        assert difference >= -1e-9
        if chain.stage[name].column < at:
            assert difference == pytest.approx(0.0, abs=1e-9)
        elif (name, direction) == (stage.id, "out"):
            assert difference > 0.0


@quick
@given(chains(), st.data())
def test_headroom_falls_db_for_db_behind_a_control(chain, data):
    """A control X dB up: levels behind it rise by X and headroom behind it falls by X; ahead of it nothing moves."""
    at = data.draw(st.integers(1, len(chain.stages) - 1))
    stage, by_db = chain.stages[at], data.draw(st.floats(-20.0, 20.0).map(lambda x: round(x, 1)))
    moved = chain.with_changes(
        {stage.id: (stage, stage.with_control("gain_db", round(stage.gain_db.value + by_db, 1)))}
    )
    for (name, direction, which), difference in differences(
        evaluate(chain), evaluate(moved), ("level", "headroom", "peak_margin")
    ).items():
        column = chain.stage[name].column
        behind = column > at or (column == at and direction == "out")
        sign = 1.0 if which == "level" else -1.0
        assert difference == pytest.approx(sign * by_db if behind else 0.0, abs=1e-6), (
            name,
            direction,
            which,
        )


@quick
@given(st.floats(1.0, 30.0), st.floats(1.0, 30.0), NOISES)
def test_swapping_two_attenuators_keeps_level_and_changes_noise(first_db, second_db, noise):
    """Two flat unloaded attenuators with noise of their own: the order does not change the level; it does the noise."""

    def in_order(*losses: float) -> Outcome:
        run = [
            amplifier(f"a{k}", k, -round(loss, 1), noise=noise, z_in="1000 M")
            for k, loss in enumerate(losses)
        ]
        return evaluate(chained([source("s", z="0.001 ohm"), *run]))

    one, two = in_order(first_db, second_db), in_order(second_db, first_db)
    assert one.node("a1", "out").level == pytest.approx(two.node("a1", "out").level, abs=1e-9)
    # Of the two noises one passes both, the other the last alone: the smaller loss last is the noisier order.
    difference = one.node("a1", "out").noise - two.node("a1", "out").noise
    if round(first_db, 1) == round(second_db, 1):
        assert difference == pytest.approx(0.0, abs=1e-9)
    else:
        assert np.sign(difference) == np.sign(round(first_db, 1) - round(second_db, 1))


@quick
@given(chains(), IMPEDANCES)
def test_a_branch_added_and_removed_restores_every_figure(chain, z_in):
    """A second load on any output moves levels; taken away again everything is as it was, to the last bit."""
    first = chain.stages[1]
    branch = amplifier("branch", first.column + 1, z_in=z_in)
    link = Link(id="to branch", source=first.id, target="branch")
    added = {"branch": (None, branch), link.id: (None, link)}
    before = evaluate(chain)
    loaded = evaluate(chain.with_changes(added), before)
    assert loaded.node(first.id, "out").level < before.node(first.id, "out").level
    restored = evaluate(chain.with_changes(added).with_changes(added, undo=True), loaded)
    assert restored.nodes == before.nodes
    assert np.array_equal(restored.solution.spectra, before.solution.spectra)


@quick
@given(chains())
def test_a_louder_origin_is_never_a_smaller_share(chain):
    """Levels of noise and programme are positive powers: no node's noise lies under any of the noises that feed it."""
    outcome = evaluate(chain)
    for before, after in pairwise(chain.stages):
        gain_db = outcome.node(after.id, "in").level - outcome.node(before.id, "out").level
        carried = outcome.node(before.id, "out").noise + gain_db
        assert outcome.node(after.id, "in").noise >= carried - 1e-9


@quick
@given(st.integers(2, 6), GAINS)
def test_unlike_sources_add_as_power(count, gain):
    """N equal sources of unlike programme into one sum: 10 log N over one of them, programme and noise alike."""
    stages: list[Stage] = [source(f"s{k}", z="1 uohm") for k in range(count)]
    stages += [amplifier(f"a{k}", 1, gain, z_in="1000 M") for k in range(count)]
    stages.append(amplifier("sum", 2, 0.0, noise="0.000001 nV", z_in="1000 M"))
    ends = [(f"s{k}", f"a{k}") for k in range(count)] + [(f"a{k}", "sum") for k in range(count)]
    outcome = evaluate(project(stages, *ends))
    for name in ("level", "noise", "peak"):
        rise = getattr(outcome.node("sum", "in"), name) - getattr(outcome.node("a0", "out"), name)
        assert power_from_db(rise) == pytest.approx(count, rel=1e-9)


@quick
@given(chains(), st.floats(30.0, 15_000.0))
def test_flat_stages_are_flat(chain, tone_hz):
    """Resistive loads and flat gains: a sine of any frequency sent at the programme's level stands where the programme does."""
    programme, tone = evaluate(chain), evaluate(chain, tone_hz=tone_hz)
    for difference in differences(programme, tone, ("level", "noise", "clip", "headroom")).values():
        assert difference == pytest.approx(0.0, abs=1e-9)


@quick
@given(chains(), GAINS, GAINS)
def test_editing_there_and_back_restores_every_figure(chain, one_db, two_db):
    """A control moved, moved again and put back: the rows rewritten in place are those compiled at first."""
    stage = chain.stages[-1]
    outcome = evaluate(chain)
    for value in (one_db, two_db, stage.gain_db.value):
        now = outcome.project
        outcome = evaluate(
            now.with_changes({stage.id: (now.stage[stage.id], stage.with_control("gain_db", value))}), outcome
        )
    assert outcome.nodes == evaluate(chain).nodes
