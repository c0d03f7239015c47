"""What the settings sheet says, before it is laid out: every control of every stage, as marked on its panel."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

from app import words
from engine.project import Project
from engine.stages import ControlRange, ControlSpec, Setting, Stage
from engine.stages.panel import marking


@dataclass(frozen=True)
class SettingLine:
    """One control: what it is called, where to set it in its panel's words, the same in its unit, who may move it."""

    control: str
    panel: str
    value: str
    state: str


@dataclass(frozen=True)
class StageSettings:
    """One stage's controls in signal order; `rack` is empty where no place is given."""

    stage: str
    name: str
    rack: str
    count: int
    lines: tuple[SettingLine, ...]

    @property
    def called(self) -> str:
        """The stage, and how many alike it stands for."""
        return f"{self.name}, {self.count} alike" if self.count > 1 else self.name


def in_signal_order(project: Project, only: Sequence[str] | None = None) -> list[StageSettings]:
    """Every stage that has a control, as the signal meets them; `only` these stages where given."""
    chosen = project.topology.order if only is None else only
    found = [stage_settings(project.stage[key]) for key in chosen]
    return [each for each in found if each.lines]


def by_rack(project: Project) -> list[tuple[str, list[StageSettings]]]:
    """The same stages by rack and place, racks in natural order; those without a place last, under ""."""
    racks: dict[str, list[StageSettings]] = {}
    for each in sorted(in_signal_order(project), key=lambda settings: _natural(settings.rack)):
        racks.setdefault(rack_of(each.rack), []).append(each)
    return sorted(racks.items(), key=lambda rack: (not rack[0], _natural(rack[0])))


def rack_of(place: str) -> str:
    """The rack in a place such as "Rack 2, unit 14": all ahead of the comma."""
    return place.split(",", 1)[0].strip()


def stage_settings(stage: Stage) -> StageSettings:
    """One stage's controls as lines; a switch with one position only is nothing to set."""
    controls = ((spec, stage.control_range(name), setting) for name, spec, setting in stage.controls())
    lines = tuple(setting_line(*each) for each in controls if len(each[1].choices) != 1)
    return StageSettings(stage.id, stage.name, (stage.rack or "").strip(), stage.count, lines)


def setting_line(spec: ControlSpec, ranged: ControlRange, setting: Setting) -> SettingLine:
    """One control as a line; the value is left out where the panel says the same."""
    panel = marking(spec, ranged, setting)
    value = value_text(spec, ranged, setting)
    return SettingLine(spec.label, panel, "" if value == panel else value, setting.state)


def value_text(spec: ControlSpec, ranged: ControlRange, setting: Setting) -> str:
    """A control's value in its unit, to the precision its steps can be set; empty for a plain switch."""
    if setting.value is None or not spec.unit:
        return ""
    places = step_places(ranged.step)
    number = words.number(setting.value, places, signed=spec.unit.startswith("dB"))
    return words.with_unit(number, spec.unit)


def step_places(step: float) -> int:
    """The decimals of a step: 0 for 1 dB, 1 for 0.5 dB."""
    text = f"{step:.3f}".rstrip("0")
    return len(text.split(".")[1])


def _natural(text: str) -> tuple[tuple[int, int, str], ...]:
    """A sort key by which "unit 9" comes before "unit 14"."""
    parts = re.findall(r"\d+|\D+", text.casefold())
    return tuple((0, int(part), "") if part.isdigit() else (1, 0, part) for part in parts)
