"""Proposals: the program works out the settings, says why, offers the alternatives, and says clearly when there are none."""

from __future__ import annotations

from .impossible import Impossible, Relief
from .proposal import Proposal, Standing, Touched
from .wishes import ALIGNMENTS, Alignment, Wishes
from .working import propose

__all__ = [
    "ALIGNMENTS",
    "Alignment",
    "Impossible",
    "Proposal",
    "Relief",
    "Standing",
    "Touched",
    "Wishes",
    "propose",
]
