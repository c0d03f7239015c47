"""How a stage kind declares its figures, controls and options; shelf, card, sheets, help and JSON Schema read these."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray
from pydantic import BaseModel, ConfigDict, Field

from engine.figures import Figure

State = Literal["adjustable", "locked", "operator"]


class Setting(BaseModel):
    """Where a control stands. `value` is in the control's unit; None is off, minus infinity."""

    model_config = ConfigDict(frozen=True, extra="allow", allow_inf_nan=False)

    value: float | None
    state: State = "adjustable"
    panel: str | None = None  # the person's own panel marking, where it differs from the declared one


@dataclass(frozen=True)
class FigureSpec:
    """One data-sheet figure a stage asks for: see `figure`."""

    name: str
    label: str
    quantity: str
    help: str
    typical: str | None
    optional: bool
    many: bool = False
    references: tuple[str, ...] = ()


@dataclass(frozen=True)
class ControlSpec:
    """One thing a hand can set: see `control`. Ends and step are numbers or the names of figures that hold them."""

    name: str
    label: str
    unit: str
    low: float | str
    high: float | str
    step: float | str
    help: str
    typical: float | None
    choices: tuple[tuple[str, float], ...] = ()
    off_at_low: bool = False
    marking: str = "db"  # "db", "detent", "clock", "switch", "number"
    work_low: float | None = None  # working range of a fader
    work_high: float | None = None


@dataclass(frozen=True)
class OptionSpec:
    """A choice of how the stage is built (a law, an output form, a number of outputs): see `option`."""

    name: str
    label: str
    help: str
    choices: tuple[str, ...] = ()
    low: int = 1
    high: int = 64


@dataclass(frozen=True)
class ControlRange:
    """A control's ends and steps as numbers, after its figures have been read."""

    low: float
    high: float
    step: float
    off_at_low: bool
    choices: tuple[tuple[str, float], ...]

    @property
    def positions(self) -> NDArray[np.float64]:
        """All positions, ascending; minus infinity first where the low end is off."""
        if self.choices:
            return np.array(sorted(value for _, value in self.choices))
        count = round((self.high - self.low) / self.step)
        ladder = np.round(self.low + self.step * np.arange(count + 1), 9)
        return np.concatenate(([-np.inf], ladder)) if self.off_at_low else ladder

    def nearest(self, value: float) -> float:
        """The position nearest to `value`."""
        steps = self.positions
        if value == -np.inf:
            return float(steps[0])
        finite = steps[np.isfinite(steps)]
        return float(finite[np.argmin(np.abs(finite - value))])


def figure(
    label: str,
    quantity: str,
    typical: str | None = None,
    *,
    help: str,
    many: bool = False,
    references: tuple[str, ...] = (),
) -> Any:
    """Declare a figure. Without a typical value it is optional and starts empty.

    `help` says what it is, where it stands on a data sheet and what is usual. `many` figures are tuples.
    `references` are what an S/N without one may refer to, the quietest first.
    """
    spec = {"label": label, "quantity": quantity, "help": help, "typical": typical,
            "optional": typical is None, "many": many, "references": references}  # fmt: skip
    extra: dict[str, Any] = {"figure": spec}
    if many:
        texts = tuple(part.strip() for part in (typical or "").split(";") if part.strip())
        return Field(default=tuple(Figure(text=text) for text in texts), title=label, json_schema_extra=extra)
    default = None if typical is None else Figure(text=typical)
    return Field(default=default, title=label, description=help, json_schema_extra=extra)


def control(
    label: str,
    unit: str,
    low: float | str = 0.0,
    high: float | str = 1.0,
    step: float | str = 1.0,
    typical: float | None = 0.0,
    *,
    help: str,
    choices: tuple[tuple[str, float], ...] = (),
    off_at_low: bool = False,
    marking: str = "db",
    work: tuple[float, float] | None = None,
) -> Any:
    """Declare a control with its real steps. `work` is the range a hand should find a fader in."""
    spec = ControlSpec("", label, unit, low, high, step, help, typical, choices, off_at_low, marking,
                       *(work or (None, None)))  # fmt: skip
    extra: dict[str, Any] = {"control": asdict(spec)}
    return Field(default=Setting(value=typical), title=label, description=help, json_schema_extra=extra)


def switch(label: str, *, help: str, off: str = "out", on: str = "in", typical: bool = False) -> Any:
    """Declare a two-position switch; its values are 0 and 1."""
    return control(label, "", help=help, typical=float(typical), marking="switch",
                   choices=((off, 0.0), (on, 1.0)))  # fmt: skip


def option(
    label: str, default: Any, *, help: str, choices: tuple[str, ...] = (), low: int = 1, high: int = 64
) -> Any:
    """Declare how the stage is built. A change of an option may change its ports."""
    extra: dict[str, Any] = {"option": asdict(OptionSpec("", label, help, choices, low, high))}
    return Field(default=default, title=label, description=help, json_schema_extra=extra)
