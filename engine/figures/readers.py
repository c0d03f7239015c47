"""Readers of the figures that say more than a number and a unit: references, weightings, conditions, ratios."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping

from . import grammar
from .errors import FigureError
from .parse import Parsed, number_with_unit, read_plain
from .quantity import FOOT_M, INCH_M, QUANTITIES, V_0DBU, Quantity

Reader = Callable[[str, Quantity], Parsed]
_N = grammar.NUMBER.pattern
_AT = r"\s*(?:@|at|into|in|with|/|,|from|re|source|Rs=?|load)?\s*"
_OHMS = re.compile(rf"{_AT}({_N})\s*(k|M)?ohm(?:\s*(?:source|load|balanced))?", re.IGNORECASE)
_HERTZ = re.compile(rf"{_AT}({_N})\s*(k)?Hz", re.IGNORECASE)
_GAIN_AT = re.compile(
    rf"\s*(?:@|at)\s*(?:max(?:imum)?\s*gain\s*)?({_N})\s*dB(?:\s*(?:of\s*)?gain)?", re.IGNORECASE
)
_TIMES = re.compile(rf"^(?:x\s*({_N})|({_N})\s*(?:x|V/V|times))$", re.IGNORECASE)
_COLON = re.compile(rf"^({_N}|inf|∞)\s*:\s*({_N})$", re.IGNORECASE)
_SCALE = {"k": 1e3, "K": 1e3, "M": 1e6}


def _take(pattern: re.Pattern[str], text: str) -> tuple[float | None, str]:
    """A condition's number (scaled by its prefix), and the text without it."""
    found = pattern.search(text)
    if found is None:
        return None, text
    prefix = found.group(2) if pattern.groups > 1 else None
    number = grammar.to_number(found.group(1)) * _SCALE.get(prefix or "", 1.0)
    return number, (text[: found.start()] + " " + text[found.end() :]).strip(" ,;")


def _nothing_left(left: str) -> None:
    if left.strip(" ,;().@"):
        raise FigureError(f"has {left!r} behind it, which says nothing here")


def _positive(value: float, what: str) -> float:
    if not value > 0.0:
        raise FigureError(f"is stated at {what} {value:g}, which must be above 0")
    return value


def _gain(text: str, sort: Quantity) -> Parsed:
    if found := _TIMES.match(text):
        ratio = grammar.to_number(found.group(1) or found.group(2))
        return Parsed(sort.name, 20.0 * math.log10(_positive(ratio, "a ratio of")), "x")
    return read_plain(text, sort)


def _crest(text: str, sort: Quantity) -> Parsed:
    ratio = _colon_ratio(text)
    if ratio is None and (found := _TIMES.match(text)):
        ratio = grammar.to_number(found.group(1) or found.group(2))
    if ratio is not None:
        return Parsed(sort.name, 20.0 * math.log10(_positive(ratio, "a ratio of")), "x")
    return read_plain(text, sort)


def _colon_ratio(text: str) -> float | None:
    found = _COLON.match(text)
    if found is None:
        return None
    if found.group(1).lower() in ("inf", "∞"):
        return math.inf
    return grammar.to_number(found.group(1)) / _positive(grammar.to_number(found.group(2)), "a ratio to")


def _ratio(text: str, sort: Quantity) -> Parsed:
    ratio = _colon_ratio(text)
    if ratio is None and (found := _TIMES.match(text)):
        ratio = grammar.to_number(found.group(1) or found.group(2))
    if ratio is not None:
        return Parsed(sort.name, ratio, ":1")
    return read_plain(text, sort)


def _voltage(text: str, sort: Quantity) -> Parsed:
    """Volts and levels, and watts into a load: V = sqrt(P R)."""
    power = QUANTITIES["power"]
    if re.search(r"[\d\s]k?m?W\b", text) and _OHMS.search(text):
        load, rest = _take(_OHMS, text)
        watts, _, left = number_with_unit(rest, power)
        _nothing_left(left)
        return Parsed(
            sort.name,
            math.sqrt(_positive(watts, "a power of") * _positive(load or 0.0, "a load of")),
            "W",
            at={"load_ohm": load or 0.0},
        )
    if re.search(r"dBm", text, re.IGNORECASE):
        text = re.sub(r"\(?\s*(?:in|into|@|/)?\s*600\s*ohm\)?", "", text)
    amount, unit, left = number_with_unit(re.sub(r"(?i)\b(?:rms|sine)\b", "", text).strip(), sort)
    _nothing_left(left)
    return Parsed(sort.name, amount, unit)


def _voltage_at_frequency(text: str, sort: Quantity) -> Parsed:
    hertz, rest = _take(_HERTZ, text)
    found = _voltage(rest, sort)
    if hertz is None:
        return Parsed(sort.name, found.amount, found.unit, missing=("frequency_hz",))
    return Parsed(
        sort.name, found.amount, found.unit, at={"frequency_hz": _positive(hertz, "a frequency of")}
    )


def _power_at_load(text: str, sort: Quantity) -> Parsed:
    text = re.sub(r"(?i)(?<=\d)\s*w\s*(?=\d)", " W @ ", text)
    text = re.sub(rf"(@\s*{_N})\s*$", r"\1 ohm", text)
    load, rest = _take(_OHMS, text)
    if re.search(r"V(?:rms)?\b", rest) and load is not None:
        volts = _voltage(rest, QUANTITIES["voltage"]).amount
        return Parsed(sort.name, volts**2 / _positive(load, "a load of"), "V", at={"load_ohm": load})
    watts, unit, left = number_with_unit(rest, sort)
    _nothing_left(
        re.sub(r"(?i)\b(?:per channel|continuous|rms|burst|FTC|EIA|both channels driven)\b", "", left)
    )
    if load is None:
        return Parsed(sort.name, watts, unit, missing=("load_ohm",))
    return Parsed(sort.name, watts, unit, at={"load_ohm": _positive(load, "a load of")})


def _tap(text: str, sort: Quantity) -> Parsed:
    found = re.search(rf"\s*(?:@|at|on)\s*({_N})\s*V", text)
    rest = text if found is None else text[: found.start()] + text[found.end() :]
    watts, unit, left = number_with_unit(rest, sort)
    _nothing_left(left)
    at = {} if found is None else {"line_v": _positive(grammar.to_number(found.group(1)), "a line of")}
    return Parsed(sort.name, watts, unit, at=at)


def _mic_sensitivity(text: str, sort: Quantity) -> Parsed:
    """mV/Pa, dBV/Pa, or dB re 1 V/µbar: 1 Pa is 10 µbar, so 20 dB are added (C01)."""
    bar = re.search(
        r"(?i)[,(]?\s*(?:\(?0 dB\s*=\s*|re\.?\s*)?1\s*V\s*/\s*(?:µ|u)?bar\)?|/\s*(?:µ|u)bar", text
    )
    pascal = re.search(r"(?i)[,(]?\s*(?:\(?0 dB\s*=\s*|re\.?\s*)1\s*V\s*/\s*Pa\)?", text)
    found = bar or pascal
    rest = text if found is None else text[: found.start()] + " " + text[found.end() :]
    rest = re.sub(r"(?i)(?<=[\ddBV])\s*(?:@|at)?\s*1\s*kHz", "", rest).strip()
    amount, unit, left = number_with_unit(rest, sort)
    _nothing_left(left)
    if bar is not None:
        return Parsed(sort.name, amount * 10.0, "dB re 1 V/µbar", reference="1 µbar")
    if unit in ("dB", "dBV") and pascal is None:
        return Parsed(sort.name, amount, unit, missing=("reference",))
    return Parsed(sort.name, amount, unit, reference="1 Pa")


def _resistance_per_length(text: str, sort: Quantity) -> Parsed:
    found = re.search(r"(?i)\b(loop|both conductors|one[- ]way|per conductor|single)\b", text)
    rest = text if found is None else text[: found.start()] + text[found.end() :]
    rest = re.sub(r"ohm\s+per\s+", "ohm/", re.sub(r"ohm\s*/\s*", "ohm/", rest))
    amount, unit, left = number_with_unit(rest.strip(), sort)
    _nothing_left(left)
    if found is None:
        return Parsed(sort.name, amount, unit, missing=("reference",))
    loop = found.group(1).lower() in ("loop", "both conductors")
    return Parsed(sort.name, amount, unit, reference="loop" if loop else "one-way")


def _length(text: str, sort: Quantity) -> Parsed:
    if found := re.match(rf"^({_N})\s*(?:'|ft)\s*({_N})\s*(?:\"|in)$", text):
        feet, inches = (grammar.to_number(part) for part in found.groups())
        return Parsed(sort.name, feet * FOOT_M + inches * INCH_M, "ft")
    return read_plain(text, sort)


def _area(text: str, sort: Quantity) -> Parsed:
    """Square millimetres, or AWG n: d = 0.127 mm * 92^((36-n)/39) (ASTM B258)."""
    if found := re.match(rf"(?i)^(?:AWG\s*({_N}|0{{2,4}})|({_N}|0{{2,4}})\s*AWG)$", text):
        typed = found.group(1) or found.group(2)
        gauge = 1.0 - len(typed) if re.fullmatch(r"0+", typed) else grammar.to_number(typed)
        return Parsed(sort.name, math.pi / 4.0 * (0.127 * 92.0 ** ((36.0 - gauge) / 39.0)) ** 2, "AWG")
    return read_plain(text, sort)


def _temperature(text: str, sort: Quantity) -> Parsed:
    if found := re.match(rf"(?i)^({_N})\s*°?\s*(F|K)$", text):
        number = grammar.to_number(found.group(1))
        kelvin = found.group(2).upper() == "K"
        return Parsed(
            sort.name, number - 273.15 if kelvin else (number - 32.0) / 1.8, "K" if kelvin else "°F"
        )
    return read_plain(text, sort)


def _spl(text: str, sort: Quantity) -> Parsed:
    if found := re.match(rf"^({_N})\s*(m|µ)?Pa$", text):
        pascal = grammar.to_number(found.group(1)) * {"m": 1e-3, "µ": 1e-6}.get(found.group(2) or "", 1.0)
        return Parsed(
            sort.name, 20.0 * math.log10(_positive(pascal, "a pressure of") / 20e-6), "Pa", weighting="flat"
        )
    return read_plain(re.sub(r"(?i)\bdB\s*SPL\b|\bSPL\b", "dB", text).replace("dB dB", "dB"), sort)


def _self_noise(text: str, sort: Quantity) -> Parsed:
    """Self-noise, or S/N re 94 dB SPL: self-noise = 94 - S/N (C03)."""
    weighting, rest = grammar.take_weighting(text)
    ratio = re.search(r"(?i)\bS\s*/\s*N\b|\bSNR\b|\bsignal[- ]to[- ]noise\b", rest)
    if ratio is not None:
        rest = rest[: ratio.start()] + rest[ratio.end() :]
    rest = re.sub(
        r"(?i)\b(?:re|ref\.?)?\s*94\s*dB\s*SPL|\bSPL\b|\bequivalent\b|\bre\s+1\s*Pa\b", "", rest
    ).strip(" ,")
    amount, unit, left = number_with_unit(rest, sort)
    _nothing_left(left)
    value = 94.0 - amount if ratio is not None else amount
    return Parsed(sort.name, value, unit, weighting=weighting, missing=() if weighting else ("weighting",))


_REFERENCES = (
    (r"rated(?:\s*(?:power|output))?|full\s*(?:power|output)|maximum\s*power", "rated"),
    (r"1\s*W(?:att)?(?:\s*/\s*\d+\s*ohm)?", "1 W"),
    (r"peak(?:\s*(?:power|output))?", "peak"),
    (r"max(?:imum)?(?:\s*(?:out(?:put)?|level))?|full\s*scale|0\s*dBFS", "max"),
    (r"nominal(?:\s*(?:out(?:put)?|level))?", "nominal"),
)
_BEHIND_RE = re.compile(
    rf"(?i)\b(?:re|ref\.?|rel\.?(?:\s*to)?|below|referred\s*to)\s*:?\s*(?:(?P<level>{_N})\s*(?P<unit>dBu|dBV|dBm|m?V)\b|(?P<word>[\w /]+))"
)
_RATIO_WORDS = re.compile(
    r"(?i)\bS\s*/\s*N\b|\bSNR\b|\bsignal[- ]to[- ]noise\b|\bresidual(?:\s*noise)?\b|\bnoise\b|[<>]"
)


def _noise(text: str, sort: Quantity) -> Parsed:
    """An absolute level of noise, or an S/N ratio with what it refers to (C13, C16)."""
    weighting, rest = grammar.take_weighting(text)
    rest = _RATIO_WORDS.sub("", rest).strip(" ,:")
    missing = () if weighting else ("weighting",)
    behind = _BEHIND_RE.search(rest)
    head = rest if behind is None else rest[: behind.start()].strip(" ,")
    amount, unit, left = number_with_unit(head, sort)
    if unit != "dB":
        _nothing_left(left if behind is None else f"{left} {behind.group()}".strip())
        return Parsed(sort.name, amount, unit, reference="level", weighting=weighting, missing=missing)
    _nothing_left(left)
    amount = abs(amount)
    if behind is None:
        return Parsed(sort.name, amount, unit, weighting=weighting, missing=("reference", *missing))
    if behind.group("level"):
        volts = number_with_unit(f"{behind.group('level')} {behind.group('unit')}", QUANTITIES["voltage"])[0]
        return Parsed(
            sort.name,
            amount,
            unit,
            reference="stated",
            weighting=weighting,
            at={"reference_v": volts},
            missing=missing,
        )
    word = behind.group("word").strip()
    if found := re.match(rf"^({_N})\s*(k)?W\s*(?:/|@|into|in)?\s*({_N})\s*ohm$", word):
        watts = grammar.to_number(found.group(1)) * _SCALE.get(found.group(2) or "", 1.0)
        load = grammar.to_number(found.group(3))
        if watts != 1.0:
            volts = math.sqrt(_positive(watts, "a power of") * _positive(load, "a load of"))
            return Parsed(
                sort.name,
                amount,
                unit,
                reference="stated",
                weighting=weighting,
                at={"reference_v": volts},
                missing=missing,
            )
    for pattern, name in _REFERENCES:
        if re.fullmatch(pattern, word, re.IGNORECASE):
            return Parsed(sort.name, amount, unit, reference=name, weighting=weighting, missing=missing)
    raise FigureError(
        f"refers to {word!r}, which is unknown: say rated, 1 W, peak, max, nominal, or a level such as +4 dBu"
    )


def _ein(text: str, sort: Quantity) -> Parsed:
    """EIN with its source resistance, weighting and the gain it was taken at (C08, C09)."""
    weighting, rest = grammar.take_weighting(text)
    rest = re.sub(r"(?i)\bEIN\b", "", rest)
    at: dict[str, float] = {}
    gain, rest = _take(_GAIN_AT, rest)
    source, rest = _take(_OHMS, rest)
    if source is None and re.search(r"(?i)\bshort(?:ed)?\b", rest):
        source, rest = 0.0, re.sub(r"(?i)\b(?:input\s*)?short(?:ed)?\b", "", rest)
    rest = re.sub(r"(?i)\b(?:at\s*)?max(?:imum)?\s*gain\b", "", rest).strip(" ,;@()")
    amount, unit, left = number_with_unit(rest, sort)
    _nothing_left(left)
    if source is not None:
        at["source_ohm"] = source
    if gain is not None:
        at["gain_db"] = gain
    missing = (*(() if weighting else ("weighting",)), *(() if source is not None else ("source_ohm",)))
    return Parsed(sort.name, amount, unit, weighting=weighting, at=at, missing=missing)


def _dynamic_range(text: str, sort: Quantity) -> Parsed:
    weighting, rest = grammar.take_weighting(re.sub(r"(?i)\bAES\s*-?17\b|[<>]", "", text))
    amount, unit, left = number_with_unit(rest.strip(), sort)
    _nothing_left(left)
    return Parsed(sort.name, amount, unit, weighting=weighting, missing=() if weighting else ("weighting",))


_ALIGNMENTS = {"ebur68": ("0 dBu", 18.0), "smpterp155": ("+4 dBu", 20.0)}
_FS_PAIR = re.compile(rf"(?i)^({_N})\s*dBFS\s*(?:=|@|at|is|:|->)\s*(.+)$")
_FS_PAIR_TURNED = re.compile(rf"(?i)^(.+?)\s*(?:=|@|at|is|:|->)\s*({_N})\s*dBFS$")


def _full_scale(text: str, sort: Quantity) -> Parsed:
    """The level at 0 dBFS, from any pair of levels (C11), or by the name of an alignment (EBU R 68, SMPTE RP 155)."""
    name = re.sub(r"[\s\-.]", "", text).lower()
    if name in _ALIGNMENTS:
        level, above_db = _ALIGNMENTS[name]
        return Parsed(
            sort.name, _voltage(level, sort).amount * 10.0 ** (above_db / 20.0), "dBu", reference=text
        )
    if found := _FS_PAIR.match(text):
        dbfs, level = grammar.to_number(found.group(1)), found.group(2)
    elif found := _FS_PAIR_TURNED.match(text):
        dbfs, level = grammar.to_number(found.group(2)), found.group(1)
    else:
        return _voltage(text, sort)
    paired = _voltage(level, sort)
    return Parsed(sort.name, paired.amount * 10.0 ** (-dbfs / 20.0), paired.unit)


def _loudspeaker_sensitivity(text: str, sort: Quantity) -> Parsed:
    """dB SPL at 1 m for 1 W or for 2.83 V (C21)."""
    watt = re.search(r"(?i)[@,(]?\s*(?:1\s*W(?:att)?\s*(?:[/,@]?\s*1?\s*m)?|/\s*W\s*/\s*m)\)?", text)
    volt = re.search(r"(?i)[@,(]?\s*2[.,]8\d*\s*V\s*(?:[/,@]?\s*1?\s*m)?\)?", text)
    found = volt or watt
    rest = text if found is None else text[: found.start()] + " " + text[found.end() :]
    rest = re.sub(r"(?i)\bSPL\b|[@,]?\s*\b1\s*m\b", "", rest).strip(" ,@/")
    amount, unit, left = number_with_unit(rest, sort)
    _nothing_left(left)
    if found is None:
        return Parsed(sort.name, amount, unit, missing=("reference",))
    return Parsed(sort.name, amount, unit, reference="2.83 V" if volt else "1 W")


def _ambient(text: str, sort: Quantity) -> Parsed:
    if found := re.match(rf"(?i)^(NC|NR)\s*-?\s*({_N})$", text):
        return Parsed(
            sort.name,
            abs(grammar.to_number(found.group(2))),
            found.group(1).upper(),
            reference=found.group(1).upper(),
        )
    weighting, rest = grammar.take_weighting(text)
    amount, unit, left = number_with_unit(re.sub(r"(?i)\bSPL\b", "", rest).strip(), sort)
    _nothing_left(left)
    return Parsed(
        sort.name, amount, unit, reference="A" if weighting == "A" else "flat", weighting=weighting or "flat"
    )


def _directivity(text: str, sort: Quantity) -> Parsed:
    """Q, or the directivity index in dB: Q = 10^(DI/10)."""
    rest = re.sub(r"(?i)^(?:Q|DI)\s*=?\s*", "", text)
    if found := re.match(rf"(?i)^({_N})\s*dB$", rest):
        return Parsed(sort.name, 10.0 ** (grammar.to_number(found.group(1)) / 10.0), "dB")
    if re.match(r"(?i)^DI", text):
        raise FigureError("is a directivity index without dB")
    return read_plain(rest, sort)


def _dbfs(text: str, sort: Quantity) -> Parsed:
    return read_plain(re.sub(r"(?i)\b(?:rms|AES\s*-?17)\b", "", text).strip(), sort)


READERS: Mapping[str, Reader] = {
    "gain": _gain, "crest_factor": _crest, "ratio": _ratio, "compression_ratio": _ratio,
    "voltage": _voltage, "sensitivity": _voltage, "line_voltage": _voltage, "voltage_at_frequency": _voltage_at_frequency,
    "power_at_load": _power_at_load, "tap": _tap, "mic_sensitivity": _mic_sensitivity,
    "resistance_per_length": _resistance_per_length, "length": _length, "area": _area, "temperature": _temperature,
    "spl": _spl, "self_noise": _self_noise, "noise": _noise, "ein": _ein, "dynamic_range": _dynamic_range,
    "full_scale": _full_scale, "loudspeaker_sensitivity": _loudspeaker_sensitivity, "ambient": _ambient,
    "directivity": _directivity, "dbfs": _dbfs,
}  # fmt: skip

__all__ = ["READERS", "V_0DBU"]
