"""Proposals: the program works out the settings, says why, offers the alternatives, and says clearly when there are none."""

from __future__ import annotations

from .alternatives import Alternative, alternatives
from .impossible import Impossible, Relief
from .keep_level import LevelKeeper, keep_level
from .proposal import Proposal, Standing, Touched, standing
from .wishes import ALIGNMENTS, Alignment, Wishes
from .working import propose

__all__ = [
    "ALIGNMENTS",
    "Alignment",
    "Alternative",
    "Impossible",
    "LevelKeeper",
    "Proposal",
    "Relief",
    "Standing",
    "Touched",
    "Wishes",
    "alternatives",
    "keep_level",
    "propose",
    "standing",
]
