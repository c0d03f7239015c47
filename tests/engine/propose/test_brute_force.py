"""The search against brute force: every combination of every small project, solved exactly.

The order of aims and their tolerances are DESIGN's: the seat within 0.5 dB of its target; margins above the wanted reserve
equal, and below it within 0.5 dB; hiss within 0.5 dB equal.
"""

from __future__ import annotations

import numpy as np
import pytest

from engine.outcome import evaluate
from engine.propose import Impossible, Wishes, propose
from tests.engine.propose.brute import Swept, sweep
from tests.engine.propose.small_venues import MOVING, random_chain, random_tree

RESERVE_DB = 6.0
ROUNDING_DB = 0.15  # shifts stand on a grid of 0.05 dB
EQUAL_DB = 0.5
WINDOW_DB = 0.5
HISS_OF_WINDOW_DB = 0.35  # the quietest may stand at the low end of its window


def judge(project, swept: Swept, allowed: np.ndarray) -> str:
    """Hold the proposal against all combinations; say what came of it."""
    found = propose(evaluate(project))
    away = np.abs(swept.off).max(axis=0)
    on_target = allowed & (away <= WINDOW_DB + 0.03)
    if not on_target.any():
        assert isinstance(found, Impossible), "settings were proposed that cannot be"
        assert found.aim in ("level", "nothing to move")
        nearest = np.abs(swept.off[:, allowed]).max(axis=0).min()
        assert found.miss_db == pytest.approx(nearest, abs=0.3) or swept.off.shape[0] > 1
        return "level"
    best = swept.margin[on_target].max()
    if best < -ROUNDING_DB:
        assert isinstance(found, Impossible)
        assert found.aim == "clip"
        assert found.miss_db == pytest.approx(-best, abs=EQUAL_DB + ROUNDING_DB)
        return "clip"
    if best < ROUNDING_DB and isinstance(found, Impossible):
        return "edge"
    strictly = allowed & (away <= WINDOW_DB - 0.03)
    if isinstance(found, Impossible) and not strictly.any():
        return "edge"
    assert not isinstance(found, Impossible), found
    after = found.outcome
    for seat in after.seats:
        assert abs(seat.off_target) <= WINDOW_DB + ROUNDING_DB
    wanted = min(best, RESERVE_DB)
    assert after.narrowest.margin_db >= wanted - ROUNDING_DB - (EQUAL_DB if best < RESERVE_DB else 0.0)
    keeping = on_target & (swept.margin >= wanted)
    # Hiss of one setting is told from another's by noise over programme, for each may stand anywhere in its window.
    quietest = _total(swept.hiss - swept.level)[keeping].min()
    reached = _total(np.array([[seat.hiss - seat.level] for seat in after.seats]))[0]
    assert reached <= quietest + EQUAL_DB + WINDOW_DB + ROUNDING_DB
    if len(after.seats) == 1:
        assert after.seats[0].hiss <= swept.hiss[0][keeping].min() + EQUAL_DB + HISS_OF_WINDOW_DB
    return "found"


def _total(decibels: np.ndarray) -> np.ndarray:
    return 10.0 * np.log10((10.0 ** (decibels / 10.0)).sum(axis=0))


@pytest.mark.parametrize("seed", range(60))
def test_random_chains(seed):
    project = random_chain(seed)
    swept = sweep(project, MOVING)
    judge(project, swept, np.ones(len(swept.values), dtype=bool))


@pytest.mark.parametrize("seed", range(24))
def test_random_trees(seed):
    project = random_tree(seed)
    swept = sweep(project, MOVING)
    strips = [
        at
        for at, (stage, control) in enumerate(swept.hands)
        if stage.startswith("channel") and control == "fader_db"
    ]
    kept = np.ones(len(swept.values), dtype=bool)
    if len(strips) == 2:
        kept = swept.values[:, strips[0]] == swept.values[:, strips[1]]
    judge(project, swept, kept)


@pytest.mark.parametrize(("build", "seeds"), [(random_chain, range(12)), (random_tree, range(6))])
def test_a_proposal_is_settled_when_taken_and_the_same_each_time(build, seeds):
    """Idempotent: the settings proposed are settled. Same input, same output."""
    for seed in seeds:
        project = build(seed)
        first, again = propose(evaluate(project)), propose(evaluate(project))
        if isinstance(first, Impossible):
            assert isinstance(again, Impossible)
            assert first.message == again.message
            continue
        assert first.changes == again.changes
        assert first.reasons == again.reasons
        taken = project.with_changes(first.changes) if first.changes else project
        assert propose(evaluate(taken)).is_settled, seed


def test_aims_never_get_worse():
    """Where the present settings are feasible no aim is worse after a proposal than before."""
    counted = 0
    for seed in range(60):
        before = evaluate(random_chain(seed))
        if abs(before.seats[0].off_target) > WINDOW_DB or before.narrowest.margin_db < 0.0:
            taken = propose(before)
            if isinstance(taken, Impossible):
                continue
            before = taken.outcome
        counted += 1
        after = propose(before)
        assert not isinstance(after, Impossible)
        wanted = min(before.narrowest.margin_db, RESERVE_DB)
        assert after.outcome.narrowest.margin_db >= wanted - 0.05
        assert after.outcome.seats[0].hiss <= before.seats[0].hiss + 0.05
        assert abs(after.outcome.seats[0].off_target) <= WINDOW_DB + 0.05
    assert counted > 10


def test_locked_controls_stay():
    for seed in range(12):
        project = random_chain(seed)
        locked = frozenset({("amp", "attenuator_db")})
        found = propose(evaluate(project), Wishes(locked=locked))
        proposal = found.nearest if isinstance(found, Impossible) else found
        if proposal is not None:
            assert all((each.stage, each.control) not in locked for each in proposal.touched)
            amp = proposal.outcome.project.stage["amp"]
            assert amp.attenuator_db == project.stage["amp"].attenuator_db
