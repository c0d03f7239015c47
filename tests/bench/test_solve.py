"""How long compiling and solving take, each beside its goal and beside a floor measured in the same run.

Run with: python -m pytest --benchmark-enable tests/bench -s
"""

from __future__ import annotations

import subprocess
import time
import tracemalloc
from collections.abc import Callable
from functools import partial
from pathlib import Path

import numpy as np
import pytest
from pytest_benchmark.fixture import BenchmarkFixture

from engine.compile import Plan, build_plan, redrawn
from engine.project import Project
from engine.solve import NOISE, solve
from tests.bench.floors import floor_of, fused
from tests.bench.venues import path, venue
from tests.engine.plain_kinds import amplifier, project, source
from tests.judges.netlist import write
from tests.judges.ngspice import measure, program

DRAWS, CHUNK = 10_000, 32
MIB = 2**20


def best_ms(work: Callable[[], object], rounds: int) -> float:
    """The shortest of some runs [ms]."""
    times = []
    for _ in range(rounds):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return min(times) * 1e3


def told(name: str, found_ms: float, goal_ms: float, **floors_ms: float) -> None:
    """Print one figure beside its goal and floors; goals are watched, not enforced (a machine may be busy)."""
    beside = "".join(f", {what} {value:.3f} ms" for what, value in floors_ms.items())
    print(
        f"\n{name}: {found_ms:.3f} ms, goal {goal_ms:g} ms{'' if found_ms <= goal_ms else ', MISSED'}{beside}"
    )


def timed(
    benchmark: BenchmarkFixture,
    name: str,
    goal_ms: float,
    work: Callable[[], object],
    **floors: Callable[[], object],
) -> None:
    """Benchmark some work and print it beside its goal and its floors."""
    benchmark.extra_info["goal_ms"] = goal_ms
    benchmark(work)
    if benchmark.stats is not None:
        told(
            name,
            benchmark.stats.stats.min * 1e3,
            goal_ms,
            **{what: best_ms(floor, 20) for what, floor in floors.items()},
        )


@pytest.fixture(scope="module")
def path_plan() -> Plan:
    return build_plan(path())


@pytest.fixture(scope="module")
def venue_plan() -> Plan:
    return build_plan(venue(500, 60))


def test_the_path_is_as_large_as_its_goal_says(path_plan):
    """20 stages, about 60 sections, 156 frequencies (DESIGN 11)."""
    assert len(path_plan.project.stages) == 20
    assert 55 <= sum(len(path_plan.section_list(stage)) for stage in path_plan.answers) <= 65
    assert path_plan.axis.size == 156


def test_the_venue_is_as_large_as_its_goal_says(venue_plan):
    """500 stages, 60 zones, each with a seat (DESIGN 11)."""
    assert 495 <= len(venue_plan.project.stages) <= 500
    assert sum(stage.is_seat for stage in venue_plan.project.stages) == 60


def test_solve_20_stages(benchmark, path_plan):
    """Goal 1 ms."""
    plan = path_plan
    timed(
        benchmark,
        "solve 20 stages",
        1.0,
        lambda: solve(plan.graph, plan.rows, plan.axis),
        fused=floor_of(plan.graph, plan.rows),
    )


def test_solve_500_stages(benchmark, venue_plan):
    """Goal 5 ms."""
    plan = venue_plan
    timed(
        benchmark, "solve 500 stages, 60 zones", 5.0, lambda: solve(plan.graph, plan.rows, plan.axis),
        fused=floor_of(plan.graph, plan.rows),
    )  # fmt: skip


def test_solve_5000_stages(benchmark):
    """Goal 50 ms."""
    plan = build_plan(venue(5000, 600))
    timed(
        benchmark,
        "solve 5000 stages",
        50.0,
        lambda: solve(plan.graph, plan.rows, plan.axis),
        fused=floor_of(plan.graph, plan.rows),
    )


@pytest.mark.parametrize(
    ("made", "goal_ms"), [(path(), 10.0), (venue(500, 60), 150.0)], ids=["20 stages", "500 stages"]
)
def test_compile(benchmark, request, made, goal_ms):
    """Goals 10 ms and 150 ms; the floor is asking every stage for its sections."""

    def answers() -> None:
        for stage in made.stages:
            stage.sections(stage.values().replaced({"temperature_k": 293.15}), made.axis())

    timed(
        benchmark, f"compile {request.node.callspec.id}", goal_ms, lambda: build_plan(made), answers=answers
    )


def test_work_grows_with_the_number_of_stages(benchmark):
    """Ten times the stages are ten times the rows, in as many ranks; the times stand beside each other."""
    plans = [build_plan(venue(count, count // 8)) for count in (240, 2400)]
    small, large = plans
    assert large.graph.size == pytest.approx(10 * small.graph.size, rel=0.05)
    assert len(large.graph.ranks) == len(small.graph.ranks)
    benchmark(solve, small.graph, small.rows, small.axis)
    if benchmark.enabled:
        times = [best_ms(partial(solve, plan.graph, plan.rows, plan.axis), 5) for plan in plans]
        print(f"\nsolve 240 stages {times[0]:.3f} ms, 2400 stages {times[1]:.3f} ms")


def draws(plan: Plan, count: int) -> np.ndarray:
    """Noise at the end of a path for many draws of every figure, in chunks, keeping that alone."""
    random = np.random.default_rng(1)
    end = plan.input_row(plan.project.stages[-1].id)
    kept = []
    for _ in range(0, count, CHUNK):
        overrides = {}
        for stage in plan.project.stages:
            values, controls = stage.values(), stage.control_specs()
            drawn = {
                name: number * (1.0 + 0.01 * random.standard_normal((CHUNK, 1)))
                for name, number in values.numbers.items()
                if name not in controls and np.isfinite(number)
            }
            overrides[stage.id] = values.replaced(drawn)
        chunk = redrawn(plan, overrides, CHUNK)
        kept.append(solve(chunk.graph, chunk.rows, chunk.axis).sums[end, NOISE])
    return np.concatenate(kept)


def test_10_000_draws(benchmark, path_plan):
    """Goal 1.5 s for the solving of 10 000 draws of 60 sections, and 250 MiB; with every figure drawn anew, beside it.

    As a plain test it runs a hundredth of them.
    """
    count = DRAWS if benchmark.enabled else DRAWS // 100
    chunk = redrawn(path_plan, {}, CHUNK)

    def solving() -> None:
        for _ in range(0, count, CHUNK):
            solve(chunk.graph, chunk.rows, chunk.axis)

    benchmark.pedantic(solving, rounds=1)
    start = time.perf_counter()
    found = draws(path_plan, count)
    whole_s = time.perf_counter() - start
    tracemalloc.start()
    draws(path_plan, 4 * CHUNK)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert found.shape[0] >= count
    assert peak < 250 * MIB
    if benchmark.enabled:
        graph, rows = chunk.graph, chunk.rows
        floor = best_ms(fused(graph.size, CHUNK, rows.gain.shape[-1]), 5) * DRAWS / CHUNK
        told("10 000 draws, solving", benchmark.stats.stats.min * 1e3, 1500.0, fused=floor)
        print(
            f"10 000 draws, every figure drawn and written anew: {whole_s:.2f} s; {peak / MIB:.0f} MiB, goal 250 MiB"
        )


def plain_chain() -> Project:
    """20 stages that ngspice can take: a source and 19 amplifiers loading each other."""
    stages = [source("s0"), *(amplifier(f"s{k}", k, 1.0, z_in="10 k", z_out="100 ohm") for k in range(1, 20))]
    return project(stages, *((f"s{k}", f"s{k + 1}") for k in range(19)))


def test_the_same_chain_in_a_circuit_simulator(benchmark, tmp_path):
    """20 amplifiers: the engine's solve of levels and noise at every node beside ngspice's run of the same."""
    chain = plain_chain()
    plan = build_plan(chain)
    circuit = write(chain.model_dump())
    timed(benchmark, "solve 20 amplifiers", 1.0, lambda: solve(plan.graph, plan.rows, plan.axis))
    if benchmark.enabled:
        empty = best_ms(lambda: start_and_leave(tmp_path), 3)
        whole = best_ms(lambda: measure(circuit, tmp_path, (20.0, 1000.0, 20_000.0)), 3)
        print(
            f"ngspice on the same chain: {whole - empty:.1f} ms beyond the {empty:.1f} ms it takes to start"
        )


def start_and_leave(folder: Path) -> None:
    """ngspice with nothing to do."""
    (folder / "nothing.cir").write_text("* nothing\nR1 1 0 1\n.control\n.endc\n.end\n", encoding="ascii")
    subprocess.run([program(), "-b", "nothing.cir"], cwd=folder, capture_output=True, timeout=60, check=False)
