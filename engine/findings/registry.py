"""The registry findings are looked for in."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from engine.outcome import Outcome

Severity = Literal["stop", "mend", "note"]
SEVERITIES: tuple[Severity, ...] = ("stop", "mend", "note")


@dataclass(frozen=True)
class Finding:
    """Something noticed. `message` gives the number first, then where; `mend` what to do about it."""

    severity: Severity
    code: str
    stage: str | None
    message: str
    mend: str = ""


Finder = Callable[["Outcome"], Iterator[Finding]]
REGISTRY: list[Finder] = []


def finder(look: Finder) -> Finder:
    """Register a function that yields findings of one code."""
    REGISTRY.append(look)
    return look
