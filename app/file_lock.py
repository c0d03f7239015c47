"""A lock that ends with its process, however that ends: the system's own lock on an open file."""

from __future__ import annotations

import os
import sys
from contextlib import suppress
from pathlib import Path

if sys.platform == "win32":
    import msvcrt

    def _seize(handle: int) -> None:
        msvcrt.locking(handle, msvcrt.LK_NBLCK, 1)
else:
    import fcntl

    def _seize(handle: int) -> None:
        fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)


class FileLock:
    """A lock file held by this process. Made by `take`; another `take`, here or elsewhere, gets None meanwhile."""

    def __init__(self, path: Path, handle: int) -> None:
        self.path = path
        self._handle: int | None = handle

    @classmethod
    def take(cls, path: Path) -> FileLock | None:
        """Hold the lock; None where someone else does. Raises OSError where there can be no such file."""
        path.parent.mkdir(parents=True, exist_ok=True)
        while True:
            handle = os.open(path, os.O_RDWR | os.O_CREAT, 0o600)
            try:
                _seize(handle)
            except OSError:
                os.close(handle)
                return None
            if _is_still(path, handle):
                return cls(path, handle)
            os.close(handle)  # its last holder took the file away between our opening and seizing

    def release(self) -> None:
        """Let go, and take the lock file away."""
        if self._handle is None:
            return
        handle, self._handle = self._handle, None
        if sys.platform == "win32":
            os.close(handle)
            with suppress(OSError):
                self.path.unlink()
            return
        with suppress(OSError):
            self.path.unlink()
        os.close(handle)


def _is_still(path: Path, handle: int) -> bool:
    try:
        return os.path.samestat(os.fstat(handle), path.stat())
    except FileNotFoundError:
        return False
