"""Work that was not saved when its window died: where it is kept, and how it is found again.

Each window has a slot in the recovery folder: an ordinary project file, a note of the file it belongs to, and a lock
that the window holds while it lives. What nobody holds is orphaned and offered at the next start.
"""

from __future__ import annotations

import hashlib
import logging
import os
import secrets
import time
from contextlib import suppress
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from engine import store
from engine.project import Project

from . import places
from .file_lock import FileLock

UNFINISHED_S = 60.0  # a temporary file this old is nobody's any more

_log = logging.getLogger(__name__)


class Slot:
    """Where one window keeps its unsaved work."""

    def __init__(self) -> None:
        name = f"{os.getpid()}-{secrets.token_hex(4)}"
        self._folder = places.recovery()
        self._file = self._folder / f"{name}{store.SUFFIX}"
        lock = FileLock.take(_lock_of(self._file))
        assert lock is not None, "a name of its own has no other holder"
        self._lock = lock

    @property
    def file(self) -> Path:
        """The recovery file; there is none while nothing is unsaved."""
        return self._file

    def keep(self, project: Project, origin: Path | None) -> None:
        """Write the work down. Raises OSError; what was kept before then stands."""
        self._folder.mkdir(parents=True, exist_ok=True)
        _note_origin(self._file, origin)
        store.write(self._file, project)

    def clear(self) -> None:
        """Nothing is unsaved any more."""
        _remove(self._file)

    def close(self) -> None:
        """The window ends in good order."""
        self.clear()
        self._lock.release()


@dataclass(frozen=True)
class Orphan:
    """Unsaved work of a window that is no more, held by us until `discard` or `release`."""

    file: Path
    origin: Path | None
    project: Project
    when: datetime
    lock: FileLock

    def saved(self) -> Project | None:
        """What the file it belongs to holds now; None where there is none or it cannot be read."""
        if self.origin is None:
            return None
        try:
            return store.read(self.origin)[0]
        except (OSError, store.StoreError):
            return None

    def discard(self) -> None:
        """Nobody wants it any more."""
        _remove(self.file)
        self.lock.release()

    def release(self) -> None:
        """Leave it for another time."""
        self.lock.release()


def orphans() -> list[Orphan]:
    """Unsaved work that nobody holds, the newest first. What equals its own file is cleared away unasked."""
    found: list[Orphan] = []
    for file in sorted(places.recovery().glob(f"*{store.SUFFIX}")):
        try:
            orphan = _adopt(file)
        except (OSError, store.StoreError) as reason:
            _log.warning("unsaved work in %s cannot be read: %s", file, reason)
            continue
        if orphan is not None:
            found.append(orphan)
    _sweep()
    return sorted(found, key=lambda orphan: orphan.when, reverse=True)


def _sweep() -> None:
    """Take away the locks of dead windows that had nothing unsaved, and files they did not come to finish."""
    for path in places.recovery().glob(".*.part"):
        with suppress(OSError):
            if time.time() - path.stat().st_mtime > UNFINISHED_S:
                path.unlink()
    for path in places.recovery().glob("*.lock"):
        if not path.with_suffix(store.SUFFIX).exists():
            with suppress(OSError):
                lock = FileLock.take(path)
                if lock is not None:
                    lock.release()


def _adopt(file: Path) -> Orphan | None:
    lock = FileLock.take(_lock_of(file))
    if lock is None:
        return None
    try:
        project, _ = store.read(file)
        when = datetime.fromtimestamp(file.stat().st_mtime).astimezone()
        origin = _read_origin(file)
    except BaseException:
        lock.release()
        raise
    orphan = Orphan(file, origin, project, when, lock)
    saved = orphan.saved()
    if saved is not None and saved.same_as(project):
        orphan.discard()
        return None
    return orphan


def _note_origin(file: Path, origin: Path | None) -> None:
    """Written beside and put in place whole, and only where it is another: a kill must not leave it empty."""
    if _origin_of(file).exists() and _read_origin(file) == origin:
        return
    beside = file.with_name(f".{file.stem}.origin.part")
    beside.write_text(str(origin or ""), encoding="utf-8")
    beside.replace(_origin_of(file))


def _read_origin(file: Path) -> Path | None:
    try:
        text = _origin_of(file).read_text(encoding="utf-8")
    except (OSError, UnicodeDecodeError):
        return None
    return Path(text) if text else None


def _lock_of(file: Path) -> Path:
    return file.with_suffix(".lock")


def _origin_of(file: Path) -> Path:
    return file.with_suffix(".origin")


def _remove(file: Path) -> None:
    for each in (file, _origin_of(file)):
        with suppress(OSError):
            each.unlink()


def hold(path: Path) -> FileLock | None:
    """Say that a window has this file open; None where another has. Raises OSError where that cannot be noted."""
    name = hashlib.sha256(os.path.realpath(path).encode("utf-8", "surrogateescape")).hexdigest()[:24]
    return FileLock.take(places.data() / "open" / f"{name}.lock")
