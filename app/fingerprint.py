"""Whether a file is still the same: a digest of its bytes."""

from __future__ import annotations

import hashlib
from pathlib import Path


def fingerprint(path: Path | None) -> str | None:
    """SHA-256 of a file's bytes; None where there is no file or it cannot be read."""
    if path is None:
        return None
    try:
        with path.open("rb") as file:
            return hashlib.file_digest(file, "sha256").hexdigest()
    except OSError:
        return None
