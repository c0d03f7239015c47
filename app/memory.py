"""What the window remembers from one start to the next: its place, its scheme, the files opened last."""

from __future__ import annotations

import json
import logging
import os
import secrets
from contextlib import suppress
from pathlib import Path
from typing import Any

from . import places

MOST_RECENT = 10

_log = logging.getLogger(__name__)


class Memory:
    """Small settings in one JSON file. What cannot be read is forgotten, what cannot be written is not remembered."""

    def __init__(self) -> None:
        self._file = places.data() / "window.json"
        self._content = self._read()

    def _read(self) -> dict[str, Any]:
        try:
            content = json.loads(self._file.read_text(encoding="utf-8"))
        except (OSError, ValueError, RecursionError):
            return {}
        return content if isinstance(content, dict) else {}

    def text(self, name: str, otherwise: str = "") -> str:
        """A remembered text."""
        found = self._content.get(name, otherwise)
        return found if isinstance(found, str) else otherwise

    def put(self, name: str, text: str) -> None:
        """Remember a text."""
        if self._content.get(name) != text:
            self._content[name] = text
            self._write()

    # -- recent files ----------------------------------------------------------------------------------------
    @property
    def recent(self) -> tuple[Path, ...]:
        """The files opened or saved last, the newest first."""
        found = self._content.get("recent")
        return tuple(Path(text) for text in found if isinstance(text, str)) if isinstance(found, list) else ()

    def note_recent(self, path: Path) -> None:
        """A file was opened or saved."""
        others = [each for each in self.recent if each != path]
        self._put_recent([path, *others][:MOST_RECENT])

    def forget_recent(self, path: Path | None = None) -> None:
        """Forget one file, or all of them."""
        self._put_recent([each for each in self.recent if path is not None and each != path])

    def _put_recent(self, paths: list[Path]) -> None:
        self._content["recent"] = [str(path) for path in paths]
        self._write()

    def _write(self) -> None:
        draft = self._file.with_name(f".{self._file.name}.{secrets.token_hex(4)}.part")
        try:
            self._file.parent.mkdir(parents=True, exist_ok=True)
            draft.write_text(json.dumps(self._content, indent=1, ensure_ascii=False), encoding="utf-8")
            os.replace(draft, self._file)  # noqa: PTH105 - one step on every system
        except (OSError, ValueError) as reason:
            _log.warning("the window's settings are not remembered: %s", reason)
            with suppress(OSError):
                draft.unlink()
