"""Where files are: the only code that knows. What is shipped, and what belongs to the user.

In a source checkout the shipped folders stand beside the package; in a wheel they stand inside it.
"""

from __future__ import annotations

import os
import sys
from pathlib import Path

_PACKAGE = Path(__file__).resolve().parent
HOME_VARIABLE = "GAINWRIGHT_HOME"  # one folder for all that is the user's: tests, and a portable stick


def _shipped(name: str) -> Path:
    inside = _PACKAGE / name
    return inside if inside.is_dir() else _PACKAGE.parent / name


def resources() -> Path:
    """Folder of icons, faces, style and licence."""
    return _shipped("resources")


def fonts() -> Path:
    """Folder of the shipped faces."""
    return resources() / "fonts"


def icon() -> Path:
    """The program's icon, an SVG file."""
    return resources() / "gainwright.svg"


def sample_projects() -> list[Path]:
    """The shipped project files, the first one to show first."""
    first = "meeting_room.gainwright"
    return sorted(
        _shipped("sample_projects").glob("*.gainwright"), key=lambda path: (path.name != first, path.name)
    )


def data() -> Path:
    """Folder of the user's own settings: made by who writes there first."""
    return _user("data")


def recovery() -> Path:
    """Folder of autosaved projects that were not saved yet."""
    return _user("recovery")


def logs() -> Path:
    """Folder of the log and of crash reports."""
    return _user("logs")


def _user(part: str) -> Path:
    chosen = os.environ.get(HOME_VARIABLE)
    if chosen:
        return Path(chosen) / part
    home = Path.home()
    if sys.platform == "win32":
        return Path(os.environ.get("LOCALAPPDATA") or home / "AppData" / "Local") / "Gainwright" / part
    if sys.platform == "darwin":
        if part == "logs":
            return home / "Library" / "Logs" / "Gainwright"
        return home / "Library" / "Application Support" / "Gainwright" / part
    if part == "data":
        return _xdg("XDG_DATA_HOME", home / ".local" / "share") / "gainwright"
    return _xdg("XDG_STATE_HOME", home / ".local" / "state") / "gainwright" / part


def _xdg(variable: str, otherwise: Path) -> Path:
    """An XDG folder; the specification says to ignore a relative one."""
    given = Path(os.environ.get(variable, ""))
    return given if given.is_absolute() else otherwise
