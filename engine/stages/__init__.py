"""Every kind of stage, one file each. This module collects the folder; nothing else names a kind."""

from __future__ import annotations

import importlib
import pkgutil
from collections.abc import Mapping

from .base import Limiter, Meter, Port, Stage
from .declare import ControlRange, ControlSpec, FigureSpec, OptionSpec, Setting
from .declared import Declared, Values

__all__ = [
    "KINDS",
    "ControlRange",
    "ControlSpec",
    "Declared",
    "FigureSpec",
    "Limiter",
    "Meter",
    "OptionSpec",
    "Port",
    "Setting",
    "Stage",
    "Values",
    "collect",
    "template",
]  # fmt: skip

_NOT_KINDS = {"assumed", "base", "declare", "declared", "panel"}


def collect() -> Mapping[str, type[Stage]]:
    """Import every file of this folder and return its kinds by name, in shelf order."""
    for found in pkgutil.iter_modules(__path__):
        if found.name not in _NOT_KINDS:
            importlib.import_module(f"{__name__}.{found.name}")
    kinds = {str(kind.model_fields["kind"].default): kind for kind in _leaves(Stage)}
    return dict(sorted(kinds.items(), key=lambda item: (item[1].order, item[1].title)))


def _leaves(kind: type[Stage]) -> list[type[Stage]]:
    below = [leaf for each in kind.__subclasses__() for leaf in _leaves(each)]
    return below or ([kind] if kind is not Stage else [])


KINDS: Mapping[str, type[Stage]] = collect()


def template(kind: str, id: str, name: str | None = None, **fields: object) -> Stage:
    """A new stage of `kind` with its typical figures, every one a guess."""
    maker = KINDS[kind]
    return maker.model_validate({"id": id, "name": name or maker.title, **fields})
