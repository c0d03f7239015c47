"""Unsaved work reaches the recovery folder two seconds after it was changed, whether or not the hand rests."""

from __future__ import annotations

from PySide6.QtCore import QObject, QTimer, Signal

from engine.project import Project

from .document import Document
from .recovery import Slot

DELAY_MS = 2000


class Autosave(QObject):
    """Keeps a document's unsaved work in a recovery slot, and clears it when the work is saved."""

    failed = Signal(str)  # why unsaved work could not be kept; said once until it works again

    def __init__(self, document: Document, slot: Slot, parent: QObject | None = None) -> None:
        super().__init__(parent or document)
        self._document = document
        self._slot = slot
        self._kept: Project | None = None
        self._failing = False
        # Started only if idle: restarted by each change, it would wait as long as a hand keeps moving.
        self._timer = QTimer(self, singleShot=True, interval=DELAY_MS)
        self._timer.timeout.connect(self.keep_now)
        document.changed.connect(self._soon)
        document.file_changed.connect(self._file_changed)

    def _soon(self) -> None:
        if not self._timer.isActive():
            self._timer.start()

    def _file_changed(self) -> None:
        if not self._document.modified:
            self.keep_now()
        else:
            self._kept = None  # it may belong to another file from now on
            self._soon()

    def keep_now(self) -> bool:
        """Keep what is unsaved; says whether that worked."""
        self._timer.stop()
        if not self._document.modified:
            self._slot.clear()
            self._kept = None
            return True
        project = self._document.project
        if project is self._kept:
            return True
        try:
            self._slot.keep(project, self._document.path)
        except (OSError, ValueError) as reason:
            if not self._failing:
                self._failing = True
                self.failed.emit(str(reason))
            self._timer.start()
            return False
        self._kept, self._failing = project, False
        return True

    def close(self) -> None:
        """The document is done with, in good order."""
        self._timer.stop()
        self._document.changed.disconnect(self._soon)
        self._document.file_changed.disconnect(self._file_changed)
        self._slot.close()
