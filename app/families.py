"""The kinds of stage by family, in the order in which a signal meets them."""

from __future__ import annotations

from collections.abc import Mapping

from engine.stages import KINDS, Stage

_SIGNAL_ORDER = ("Sources", "Inputs", "Mixing", "Processing", "Digital", "Lines", "Outputs", "Places")


def families() -> Mapping[str, tuple[type[Stage], ...]]:
    """Kinds by family; a family unknown here comes last."""
    found: dict[str, list[type[Stage]]] = {family: [] for family in _SIGNAL_ORDER}
    for kind in KINDS.values():
        found.setdefault(kind.family, []).append(kind)
    return {family: tuple(kinds) for family, kinds in found.items() if kinds}


def kind_of(stage: type[Stage]) -> str:
    """The name a kind is stored under."""
    return str(stage.model_fields["kind"].default)
