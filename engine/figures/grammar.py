"""The small words of data sheets: numbers, weightings, references, conditions, taken out of a text one by one."""

from __future__ import annotations

import re
from dataclasses import dataclass

from .errors import FigureError

LONGEST_TEXT = 200

_PLAIN = str.maketrans({
    "\u2212": "-", "\u2013": "-", "\u2014": "-", "\u202f": " ", "\u00a0": " ", "\u2009": " ", "\u2007": " ",
    "μ": "µ", "Ω": "Ω", "×": "x", "∕": "/", "′": "'", "″": '"', "≈": " ", "~": " ",
})  # fmt: skip
_OHM = re.compile(r"(?<![A-Za-z])([kMmµ]?)\s?(?:Ω|ohms?)(?![A-Za-z])", re.IGNORECASE)
_SMALL_U = re.compile(r"(?<=[\d\s.])u(?=(?:V|ohm)\b|Vrms)")
_DIGITS = r"(?:\d+(?:[.,]\d+)?|[.,]\d+)(?:[eE][-+]?\d{1,3})?"
NUMBER = re.compile(rf"[-+]?\s?{_DIGITS}")
_CODED = re.compile(r"(?<![\w.,])(\d+)([kMR])(\d+)(?![\w])")  # 1k8, 2M2, 4R7

_WEIGHTINGS = (
    (re.compile(r"\(\s?A\s?\)|(?<=dB)A\b|\bA[- ]?(?:weighted|wtd\.?|weighting)|(?<=[\s,])A(?=[\s,]|$)", re.IGNORECASE), "A"),
    (re.compile(r"\b(?:CCIR|ITU-R)?[- ]?(?:BS\.?)?468(?:-\d)?\b|\(?\bq-?pk\b\)?", re.IGNORECASE), "468"),
    (re.compile(r"\bunweighted\b|\bflat\b|\blin(?:ear)?\b|\(Z\)|(?<=dB)Z\b|\b2\d\s?(?:Hz)?\s?(?:-|to|\.\.+|…)\s?2[02]\s?k(?:Hz)?\b"
                r"|\b2[02]\s?kHz(?:\s?(?:bandwidth|BW))?\b", re.IGNORECASE), "flat"),
)  # fmt: skip


def plain(text: str) -> str:
    """The text with one spelling for each sign. FigureError for an empty or endless one."""
    if not text.strip():
        raise FigureError("is empty: type a number with its unit")
    if len(text) > LONGEST_TEXT:
        raise FigureError(f"is {len(text)} characters long: type one figure, such as +4 dBu")
    clean = " ".join(text.translate(_PLAIN).split())
    clean = _OHM.sub(lambda found: f" {_prefix(found.group(1))}ohm", clean)
    clean = _SMALL_U.sub("µ", clean)
    scale = {"R": 1.0, "k": 1e3, "M": 1e6}
    return _CODED.sub(lambda m: f"{float(f'{m.group(1)}.{m.group(3)}') * scale[m.group(2)]:.10g} ohm", clean)


def _prefix(sign: str) -> str:
    return "k" if sign == "K" else sign


def take_weighting(text: str) -> tuple[str | None, str]:
    """The weighting a text names, and the text without it."""
    for pattern, name in _WEIGHTINGS:
        if found := pattern.search(text):
            return name, (text[: found.start()] + " " + text[found.end() :]).strip()
    return None, text


@dataclass(frozen=True)
class Amount:
    """A number with what stands right behind it: `rest` begins with the unit, if there is one."""

    number: float
    before: str
    rest: str


def take_number(text: str) -> Amount:
    """The first number of a text. FigureError where there is none."""
    found = NUMBER.search(text)
    if found is None:
        raise FigureError("has no number")
    return Amount(to_number(found.group()), text[: found.start()].strip(), text[found.end() :].strip())


def to_number(text: str) -> float:
    """A number as typed: a comma is a decimal comma."""
    return float(text.replace(" ", "").replace(",", "."))


_BETWEEN = re.compile(rf"^\s*({NUMBER.pattern})\s*(?:\.\.+|…|\bto\b|(?<=\d)\s?-\s?)\s*(\+?\s?{_DIGITS})(.*)$")
_PLUS_MINUS = re.compile(rf"(?:±|\+/-|\+-)\s?({_DIGITS})\s?(%|dB|[A-Za-zµ°²³/]*)")


def take_range(text: str) -> tuple[str, float, float, str] | None:
    """A typed interval "50...200 ohm": the two numbers and what stands behind, or None."""
    found = _BETWEEN.match(text)
    if found is None or re.match(r"\s?(?:Hz|k?Hz)", found.group(3)):
        return None
    return found.group(1), to_number(found.group(1)), to_number(found.group(2)), found.group(3).strip()


def take_plus_minus(text: str) -> tuple[float, str, str] | None:
    """A typed tolerance "±2 dB": number, unit, and the text without it, or None."""
    found = _PLUS_MINUS.search(text)
    if found is None:
        return None
    return (
        to_number(found.group(1)),
        found.group(2),
        (text[: found.start()] + " " + text[found.end() :]).strip(),
    )
