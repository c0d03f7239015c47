"""New, open, save and revert: what happens to the project's file, and what is asked on the way."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, Signal

from engine import store
from engine.project import Project

from . import recovery
from .ask import PROJECTS, Ask
from .document import Document
from .file_lock import FileLock
from .memory import Memory
from .recovery import Orphan

OPEN_ELSEWHERE = (
    "Another window has this file open. If both save, the later one wins and the other’s changes are lost. "
    "Close it there first, or open it here all the same and save under another name."
)
CHANGED_ELSEWHERE = (
    "The file was changed by someone else after it was opened here. Saving now replaces their changes with yours. "
    "To keep both, use Save as and another name."
)


class Files(QObject):
    """The document's file. Nothing unsaved is left without asking; what fails is told and changes nothing."""

    noted = Signal(str)  # worth knowing, nothing to decide
    opened = Signal()  # another project is shown

    def __init__(self, document: Document, ask: Ask, memory: Memory, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document, self._ask, self._memory = document, ask, memory
        self._held: FileLock | None = None
        if document.path is not None:
            self._held = self._claim(document.path, "Open all the same")[1]

    # -- leaving what is there -------------------------------------------------------------------------------
    def may_leave(self) -> bool:
        """Whether the project may be left: it is saved, gets saved, or need not be."""
        if not self._document.modified:
            return True
        answer = self._ask.save_first(self._document.project.header.name)
        return answer == "discard" or (answer == "save" and self.save())

    def close(self) -> None:
        """The window goes."""
        self._keep(None)

    # -- opening ---------------------------------------------------------------------------------------------
    def new(self, *_: object) -> bool:
        """Begin an empty project."""
        if not self.may_leave():
            return False
        self._keep(None)
        self._document.load(Project(), None)
        self.opened.emit()
        return True

    def open(self, path: Path | None = None) -> bool:
        """Open a project: the one given, or the one chosen."""
        path = path or self._ask.open_path(self._folder())
        if path is None:
            return False
        path = path.absolute()
        found = self._read(path)
        if found is None or not self.may_leave():
            return False
        may, lock = self._claim(path, "Open all the same")
        if not may:
            return False
        project, notes = found
        if not self._load(project, path):
            self._drop(lock)
            return False
        self._keep(lock)
        self._memory.note_recent(path)
        if notes:
            self.noted.emit(_notes(notes))
        return True

    def open_copy(self, path: Path) -> bool:
        """Open a shipped sample as a project of one's own, which has no file yet."""
        found = self._read(path)
        if found is None or not self.may_leave() or not self._load(found[0], None):
            return False
        self._keep(None)
        return True

    def recover(self, orphan: Orphan) -> bool:
        """Go on with work that was never saved; it belongs to its old file again and is unsaved."""
        origin = orphan.origin
        may, lock = self._claim(origin, "Open all the same") if origin is not None else (True, None)
        if not may or not self._load(orphan.project, origin, orphan.saved() or Project()):
            self._drop(lock)
            return False
        self._keep(lock)
        return True

    def revert(self, *_: object) -> bool:
        """Go back to what the file holds."""
        path = self._document.path
        if path is None:
            return False
        text = "All changes since it was last saved are lost. This cannot be undone."
        if self._document.modified and not self._ask.confirm(
            f"Go back to the saved {path.name}?", text, "Revert"
        ):
            return False
        found = self._read(path)
        return found is not None and self._load(found[0], path)

    def _read(self, path: Path) -> tuple[Project, tuple[str, ...]] | None:
        try:
            return store.read(path)
        except store.StoreError as reason:
            self._ask.tell(f"{path.name} cannot be opened", _sentence(str(reason)))
        except OSError as reason:
            self._ask.tell(f"{path.name} cannot be opened", why(reason))
            if isinstance(reason, FileNotFoundError):
                self._memory.forget_recent(path)
        return None

    def _load(self, project: Project, path: Path | None, saved: Project | None = None) -> bool:
        try:
            self._document.load(project, path, saved)
        except ValueError as reason:
            self._ask.tell("This project cannot be opened", _sentence(str(reason)))
            return False
        self.opened.emit()
        return True

    # -- saving ----------------------------------------------------------------------------------------------
    def save(self, *_: object) -> bool:
        """Save to the project's file, or ask for one."""
        path = self._document.path
        if path is None:
            return self.save_as()
        if self._document.changed_on_disk and not self._ask.confirm(
            f"{path.name} was changed elsewhere", CHANGED_ELSEWHERE, "Replace it"
        ):
            return False
        return self._write(path)

    def save_as(self, *_: object) -> bool:
        """Save to another file, which is the project's from now on."""
        name = self._document.project.header.name.replace("/", "-").replace("\\", "-")
        suggested = self._document.path or self._folder() / f"{name}{store.SUFFIX}"
        path = self._ask.save_path("Save the project", suggested, [PROJECTS])
        if path is None:
            return False
        path = (path if path.suffix else path.with_suffix(store.SUFFIX)).absolute()
        may, lock = self._claim(path, "Replace it")
        if not may or not self._write(path):
            self._drop(lock)
            return False
        self._keep(lock)
        return True

    def _write(self, path: Path) -> bool:
        try:
            self._document.save(path)
        except (OSError, ValueError) as reason:
            said = why(reason) if isinstance(reason, OSError) else _sentence(str(reason))
            self._ask.tell(
                f"{path.name} was not saved",
                f"{said}\n\nThe file is as it was. Your work is still here: use Save as and another place.",
            )
            return False
        self._memory.note_recent(path)
        return True

    # -- one window to a file --------------------------------------------------------------------------------
    def _claim(self, path: Path, yes: str) -> tuple[bool, FileLock | None]:
        """Whether this window may go on with a file, asking where another has it open; and the hold on it."""
        mine = self._document.path
        if self._held is not None and mine is not None and mine.resolve() == path.resolve():
            return True, self._held
        try:
            lock = recovery.hold(path)
        except OSError:
            return True, None  # nowhere to note it: better no warning than no work
        return lock is not None or self._ask.confirm(
            f"{path.name} is open elsewhere", OPEN_ELSEWHERE, yes
        ), lock

    def _keep(self, lock: FileLock | None) -> None:
        """This is the file from now on."""
        if self._held is not None and self._held is not lock:
            self._held.release()
        self._held = lock

    def _drop(self, lock: FileLock | None) -> None:
        """It did not come to that."""
        if lock is not None and lock is not self._held:
            lock.release()

    def _folder(self) -> Path:
        if self._document.path is not None:
            return self._document.path.parent
        return next((path.parent for path in self._memory.recent if path.parent.is_dir()), Path.home())


def why(reason: OSError) -> str:
    """Why the system would not, in words."""
    if isinstance(reason, FileNotFoundError):
        return "There is no such file or folder."
    if isinstance(reason, PermissionError):
        return "You are not allowed to read or write it there."
    if isinstance(reason, IsADirectoryError):
        return "It is a folder."
    return _sentence(reason.strerror or str(reason))


def _sentence(words: str) -> str:
    words = words[:1].upper() + words[1:]
    return words if words.endswith((".", "?", "!")) else f"{words}."


def _notes(notes: tuple[str, ...]) -> str:
    more = f" and {len(notes) - 1} more like it" if notes[1:] else ""
    return f"{notes[0]}{more}."
