"""Chains for the scenarios: stages of the shelf by the figures a person has, and nothing hidden in between.

What a scenario does not mention is taken out of the way: `line` stands for any line-level source behind no impedance and
without noise; `bare` takes loads and output impedances out of a stage.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import pairwise
from typing import Any

from engine.figures import Figure
from engine.outcome import Outcome, evaluate
from engine.project import Header, Link, Project
from engine.stages import KINDS, Setting, Stage, template

#: ±0.05 dB on pure arithmetic, on a number given to a hundredth.
DB = 0.055
#: The same on a number given to a tenth.
TENTH = 0.1
#: ±0.5 dB where a weighting conversion is used.
WEIGHTED = 0.5
#: 2 % on volts and watts.
SHARE = 0.02

SILENT = "-200 dBu"
NO_OHM = "1 µohm"
NO_LOAD = "1000 M"


def stage(kind: str, id: str, **fields: Any) -> Stage:
    """A stage of the shelf: figures as text (several as a list), controls as numbers (None is off), options as they are."""
    maker = KINDS[kind]
    given: dict[str, Any] = {}
    for name, value in fields.items():
        if name not in maker.model_fields:
            raise TypeError(f"{kind} has no {name}")
        if name in maker.control_specs():
            given[name] = Setting(value=None if value is None else float(value))
        elif name in maker.figure_specs() and isinstance(value, str):
            given[name] = Figure(text=value, origin="sheet")
            if maker.figure_specs()[name].many:
                given[name] = (given[name],)
        elif name in maker.figure_specs() and isinstance(value, list):
            given[name] = tuple(Figure(text=text, origin="sheet") for text in value)
        else:
            given[name] = value
    return template(kind, id, id, **given)


def bare(kind: str, id: str, **fields: Any) -> Stage:
    """A stage that loads nothing and is loaded by nothing."""
    known = KINDS[kind].figure_specs()
    ends = {name: text for name, text in (("z_in_ohm", NO_LOAD), ("z_out_ohm", NO_OHM)) if name in known}
    return stage(kind, id, **{**ends, **fields})


def line(
    id: str = "source", level: str = "+4 dBu", *, crest: str = "12 dB", most: str = "+40 dBu", **fields: Any
) -> Stage:
    """A line-level source of some level and crest factor."""
    quiet = {"nominal_v": level, "max_output_v": most, "crest_db": crest, "noise": SILENT, "lower_by_db": []}
    return bare("line_source", id, **{**quiet, **fields})


def amplifier(id: str = "amp", **fields: Any) -> Stage:
    """A power amplifier whose input stage and output impedance are out of the way."""
    usual = {
        "rated_power_w": ["500 W @ 8 ohm"], "gain_db": None, "sensitivity_v": None, "max_input_v": None,
        "damping_factor": None, "noise": SILENT,
    }  # fmt: skip
    return bare("power_amplifier", id, **{**usual, **fields})


def loudspeaker(id: str = "box", **fields: Any) -> Stage:
    """A loudspeaker of 8 ohm."""
    return stage("loudspeaker", id, **{"z_ohm": "8 ohm", **fields})


def seat(id: str = "seat", **fields: Any) -> Stage:
    """A seat in free field."""
    return stage("seat", id, **fields)


def project(
    stages: Sequence[Stage], links: Sequence[str], distances: Mapping[str, str] | None = None, **wiring: str
) -> Project:
    """Stages in columns of their own; links as "one > two" or "one.port > two.port", with distances by link.

    Inverse square alone: the scenarios leave air absorption out. `wiring` names a target's wiring.
    """
    placed = [each.with_fields(column=column) for column, each in enumerate(stages)]
    made = []
    for text in links:
        start, _, end = (part.strip() for part in text.partition(">"))
        source, _, output = start.partition(".")
        target, _, port = end.partition(".")
        distance = (distances or {}).get(text)
        made.append(
            Link(
                id=text, source=source, output=output or "out", target=target, input=port or "in",
                wiring=wiring.get(target, "balanced"),
                distance_m=Figure(text=distance, origin="measured") if distance else None,
            )
        )  # fmt: skip
    return Project(header=Header(air="left out"), stages=tuple(placed), links=tuple(made))


def chain(*stages: Stage, distance: str | None = None, **wiring: str) -> Project:
    """Stages one after another; `distance` is that of the last link, from loudspeaker to seat."""
    links = [f"{a.id} > {b.id}" for a, b in pairwise(stages)]
    return project(stages, links, {links[-1]: distance} if distance else None, **wiring)


def solved(*stages: Stage, distance: str | None = None, **wiring: str) -> Outcome:
    """A chain, solved."""
    return evaluate(chain(*stages, distance=distance, **wiring))


def moved(outcome: Outcome, stage_id: str, **controls: float) -> Outcome:
    """The same project with some controls of a stage moved, solved again."""
    before = outcome.project.stage[stage_id]
    after = before
    for name, value in controls.items():
        after = after.with_control(name, value)
    return evaluate(outcome.project.with_changes({stage_id: (before, after)}), outcome)
