"""What a hand is in the middle of: small state objects fed by press, move, release and cancel. No Qt here.

They ask a `Surface` what lies under the pointer, work out the edit that a release would make, and say what to show
meanwhile. Nothing is changed before the release; cancelling is dropping the object.
"""

from __future__ import annotations

from .base import Gesture, Ghost, Hit, Plan, Preview, Surface, Target
from .link_drag import LinkDrag, start_of_link
from .link_keys import LinkKeys
from .move_blocks import MoveBlocks
from .press import Press
from .rubber_band import RubberBand
from .shelf_drag import ShelfDrag

__all__ = [
    "Gesture",
    "Ghost",
    "Hit",
    "LinkDrag",
    "LinkKeys",
    "MoveBlocks",
    "Plan",
    "Press",
    "Preview",
    "RubberBand",
    "ShelfDrag",
    "Surface",
    "Target",
    "start_of_link",
]
