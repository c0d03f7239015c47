"""What the tool has noticed: small functions, one finding each, in a registry. Each says how to mend it."""

from __future__ import annotations

import importlib
import pkgutil
from typing import TYPE_CHECKING

from .registry import REGISTRY, SEVERITIES, Finding, finder

if TYPE_CHECKING:
    from engine.outcome import Outcome

__all__ = ["Finding", "find", "finder"]

for _found in pkgutil.iter_modules(__path__):
    if _found.name != "registry":
        importlib.import_module(f"{__name__}.{_found.name}")


def find(outcome: Outcome) -> tuple[Finding, ...]:
    """Every finding of a solved project, the gravest first, then in signal order."""
    place = {key: index for index, key in enumerate(outcome.project.topology.order)}
    found = [each for look in REGISTRY for each in look(outcome)]
    return tuple(
        sorted(found, key=lambda f: (SEVERITIES.index(f.severity), place.get(f.stage or "", -1), f.code))
    )
