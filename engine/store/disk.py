"""The only code that writes a project file, and the code that reads one."""

from __future__ import annotations

import glob
import os
import secrets
import stat
import time
from contextlib import suppress
from pathlib import Path

from engine.project import Project

from .errors import StoreError
from .opening import from_text
from .text import MAX_BYTES, to_text

UNFINISHED_S = 60.0  # a temporary file this old is nobody's any more


def read(path: Path) -> tuple[Project, tuple[str, ...]]:
    """The project in a file, and notes: see `from_text`. Raises `StoreError`, or OSError where it cannot be read."""
    path = Path(path)
    found = path.stat()
    if not stat.S_ISREG(found.st_mode):
        raise StoreError(f"{path.name} is not a file")
    if found.st_size > MAX_BYTES:
        raise StoreError(f"{path.name} is {found.st_size:,} bytes long: a project has at most {MAX_BYTES:,}")
    with path.open("rb") as file:
        content = file.read(MAX_BYTES + 1)
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as reason:
        raise StoreError(f"{path.name} is not a project: byte {reason.start} is no UTF-8 text") from None
    return from_text(text)


def write(path: Path, project: Project) -> None:
    """Write a project to a file, whole or not at all.

    The text goes to a temporary file beside the target (a link is followed and kept), to the disk, and then into the
    target's place with its permissions. Raises OSError or `StoreError`; the old file then stands as it was.
    """
    content = to_text(project).encode("utf-8")
    target = Path(os.path.realpath(path))
    old = _status(target)
    if old is not None and not os.access(target, os.W_OK):
        raise PermissionError(13, "it is write-protected", str(path))
    draft = target.with_name(f".{target.name[:200]}.{secrets.token_hex(4)}.part")
    handle = os.open(draft, os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0), 0o666)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        if old is not None:
            draft.chmod(stat.S_IMODE(old.st_mode))
            _keep_owner(draft, old)
        draft.replace(target)
    except BaseException:
        with suppress(OSError):
            draft.unlink()
        raise
    _settle(target.parent)
    _clear_unfinished(target)


def _clear_unfinished(target: Path) -> None:
    """Take away what earlier writes of this file left when their process was killed."""
    with suppress(OSError):
        for draft in target.parent.glob(f".{glob.escape(target.name[:200])}.*.part"):
            if time.time() - draft.stat().st_mtime > UNFINISHED_S:
                draft.unlink()


def _status(target: Path) -> os.stat_result | None:
    try:
        return target.stat()
    except FileNotFoundError:
        return None


def _keep_owner(draft: Path, old: os.stat_result) -> None:
    """Give a file back to who owned it, where we may."""
    if hasattr(os, "chown") and (draft.stat().st_uid, draft.stat().st_gid) != (old.st_uid, old.st_gid):
        with suppress(OSError):
            os.chown(draft, old.st_uid, old.st_gid)


def _settle(folder: Path) -> None:
    """Ask for the folder's entry to reach the disk too; not every system can."""
    with suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)
