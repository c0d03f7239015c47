"""What is declared can be read: figures, controls and options of a stage, a link or the project as numbers and words."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from functools import cache
from typing import Any, Literal, Self, TypeVar, get_args

from pydantic import BaseModel, ConfigDict, model_validator

from engine.figures import Figure, FigureError, Parsed, parse
from engine.sections.base import Number

from .assumed import alternatives
from .declare import ControlRange, ControlSpec, FigureSpec, OptionSpec, Setting

Otherwise = TypeVar("Otherwise", float, None, Number)
Side = Literal["low", "mid", "high"]


@dataclass(frozen=True)
class Values:
    """A stage's figures and controls as base-unit numbers, each a float or an array [batch, 1].

    `values["gain_db"]` is a figure's amount or a control's value; `values["rated_power_w.load_ohm"]` the condition it
    was stated at. `tag("noise.reference")` and `tag("noise.weighting")` are words; None where the sheet did not say.
    Figures given several times are numbered: "rated_power_w.0", "rated_power_w.1".
    """

    numbers: Mapping[str, Number]
    tags: Mapping[str, str] = field(default_factory=dict)

    def __getitem__(self, name: str) -> Number:
        return self.numbers[name]

    def __contains__(self, name: str) -> bool:
        return name in self.numbers

    def get(self, name: str, default: Otherwise) -> Number | Otherwise:
        return self.numbers.get(name, default)

    def tag(self, name: str) -> str | None:
        return self.tags.get(name)

    def replaced(self, numbers: Mapping[str, Number], tags: Mapping[str, str] | None = None) -> Values:
        """The same values with some numbers (and words) put in their place."""
        return Values({**self.numbers, **numbers}, {**self.tags, **(tags or {})})


class Declared(BaseModel):
    """Something with a name whose figures, controls and options are declared. Frozen; unknown fields are kept."""

    model_config = ConfigDict(frozen=True, extra="allow", allow_inf_nan=False)

    @property
    def called(self) -> str:
        """How messages name it."""
        return str(getattr(self, "name", ""))

    @classmethod
    def figure_specs(cls) -> Mapping[str, FigureSpec]:
        return _specs(cls)[0]

    @classmethod
    def control_specs(cls) -> Mapping[str, ControlSpec]:
        return _specs(cls)[1]

    @classmethod
    def option_specs(cls) -> Mapping[str, OptionSpec]:
        return _specs(cls)[2]

    @classmethod
    def field_place(cls, name: str) -> int:
        """Where a field stands among the others, smaller first; fields of one place stand as declared."""
        return 0

    def in_use(self, name: str) -> bool:
        """Whether a figure or control counts with the options as they are; what does not is neither shown nor read."""
        return True

    def figures(self) -> Iterator[tuple[str, FigureSpec, Figure]]:
        """The figures that are given and in use: name (numbered where there may be many), spec, figure."""
        for name, spec in self.figure_specs().items():
            if not self.in_use(name):
                continue
            given = getattr(self, name)
            if spec.many:
                for index, each in enumerate(given):
                    yield f"{name}.{index}", spec, each
            elif given is not None:
                yield name, spec, given

    def controls(self) -> Iterator[tuple[str, ControlSpec, Setting]]:
        """The controls in use, in signal order: name, spec, where each stands."""
        for name, spec in self.control_specs().items():
            if self.in_use(name):
                yield name, spec, getattr(self, name)

    def control_range(self, name: str) -> ControlRange:
        """A control's ends and steps, read from the figures that hold them."""
        spec = self.control_specs()[name]

        def number(end: float | str) -> float:
            if isinstance(end, float | int):
                return float(end)
            given = getattr(self, end)
            return parse(given.text, self.figure_specs()[end].quantity).amount

        return ControlRange(
            number(spec.low),
            number(spec.high),
            number(spec.step),
            spec.off_at_low,
            self.control_choices(name),
        )

    def control_choices(self, name: str) -> tuple[tuple[str, float], ...]:
        """The named positions of a switch; a kind may derive them from its figures."""
        return self.control_specs()[name].choices

    def values(self, side: Side = "mid") -> Values:
        """All figures and controls as base-unit numbers and words.

        `side` "low" and "high" take the lower or upper end of typed intervals and of what a sheet leaves unsaid;
        "mid" takes the amount as typed, and the noisier meaning of what is unsaid.
        """
        numbers: dict[str, Number] = {}
        tags: dict[str, str] = {}
        for name, spec, given in self.figures():
            parsed = parse(given.text, spec.quantity)
            put_parsed(numbers, tags, name, parsed)
            if side != "mid":
                end = parsed.low if side == "low" else parsed.high
                numbers[name] = parsed.amount if end is None else end
            for choice in alternatives(parsed, spec):
                chosen = choice[0] if side == "low" else choice[-1]
                numbers[name] = numbers[name] * chosen.factor
                numbers.update({f"{name}.{key}": amount for key, amount in chosen.numbers.items()})
                tags.update({f"{name}.{key}": word for key, word in chosen.tags.items()})
        for name, _, setting in self.controls():
            numbers[name] = float("-inf") if setting.value is None else setting.value
        return Values(numbers, tags)

    def unsaid(self) -> Iterator[tuple[str, FigureSpec, Figure, str]]:
        """Figures that leave something open: name, spec, figure, and what it may have meant in words."""
        for name, spec, given in self.figures():
            parsed = parse(given.text, spec.quantity)
            for choice in alternatives(parsed, spec):
                yield name, spec, given, f"{choice[0].says} or {choice[-1].says}"
            if parsed.low is not None and parsed.high is not None:
                yield name, spec, given, "anything in the range given"

    def with_control(self, name: str, value: float | None) -> Self:
        """The same stage with one control moved; a person's own panel marking held for the old position only."""
        setting: Setting = getattr(self, name)
        panel = setting.panel if value == setting.value else None
        return self.with_fields(**{name: setting.model_copy(update={"value": value, "panel": panel})})

    def with_fields(self, **changes: Any) -> Self:
        """The same stage with some fields changed, validated again."""
        return type(self).model_validate({**dict(self), **changes})

    @model_validator(mode="after")
    def _figures_can_be_read(self) -> Self:
        for name, spec in self.figure_specs().items():
            if getattr(self, name) is None and not spec.optional:
                raise ValueError(f"{spec.label} of {self.called} is missing: give it, such as {spec.typical}")
        for _name, spec, given in self.figures():
            try:
                parse(given.text, spec.quantity)
            except FigureError as reason:
                raise ValueError(f"{spec.label} of {self.called}: {reason}") from None
        return self

    @model_validator(mode="after")
    def _controls_are_in_range(self) -> Self:
        for name, spec, setting in self.controls():
            ends = self.control_range(name)
            if setting.value is None:
                if not ends.off_at_low:
                    raise ValueError(f"{spec.label} of {self.called} cannot be off: give a number")
            elif ends.choices:
                if not any(abs(setting.value - value) < 1e-6 for _, value in ends.choices):
                    names = ", ".join(f"{value:g} ({label})" for label, value in ends.choices)
                    raise ValueError(
                        f"{spec.label} of {self.called} stands at {setting.value:g}: it has {names}"
                    )
            elif not ends.low - 1e-6 <= setting.value <= ends.high + 1e-6:
                raise ValueError(
                    f"{spec.label} of {self.called} stands at {setting.value:g} {spec.unit}: "
                    f"it goes from {ends.low:g} to {ends.high:g} {spec.unit}".rstrip()
                )
        return self


def put_parsed(numbers: dict[str, Number], tags: dict[str, str], name: str, parsed: Parsed) -> None:
    """Put one parsed figure into `numbers` and `tags` under its own name."""
    numbers[name] = parsed.amount
    for condition, amount in parsed.at.items():
        numbers[f"{name}.{condition}"] = amount
    if parsed.reference is not None:
        tags[f"{name}.reference"] = parsed.reference
    if parsed.weighting is not None:
        tags[f"{name}.weighting"] = parsed.weighting
    tags[f"{name}.unit"] = parsed.unit


Specs = tuple[dict[str, FigureSpec], dict[str, ControlSpec], dict[str, OptionSpec]]


@cache
def _specs(kind: type[Declared]) -> Specs:
    found: Specs = ({}, {}, {})
    makers = (("figure", FigureSpec), ("control", ControlSpec), ("option", OptionSpec))
    fields = sorted(kind.model_fields.items(), key=lambda field: kind.field_place(field[0]))
    for name, declared in fields:
        extra = declared.json_schema_extra
        if not isinstance(extra, dict):
            continue
        for place, (key, maker) in enumerate(makers):
            if key in extra:
                content: Any = extra[key]
                found[place][name] = maker(**{**content, "name": name})
                if key == "figure" and type(None) in get_args(declared.annotation):
                    # A typical value to start with, yet it may be left empty.
                    found[0][name] = replace(found[0][name], optional=True)
    return found
