"""The solver against sums written out by hand: every origin, every way."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from engine.budget import contributions
from engine.compile import build_plan
from engine.outcome import evaluate
from engine.project import Project
from engine.solve import FLAT, NOISE, PROGRAMME, solve
from tests.engine.plain_kinds import amplifier, project, source

UV = 1e-6


def ways(links: set[tuple[str, str]], start: str, end: str) -> list[list[str]]:
    """Every way from one stage to another."""
    if start == end:
        return [[end]]
    return [[start, *rest] for a, b in sorted(links) if a == start for rest in ways(links, b, end)]


def amplitude(gains: dict[str, float], way: list[str]) -> float:
    return float(np.prod([10.0 ** (gains.get(stage, 0.0) / 20.0) for stage in way]))


@st.composite
def webs(draw: st.DrawFn) -> tuple[Project, set[tuple[str, str]], dict[str, float]]:
    """Two sources feeding up to seven amplifiers in four columns, linked at random, re-joining as they may."""
    columns = draw(st.lists(st.integers(1, 2), min_size=2, max_size=4))
    names: list[list[str]] = [["s0", "s1"]]
    stages: list = [source("s0", emf="1 V", z="1 uohm"), source("s1", emf="0.5 V", z="1 uohm")]
    gains: dict[str, float] = {}
    for column, size in enumerate(columns, start=1):
        names.append([f"a{column}{k}" for k in range(size)])
        for name in names[-1]:
            gains[name] = draw(st.sampled_from([-12.0, -3.0, 0.0, 4.0, 9.0]))
            stages.append(amplifier(name, column, gains[name], z_in="1 M"))
    stages.append(amplifier("end", len(names), 0.0, z_in="1 M"))
    gains["end"] = 0.0
    links = set()
    for column in range(1, len(names)):
        for name in names[column]:
            ahead = [n for group in names[:column] for n in group]
            for feeding in draw(st.lists(st.sampled_from(ahead), min_size=1, max_size=3, unique=True)):
                links.add((feeding, name))
    for name in draw(
        st.lists(st.sampled_from([n for g in names for n in g]), min_size=1, max_size=5, unique=True)
    ):
        links.add((name, "end"))
    return project(stages, *sorted(links)), links, gains


@settings(max_examples=150, deadline=None)
@given(webs())
def test_noise_and_programme_agree_with_every_origin_by_every_way(web):
    """Noise of one origin adds as voltage over all its ways, origins as power; so does the programme of each source."""
    plan_project, links, gains = web
    plan = build_plan(plan_project)
    solution = solve(plan.graph, plan.rows, plan.axis)
    end = plan.output_row("end")
    noise = sum(
        UV**2 * sum(amplitude(gains, way) for way in ways(links, origin, "end")) ** 2 for origin in gains
    )
    programme = sum(
        level**2 * sum(amplitude(gains, way) for way in ways(links, start, "end")) ** 2
        for start, level in (("s0", 1.0), ("s1", 0.5))
    )
    # Loading by 1 Mohm behind 1 uohm and the source's thermal noise are below 1e-9 of these.
    assert solution.flat[end, NOISE, 0] == pytest.approx(noise, rel=1e-6)
    assert solution.flat[end, PROGRAMME, 0] == pytest.approx(programme, rel=1e-6)


@settings(max_examples=60, deadline=None)
@given(webs())
def test_the_budget_adds_up_to_the_noise(web):
    plan = build_plan(web[0])
    solution = solve(plan.graph, plan.rows, plan.axis)
    end = plan.output_row("end")
    found = contributions(plan.graph, plan.rows, solution, end)
    total = sum(c.power for c in found)
    np.testing.assert_allclose(total[:-1], solution.spectra[end, NOISE, 0, :-1], rtol=1e-9)


@pytest.mark.parametrize("count", [2, 3, 8])
def test_n_alike_equals_n_drawn_out(count):
    """One block with a count and N blocks give the same level, load and noise, to 1e-9."""
    ends = [source("s", emf="1 mV"), amplifier("a", 1, 40.0, z_in="1800 ohm", z_out="100 ohm")]
    last = amplifier("d", 4, 0.0)
    as_one = project(
        [*ends, amplifier("b", 2, 6.0, count=count), amplifier("c", 3, -2.0, count=count), last],
        ("s", "a"), ("a", "b"), ("b", "c"), ("c", "d"),
    )  # fmt: skip
    drawn_out = project(
        [*ends, *(amplifier(f"b{k}", 2, 6.0) for k in range(count)), *(amplifier(f"c{k}", 3, -2.0) for k in range(count)), last],
        ("s", "a"), *((("a", f"b{k}")) for k in range(count)), *((f"b{k}", f"c{k}") for k in range(count)),
        *((f"c{k}", "d") for k in range(count)),
    )  # fmt: skip
    one, many = evaluate(as_one), evaluate(drawn_out)
    for stage, side in product(("a", "d"), ("in", "out")):
        for number in ("level", "noise", "peak", "clip", "ceiling"):
            assert getattr(one.node(stage, side), number) == pytest.approx(
                getattr(many.node(stage, side), number), abs=1e-9
            )


def test_n_alike_with_branches_inside_equals_n_drawn_out():
    """Members that split and re-join within themselves, fed by one source of noise: same member and other member apart."""
    count = 3
    ends = [source("s", emf="1 mV"), amplifier("a", 1, 40.0)]
    inner = [("b", 2, 6.0), ("c", 3, -2.0), ("e", 3, 1.0)]
    as_one = project(
        [*ends, *(amplifier(n, col, g, count=count) for n, col, g in inner), amplifier("d", 4)],
        ("s", "a"), ("a", "b"), ("b", "c"), ("b", "e"), ("c", "d"), ("e", "d"),
    )  # fmt: skip
    drawn_out = project(
        [*ends, *(amplifier(f"{n}{k}", col, g) for n, col, g in inner for k in range(count)), amplifier("d", 4)],
        ("s", "a"),
        *(end for k in range(count) for end in (("a", f"b{k}"), (f"b{k}", f"c{k}"), (f"b{k}", f"e{k}"), (f"c{k}", "d"), (f"e{k}", "d"))),
    )  # fmt: skip
    one, many = evaluate(as_one), evaluate(drawn_out)
    assert one.node("d", "out").noise == pytest.approx(many.node("d", "out").noise, abs=1e-9)
    assert one.node("d", "out").level == pytest.approx(many.node("d", "out").level, abs=1e-9)


def test_a_batch_row_equals_a_single_solve():
    """A batch of one equals a single solve to the last bit, a row of a wide batch to 1e-12."""
    chain = project([source("s"), amplifier("a", 1, 3.0), amplifier("b", 2, 1.0)], ("s", "a"), ("a", "b"))
    gains = np.linspace(-10.0, 10.0, 7)[:, None]
    wide = build_plan(chain, overrides={"a": chain.stage["a"].values().replaced({"gain_db": gains})}, batch=7)
    solved = solve(wide.graph, wide.rows, wide.axis)
    for place, gain in enumerate(gains[:, 0]):
        single = build_plan(
            chain.with_changes(
                {"a": (chain.stage["a"], chain.stage["a"].with_control("gain_db", float(gain)))}
            )
        )
        alone = solve(single.graph, single.rows, single.axis)
        again = solve(single.graph, single.rows, single.axis)
        assert np.array_equal(alone.spectra, again.spectra)
        np.testing.assert_allclose(solved.spectra[:, :, place], alone.spectra[:, :, 0], rtol=1e-12)


@given(st.sampled_from(["a", "b"]), st.floats(-20.0, 20.0), st.booleans())
@settings(max_examples=40, deadline=None)
def test_rewriting_a_stage_equals_compiling_anew(stage, gain, loads):
    """A moved control and a changed impedance, written into a copy of the rows: equal to the last bit."""
    chain = project(
        [source("s"), amplifier("a", 1, 3.0, z_out="200 ohm"), amplifier("b", 2, 1.0), amplifier("c", 2, 1.0)],
        ("s", "a"), ("a", "b"), ("a", "c"),
    )  # fmt: skip
    before = evaluate(chain)
    after = chain.stage[stage].with_control("gain_db", gain)
    if loads:
        after = after.with_fields(z_in_ohm={"text": "600 ohm"})
    changed = chain.with_changes({stage: (chain.stage[stage], after)})
    stepped, anew = evaluate(changed, before), evaluate(changed)
    assert stepped.plan.graph is before.plan.graph
    assert np.array_equal(stepped.solution.spectra, anew.solution.spectra)
    assert stepped.nodes == anew.nodes


def test_bridging_loss_shows_at_the_loaded_output():
    """600 ohm into 600 ohm costs 6.02 dB and 75 ohm into 2.5 kohm 0.26 dB (definition of bridging loss)."""
    for z_out, z_in, loss_db in (
        ("600 ohm", "600 ohm", 6.0206),
        ("75 ohm", "2500 ohm", 0.2567),
        ("150 ohm", "10 k", 0.1293),
    ):
        chain = project(
            [source("s", z="1 uohm"), amplifier("a", 1, z_out=z_out), amplifier("b", 2, z_in=z_in)],
            ("s", "a"),
            ("a", "b"),
        )
        outcome = evaluate(chain)
        loss = outcome.node("a", "in").level - outcome.node("a", "out").level
        assert loss == pytest.approx(loss_db, abs=5e-4)
        assert outcome.node("a", "out").clip == pytest.approx(10 * np.log10(1000 / 0.6) - loss_db, abs=5e-4)


def test_first_to_clip_and_usable_ceiling():
    """Ceiling at every node is the level there plus the smallest margin of its path: it is 3 dB over the level all along."""
    chain = project(
        [source("s", z="1 uohm"), amplifier("a", 1, 5.0), amplifier("b", 2, 12.0)], ("s", "a"), ("a", "b")
    )
    outcome = evaluate(chain)
    # 1 V, crest 10 dB sine-scaled; 17 dB of gain: peak 27 dBV against 1000 V² = 30 dBV.
    assert outcome.narrowest.stage == "b"
    assert outcome.narrowest.side == "out"
    assert outcome.narrowest.margin_db == pytest.approx(3.0, abs=1e-6)
    for node in outcome.nodes:
        assert node.ceiling - node.level == pytest.approx(3.0, abs=1e-6)
    assert outcome.node("b", "out").peak_margin == pytest.approx(3.0, abs=1e-6)
    assert outcome.node("b", "out").headroom == pytest.approx(13.0, abs=1e-6)


def test_ratio_of_kinds_of_sum(request):
    """The test tone carries each source's whole level; it takes no part in the programme's sum."""
    outcome = evaluate(project([source("s", emf="2 V", z="1 uohm"), amplifier("a", 1)], ("s", "a")))
    row = outcome.plan.output_row("a")
    assert outcome.solution.sums[row, PROGRAMME, 0, FLAT] == pytest.approx(4.0, rel=1e-6)
    assert outcome.solution.tone[row, PROGRAMME, 0] == pytest.approx(4.0, rel=1e-6)
