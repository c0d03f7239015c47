"""A recording of the show's own programme: read beside the window, looked at, and used as a source."""

from .panel import RecordingPanel
from .reader import Reader

__all__ = ["Reader", "RecordingPanel"]
