"""Small random chains and trees of the shelf's own stages, with few positions each, so that all of them can be tried."""

from __future__ import annotations

import numpy as np

from engine.figures import Figure
from engine.outcome import evaluate
from engine.project import Project
from engine.stages import Setting, Stage
from tests.scenarios.build import amplifier, chain, line, loudspeaker, project, seat, stage

#: The controls that move level; the search has to find them by itself.
MOVING = {
    "level_switch",
    "inserted",
    "gain_db",
    "pad",
    "trim_db",
    "fader_db",
    "attenuator_db",
    "sensitivity_range",
}


def figure(text: str) -> Figure:
    return Figure(text=text)


def _channel(random: np.random.Generator, id: str) -> Stage:
    low = -float(random.integers(1, 4)) * 2.0
    return stage(
        "mixer_channel", id, trim_min_db=f"{low:g} dB", trim_max_db=f"{low + 2.0:g} dB", trim_db=low,
        fader_min_db=f"{-2.0 - random.integers(0, 2):g} dB", fader_max_db="0 dB", fader_db=0.0,
        max_v=f"{random.integers(18, 25)} dBu", noise=f"{random.integers(-100, -85)} dBu unweighted",
    )  # fmt: skip


def _bus(random: np.random.Generator, id: str) -> Stage:
    low = -float(random.integers(2, 5))
    return stage(
        "mix_bus", id, fader_min_db=f"{low:g} dB", fader_max_db=f"{low + 2.5:g} dB", fader_db=low + 1.0,
        max_output_v=f"{random.integers(18, 25)} dBu", residual=f"{random.integers(-95, -80)} dBu unweighted",
    )  # fmt: skip


def _preamplifier(random: np.random.Generator, id: str) -> Stage:
    low = float(random.integers(0, 10))
    return stage(
        "preamplifier", id, gain_min_db=f"{low:g} dB", gain_max_db=f"{low + 12.0:g} dB", gain_step_db="3 dB",
        gain_db=low + 3.0, ein_v=["-110 dBu, 150 ohm, unweighted"], pad_db="10 dB",
    )  # fmt: skip


def _pad(random: np.random.Generator, id: str) -> Stage:
    return stage(
        "pad",
        id,
        loss_db=f"{random.choice([6, 10, 12, 20])} dB",
        z_ohm="2 k",
        inserted=float(random.integers(0, 2)),
    )


def _amplifier(random: np.random.Generator, id: str) -> Stage:
    ranges = (
        {"range_gains_db": ["32 dB", "26 dB"]}
        if random.random() < 0.5
        else {"gain_db": f"{random.integers(26, 40)} dB"}
    )
    return amplifier(
        id, rated_power_w=[f"{random.choice([200, 500, 1000])} W @ 8 ohm"], lowest_db="-24 dB",
        step_db=f"{random.choice([2, 3, 4])} dB", attenuator_db=0.0, max_input_v=f"{random.integers(14, 24)} dBu",
        noise=f"{random.integers(95, 110)} dB re rated unweighted", **ranges,
    )  # fmt: skip


MAKERS = {"channel": _channel, "bus": _bus, "preamplifier": _preamplifier, "pad": _pad}


def random_chain(seed: int) -> Project:
    """A source, one to three stages, an amplifier, a loudspeaker and a seat with some target."""
    random = np.random.default_rng(seed)
    middle = random.choice(list(MAKERS), size=random.integers(1, 4), replace=False)
    source = line(
        level=f"{random.integers(-10, 6)} dBu", crest=f"{random.integers(6, 16)} dB", most="+30 dBu"
    )
    made = [MAKERS[name](random, str(name)) for name in middle]
    target = f"{random.integers(80, 106)} dB SPL"
    return chain(
        source, *made, _amplifier(random, "amp"), loudspeaker(sensitivity_spl=f"{random.integers(88, 104)} dB 1 W/1 m"),
        seat(target_spl_db=target), distance="4 m",
    )  # fmt: skip


def random_tree(seed: int) -> Project:
    """One or two channels into a bus that feeds two amplifiers with a seat each."""
    random = np.random.default_rng(1000 + seed)
    sources = int(random.integers(1, 3))
    stages: list[Stage] = []
    links: list[str] = []
    for n in range(sources):
        stages.append(
            line(f"source{n}", level=f"{random.integers(-6, 5)} dBu", crest="10 dB", most="+30 dBu")
        )
        channel = _channel(random, f"channel{n}")
        if sources == 2:
            # Two strips with equal steps, so that the balance of the mix can be kept.
            channel = channel.with_fields(
                trim_min_db=figure("0 dB"), trim_max_db=figure("0 dB"), trim_db=Setting(value=0.0),
                fader_min_db=figure("-3 dB"), fader_max_db=figure("0 dB"), fader_db=Setting(value=-1.0),
            )  # fmt: skip
        stages.append(channel)
    stages.append(_bus(random, "bus"))
    for n in range(sources):
        links += [f"source{n} > channel{n}", f"channel{n} > bus"]
    distances = {}
    for side in ("left", "right"):
        stages += [
            _amplifier(random, f"amp_{side}").with_fields(range_gains_db=(), gain_db=figure("32 dB")),
            loudspeaker(f"box_{side}", sensitivity_spl=f"{random.integers(88, 104)} dB 1 W/1 m"),
            seat(id=f"seat_{side}", target_spl_db=f"{random.integers(84, 100)} dB SPL"),
        ]
        links += [f"bus > amp_{side}", f"amp_{side} > box_{side}", f"box_{side} > seat_{side}"]
        distances[links[-1]] = f"{random.integers(2, 9)} m"
    return _with_targets(project(stages, links, distances), random)


def _with_targets(made: Project, random: np.random.Generator) -> Project:
    """Targets that some settings reach, or nearly, so that both seats can be served at once."""
    changes: dict[str, tuple[Stage, Stage]] = {}
    for key, item in made.stage.items():
        moved = item
        for name, _, _ in item.controls():
            if name in ("fader_db", "attenuator_db") and not key.startswith("channel"):
                steps = item.control_range(name).positions
                moved = moved.with_control(name, float(random.choice(steps[np.isfinite(steps)])))
        changes[key] = (item, moved)
    solved = evaluate(made.with_changes(changes))
    seats = {each.stage: each.level for each in solved.seats}
    aimed = {
        key: (
            made.stage[key],
            made.stage[key].with_fields(
                target_spl_db=figure(f"{level + random.uniform(-0.4, 0.4):.1f} dB SPL")
            ),
        )
        for key, level in seats.items()
    }
    return made.with_changes(aimed)
