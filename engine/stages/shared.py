"""What several kinds declare alike: output forms, level switches, noise figures, the spectrum of a source."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray

from engine.bands import WEIGHTINGS, Axis
from engine.figures import Figure, format_db
from engine.sections.base import NEVER, Domain, Emission, Number
from engine.sections.noise import ein_without_source, noise_total, white_total
from engine.spectra import SPECTRA, band_shares
from engine.units import SINE_CREST_DB, T_20C_K, power_from_db

from .declare import Setting, option
from .declared import Values

Array = NDArray[np.float64]

Form = Literal["push-pull", "cross-coupled", "transformer", "impedance-balanced", "unbalanced"]
FORMS = ("push-pull", "cross-coupled", "transformer", "impedance-balanced", "unbalanced")
Spectrum = Literal["pink", "speech", "white", "own bands", "test tone"]
Signal = Literal["analogue", "digital"]


def form_option(default: Form = "push-pull") -> Any:
    """How a balanced output is built."""
    return option(
        "Output form", default, choices=FORMS,
        help="What one leg to an unbalanced input does: push-pull loses 6 dB of level and of clip point, cross-coupled keeps the "
        "level and loses 6 dB of clip point, transformer and impedance-balanced lose nothing.",
    )  # fmt: skip


def signal_option() -> Any:
    """Whether the stage stands in an analogue or in a digital path."""
    return option(
        "Signal", "analogue", choices=("analogue", "digital"),
        help="Analogue: volts, with the impedances, noise and maximum levels below. Digital: inside a digital mixer or processor, "
        "floating-point, so that nothing clips or hisses but its converters.",
    )  # fmt: skip


def domain_of(signal: Signal) -> Domain:
    """The domain a signal option means."""
    return Domain.DIGITAL if signal == "digital" else Domain.ANALOGUE


def spectrum_option(default: Spectrum = "pink") -> Any:
    """How a source's programme is spread over the bands."""
    return option(
        "Spectrum", default, choices=SPECTRA,
        help="Pink: equal power per octave, usual for music. Speech: normal vocal effort of ANSI S3.5. Own bands: the levels typed "
        "below. Test tone: a sine at the project's test frequency, whatever the crest factor says.",
    )  # fmt: skip


def emission(
    axis: Axis, spectrum: Spectrum, power: Number, crest_db: Number, own_levels_db: Sequence[Number] = (),
    weighting: str | None = None,
) -> Emission:  # fmt: skip
    """What a source of total `power` sends out. A test tone is a sine: its sine-scaled peak is its level.

    With `weighting` "A" or "C" the `power` was read through that weighting.
    """
    shares = band_shares(spectrum, axis.tone_hz, own_levels_db)
    if weighting in WEIGHTINGS:
        heard = axis.spread(shares)[..., :-1] * power_from_db(WEIGHTINGS[weighting](axis.f_hz[:-1]))
        power = power / (heard @ axis.flat_weight[:-1])[..., None]
    crest = SINE_CREST_DB if spectrum == "test tone" else np.asarray(crest_db, dtype=float)
    return Emission(axis.spread(shares) * power, power_from_db(crest - SINE_CREST_DB))


#: Figures of a stage that a digital one has no use for.
ANALOGUE_ONLY = frozenset(
    {
        "max_v",
        "max_output_v",
        "noise",
        "summing_noise",
        "residual",
        "nominal_v",
        "meter_zero_v",
        "z_in_ohm",
        "z_out_ohm",
    }
)


@dataclass(frozen=True)
class Electrical:
    """What a stage that may be digital has as an analogue one: clip point, what its noise refers to, impedances."""

    clip_v2: Number = NEVER
    references_v2: Mapping[str, Number] = field(default_factory=dict)
    z_in_ohm: Number = NEVER
    z_out_ohm: Number = 0.0

    @classmethod
    def of(cls, values: Values, largest: str) -> Electrical:
        """Read from the figures in use; `largest` names the maximum level. A digital stage has none of them."""
        if largest not in values:
            return cls()
        max2 = np.asarray(values[largest], dtype=float) ** 2
        nominal2 = np.asarray(values["nominal_v"], dtype=float) ** 2
        return cls(max2, {"nominal": nominal2, "max": max2}, values["z_in_ohm"], values["z_out_ohm"])


def nominal_above_maximum(name: str, values: Values, largest: str) -> Iterator[str]:
    """A nominal level above the largest clean one: it would make an S/N above the dynamic range."""
    if largest in values and np.any(np.asarray(values["nominal_v"]) > np.asarray(values[largest])):
        yield f"{name} has a nominal level above its maximum level: its S/N would be above its dynamic range"


def numbered(values: Values, name: str) -> list[Number]:
    """The amounts of a figure given several times."""
    found: list[Number] = []
    while f"{name}.{len(found)}" in values:
        found.append(values[f"{name}.{len(found)}"])
    return found


def stated_noise(
    axis: Axis, values: Values, name: str, reference_v2: Mapping[str, Number], *, otherwise: Number = 0.0
) -> Number:
    """The white spectrum of a noise figure, a level or a ratio re one of `reference_v2`; `otherwise` where none is given."""
    if name not in values:
        return otherwise
    stated = f"{name}.reference_v"
    total = noise_total(
        values[name],
        values.tag(f"{name}.reference"),
        reference_v2,
        stated_v=values.get(stated, None),
    )
    return white_total(axis, total, values.tag(f"{name}.weighting"))


def stated_ein(axis: Axis, values: Values, name: str, *, otherwise: Number = 0.0) -> Number:
    """The spectrum of an EIN figure without its source's thermal part; `otherwise` where none is given."""
    if name not in values:
        return otherwise
    return ein_without_source(
        axis,
        values[name],
        values.tag(f"{name}.weighting"),
        values.get(f"{name}.source_ohm", 0.0),
        values["temperature_k"],
    )


def drop_choices(full: str, drops: Sequence[Figure]) -> tuple[tuple[str, float], ...]:
    """The positions of a level switch: full, and each drop as its figure is typed."""
    return (
        (full, 0.0),
        *((f"−{drop.text.lstrip('-−+ ')}", float(place)) for place, drop in enumerate(drops, start=1)),
    )


def marked_db(setting: Setting, unit: str = "dB") -> str:
    """Where a control in dB stands, for a block's second line."""
    if setting.value is None:
        return "off"
    text = format_db(setting.value, unit)
    return f"+{text}" if setting.value > 0.0 and not text.startswith("+") else text


def at_room_temperature(values: Values) -> Values:
    """Values that know a temperature: the project's, or 20 °C for a stage on its own."""
    return values if "temperature_k" in values else values.replaced({"temperature_k": T_20C_K})
