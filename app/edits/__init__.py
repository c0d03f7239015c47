"""What a hand can do to a project, as pure functions from a project to `Changes`; no Qt here.

Every function leaves the project alone and raises `LinkError` or ValueError, in plain words, where the result could
not be. `app.document` pushes the changes; mouse, touch, keyboard and clipboard share them.
"""

from __future__ import annotations

from .arrange import move, move_into, tidy_added
from .build import (
    add_ahead,
    add_behind,
    add_link,
    add_stage,
    branch_from,
    insert_on_link,
    lead_into,
)
from .clipboard import copy_text, duplicate, paste
from .draft import Draft, added_stages, reason
from .remove import delete
from .settings import (
    rename,
    set_control,
    set_count,
    set_figure,
    set_header,
    set_option,
    set_panel,
    set_place,
    set_state,
)

__all__ = [
    "Draft",
    "add_ahead",
    "add_behind",
    "add_link",
    "add_stage",
    "added_stages",
    "branch_from",
    "copy_text",
    "delete",
    "duplicate",
    "insert_on_link",
    "lead_into",
    "move",
    "move_into",
    "paste",
    "reason",
    "rename",
    "set_control",
    "set_count",
    "set_figure",
    "set_header",
    "set_option",
    "set_panel",
    "set_place",
    "set_state",
    "tidy_added",
]  # fmt: skip
