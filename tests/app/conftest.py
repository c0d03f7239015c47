"""Fixtures that the tests of the whole window share."""

from __future__ import annotations

from tests.app.window_hand import answers, window

__all__ = ["answers", "window"]
