"""The document: one project, one undo stack, the current outcome. Everything else listens.

`edit` is the only way to change the project. A change is checked before it is pushed, announced as one fact
(`changed`), and solved at most once a frame (`solved`).
"""

from __future__ import annotations

import weakref
from collections.abc import Iterable, Mapping
from pathlib import Path

from PySide6.QtCore import QObject, QTimer, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

from engine import store
from engine.outcome import Outcome, evaluate
from engine.project import Changes, Project, difference

from .fingerprint import fingerprint

FRAME_MS = 16


class Edit(QUndoCommand):
    """One thing done: what each changed item was before and is after. Never has a parent or children."""

    def __init__(self, document: Document, title: str, changes: Changes, gesture: object | None) -> None:
        super().__init__(title)
        self._document = weakref.ref(document)
        self.changes: dict[str, tuple[object, object]] = dict(changes)
        self.gesture = gesture

    def redo(self) -> None:
        document = self._document()
        if document is not None:
            document._apply(self.changes)

    def undo(self) -> None:
        document = self._document()
        if document is not None:
            document._apply({key: (after, before) for key, (before, after) in self.changes.items()})
            document.end_gesture()

    def id(self) -> int:
        # Never merged by the stack; said here too, or PySide keeps a reference to None each time it asks.
        return -1

    def take_in(self, changes: Changes) -> None:
        """Add later changes of the same gesture, keeping what was first before; back at the start: obsolete."""
        for key, (before, after) in changes.items():
            first = self.changes[key][0] if key in self.changes else before
            self.changes[key] = (first, after)
        self.changes = {key: pair for key, pair in self.changes.items() if pair[0] != pair[1]}
        self.setObsolete(not self.changes)


class Document(QObject):
    """A project that is being worked on, and the file it came from."""

    changed = Signal(object)  # changes: id -> (before, after), as they were applied; `project` is already new
    solved = Signal(
        object
    )  # outcome: at most once a frame, later than `changed`; once more when a gesture ends
    selection_changed = Signal(object)  # frozenset of the ids of stages and links
    file_changed = Signal()  # another path, or modified against saved

    def __init__(
        self, project: Project | None = None, path: Path | None = None, parent: QObject | None = None
    ) -> None:
        super().__init__(parent)
        self._project = project or Project()
        self._saved = self._project
        self._modified = False
        self._path = path
        self._fingerprint = fingerprint(path)
        self._selection: frozenset[str] = frozenset()
        self._outcome = evaluate(self._project)
        self._tried: Outcome | None = None
        self._gesture_number = 0
        self._gesture_open = False
        self._moving: Edit | None = None  # the undo entry of the open gesture
        self.undo_stack = QUndoStack(self)
        self._frame = QTimer(self, singleShot=True, interval=FRAME_MS)
        self._frame.timeout.connect(self._solve)

    # -- what stands -----------------------------------------------------------------------------------------
    @property
    def project(self) -> Project:
        """The project as it is now."""
        return self._project

    @property
    def outcome(self) -> Outcome:
        """The project as it was last solved: it has the stages of `project`, their levels up to one frame late.

        While `changed` is being announced it may lack a stage; listen to `solved` for levels.
        """
        return self._outcome

    @property
    def saved(self) -> Project:
        """The project as the file has it."""
        return self._saved

    @property
    def path(self) -> Path | None:
        """The file; None where it was never saved."""
        return self._path

    @property
    def modified(self) -> bool:
        """Whether the project differs from the saved one."""
        return self._modified

    @property
    def gesture_open(self) -> bool:
        """Whether a hand is moving something: scales keep still until it lets go."""
        return self._gesture_open

    # -- changing --------------------------------------------------------------------------------------------
    def edit(self, title: str, changes: Changes, gesture: object | None = None) -> bool:
        """Change the project; says whether anything changed.

        Edits with the same `gesture` become one undo entry until the gesture ends. Raises ValueError (`LinkError`
        for links), in plain words, where the result could not be; then nothing has changed.
        """
        changes = {key: pair for key, pair in changes.items() if pair[0] != pair[1]}
        if not changes:
            return False
        for key, (before, _) in changes.items():
            if self._project.item(key) != before:
                raise ValueError("This was changed in the meantime. Look again, then repeat it.")
        result = self._project.with_changes(changes)
        if _adds_or_takes_away(changes):
            self._tried = evaluate(result)  # a ring of passive stages shows only here
        token = None if gesture is None else (gesture, self._gesture_number)
        self._gesture_open = gesture is not None
        if self._moving is not None and token is not None and self._moving.gesture == token:
            # Not pushed to be merged: PySide keeps every merged command, and a long drag would keep its projects.
            self._moving.take_in(changes)
            self._apply(changes)
            if self._moving.isObsolete():
                self._moving = None
                self.undo_stack.undo()  # drops an obsolete entry without undoing it
            return True
        self._moving = None if token is None else Edit(self, title, changes, token)
        self.undo_stack.push(self._moving or Edit(self, title, changes, token))
        return True

    def end_gesture(self) -> None:
        """The hand lets go: what follows is an undo entry of its own, and the last value is solved now."""
        was_open, self._gesture_open = self._gesture_open, False
        self._moving = None
        self._gesture_number += 1
        if self._frame.isActive():
            self.flush()
        elif was_open:
            self.solved.emit(self._outcome)  # for what kept still while the hand moved

    def undo(self) -> None:
        """Take the last edit back."""
        self.undo_stack.undo()

    def redo(self) -> None:
        """Do the edit again that was taken back."""
        self.undo_stack.redo()

    def _apply(self, changes: Mapping[str, tuple[object, object]]) -> None:
        before = self._project
        self._announce(before.with_changes(changes), changes)  # type: ignore[arg-type]

    def _announce(self, project: Project, changes: Mapping[str, tuple[object, object]]) -> None:
        self._project = project
        gone = {key for key, (_, after) in changes.items() if after is None} & self._selection
        if gone:
            self._selection -= gone
        self.changed.emit(changes)
        if gone:
            self.selection_changed.emit(self._selection)
        self._note_modified()
        if not self._frame.isActive():  # a throttle: never restarted, or a flood would starve it
            self._frame.start()
        if _adds_or_takes_away(changes):
            self.flush()  # who selects a new stage next finds its levels

    # -- solving ---------------------------------------------------------------------------------------------
    def flush(self) -> None:
        """Solve now what waits for its frame."""
        if self._frame.isActive():
            self._frame.stop()
            self._solve()

    def _solve(self) -> None:
        tried, self._tried = self._tried, None
        if tried is not None and tried.project.same_as(self._project):
            self._outcome = tried
        else:
            self._outcome = evaluate(self._project, self._outcome)
        self.solved.emit(self._outcome)

    # -- selection -------------------------------------------------------------------------------------------
    @property
    def selection(self) -> frozenset[str]:
        """The ids of the selected stages and links."""
        return self._selection

    def select(self, ids: Iterable[str]) -> None:
        """Select what of `ids` is in the project."""
        chosen = frozenset(key for key in ids if key in self._project.stage or key in self._project.link)
        if chosen != self._selection:
            self._selection = chosen
            self.selection_changed.emit(chosen)

    # -- the file --------------------------------------------------------------------------------------------
    def load(self, project: Project, path: Path | None, saved: Project | None = None) -> None:
        """Put another project in place of this one, with nothing to undo.

        `saved` is what the file holds where `project` is newer: recovered work. Raises ValueError for a ring of
        passive stages; then the document is as it was.
        """
        tried = evaluate(project)
        if path is not None:
            path = path.absolute()
        self._fingerprint = fingerprint(path)
        self._path, self._saved = path, saved or project
        self._tried = tried
        self._gesture_number += 1
        self._gesture_open = False
        self._moving = None
        self.undo_stack.clear()
        self.select(())
        self._announce(project, difference(self._project, project))
        self.flush()
        self._note_modified(always=True)

    def save(self, path: Path | None = None) -> None:
        """Write the project to its file, or to another that is its file from now on.

        Raises OSError where that fails: then the old file and the state of the document are as they were.
        """
        target = path or self._path
        if target is None:
            raise ValueError("This project has no file yet: choose one with Save as.")
        target = target.absolute()
        self.end_gesture()
        store.write(target, self._project)
        self._path, self._saved = target, self._project
        self._fingerprint = fingerprint(target)
        self.undo_stack.setClean()
        self._note_modified(always=True)

    @property
    def changed_on_disk(self) -> bool:
        """Whether the file is no longer as it was read or written here. A file that is gone is not changed."""
        now = fingerprint(self._path)
        return now is not None and self._fingerprint is not None and now != self._fingerprint

    def _note_modified(self, *, always: bool = False) -> None:
        modified = not self._project.same_as(self._saved)
        if always or modified != self._modified:
            self._modified = modified
            self.file_changed.emit()


def _adds_or_takes_away(changes: Mapping[str, tuple[object, object]]) -> bool:
    return any(before is None or after is None for before, after in changes.values())
