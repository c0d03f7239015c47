"""A stage on its own or in a row, with figures typed as text."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

from engine.figures import Figure
from engine.outcome import Outcome, evaluate
from engine.project import Header, Link, Project
from engine.sections.base import Domain
from engine.stages import KINDS, Setting, Stage, Values, template

SILENT = "-200 dBu unweighted"
NO_OHM = "1 µohm"
NO_LOAD = "1000 M"


def make(kind: str, id: str | None = None, **fields: Any) -> Stage:
    """A stage: figures as text, several as a list, controls as numbers (None is off), options as they are."""
    maker = KINDS[kind]
    given: dict[str, Any] = {}
    for name, value in fields.items():
        if name in maker.control_specs():
            given[name] = Setting(value=value)
        elif name in maker.figure_specs() and isinstance(value, str):
            given[name] = Figure(text=value)
        elif name in maker.figure_specs() and isinstance(value, list):
            given[name] = tuple(Figure(text=text) for text in value)
        else:
            given[name] = value
    return template(kind, id or kind, **given)


def line(level: str = "0 dBu", id: str = "source", **fields: Any) -> Stage:
    """A line source that is stiff, silent and cannot clip."""
    usual = {
        "nominal_v": level,
        "max_output_v": "+60 dBu",
        "z_out_ohm": NO_OHM,
        "noise": SILENT,
        "crest_db": "12 dB",
    }
    return make("line_source", id, **{**usual, **fields})


def end(id: str = "end") -> Stage:
    """An input that loads nothing and hisses nothing."""
    return make("feed", id, z_in_ohm=NO_LOAD, ein_v=None, max_input_v="+60 dBu")


def row(*stages: Stage, tone: str = "1 kHz", **distances: str) -> Project:
    """Stages one behind the other; a distance names the stage its link leads into."""
    placed = [stage.with_fields(column=place) for place, stage in enumerate(stages)]
    links = []
    for before, after in pairwise(placed):
        distance = distances.get(after.id)
        links.append(
            Link(
                id=f"{before.id}>{after.id}", source=before.id, output=before.outputs()[0].name, target=after.id,
                input=after.inputs()[0].name, distance_m=Figure(text=distance) if distance else None,
            )
        )  # fmt: skip
    return Project(header=Header(tone_hz=Figure(text=tone)), stages=tuple(placed), links=tuple(links))


def solved(*stages: Stage, **distances: str) -> Outcome:
    return evaluate(row(*stages, **distances))


def tone(frequency_hz: float, *stages: Stage, **distances: str) -> Outcome:
    """The same for a sine."""
    return evaluate(row(*stages, **distances), tone_hz=frequency_hz)


def source_for(domain: Domain) -> Stage:
    """Something that feeds an input of a domain."""
    kinds = {
        Domain.ACOUSTIC: "sound_source",
        Domain.ANALOGUE: "line_source",
        Domain.DIGITAL: "digital_source",
    }
    return make(kinds[domain], "source")


def numbers(stage: Stage) -> Values:
    """A stage's values at 20 °C."""
    return stage.values().replaced({"temperature_k": 293.15})
