"""Published tables as data: `table(name)` gives one, each kept with its source in data/tables.json."""

from __future__ import annotations

import json
from functools import cache
from pathlib import Path
from typing import Any

FILE = Path(__file__).parent / "data" / "tables.json"


@cache
def _tables() -> Any:
    return json.loads(FILE.read_text(encoding="utf-8"))


def table(name: str) -> Any:
    """The values of a published table."""
    return _tables()[name]["values"]
