"""The digests that a sheet carries, so that paper and file can be told to belong together."""

from __future__ import annotations

import hashlib
import json
from typing import Any

from engine.project import HEADER_KEY, Header, Project

from .plain import PLACE_KEYS, plain


def digest(project: Project) -> str:
    """Ten hex digits that change with any stage, link, figure or control, not with places on the grid or titles."""
    figures = set(Header.figure_specs())
    return _digest(
        {
            HEADER_KEY: {name: value for name, value in plain(project.header).items() if name in figures},
            "stages": {stage.id: _without(plain(stage), PLACE_KEYS) for stage in project.stages},
            "links": {link.id: plain(link) for link in project.links},
        }
    )


def settings_digest(project: Project) -> str:
    """Ten hex digits that change with where any control stands, and with nothing else."""
    return _digest(
        {stage.id: {name: setting.value for name, _, setting in stage.controls()} for stage in project.stages}
    )


def _without(content: dict[str, Any], keys: frozenset[str]) -> dict[str, Any]:
    return {key: value for key, value in content.items() if key not in keys}


def _digest(content: object) -> str:
    canonical = json.dumps(
        content, sort_keys=True, separators=(",", ":"), ensure_ascii=False, allow_nan=False
    )
    return hashlib.sha256(canonical.encode("utf-8")).hexdigest()[:10]
