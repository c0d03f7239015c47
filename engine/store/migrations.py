"""How older project files become today's: one step per version, on the raw JSON object.

A step must call no code that lives on elsewhere: that code will change, old files will not.
"""

from __future__ import annotations

from collections.abc import Callable
from copy import deepcopy
from typing import Any

Raw = dict[str, Any]

#: Step n turns version n into version n + 1.
MIGRATIONS: tuple[Callable[[Raw], Raw], ...] = ()

FORMAT_VERSION = len(MIGRATIONS) + 1


def upgrade(raw: Raw, version: int) -> Raw:
    """The raw object of a file of `version` (1 ... FORMAT_VERSION) as today's version; the one given is left alone."""
    if version == FORMAT_VERSION:
        return raw
    raised = deepcopy(raw)
    for step in MIGRATIONS[version - 1 :]:
        raised = step(raised)
    return raised
