"""Recordings in the window: from the menu, or dropped from outside onto a source of the path."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QEvent, QObject, QPointF
from PySide6.QtGui import QDragEnterEvent, QDropEvent
from PySide6.QtWidgets import QWidget

from .ask import Ask
from .document import Document
from .edits.recording import takes_recording
from .inks import Inks
from .path_view import PathView

KINDS = ("Recordings (*.wav *.flac *.ogg)",)
ENDINGS = (".wav", ".flac", ".ogg")


class Recordings(QObject):
    """Opens the recording panel; `panel` is made when first needed, for its chart takes long to load."""

    def __init__(self, document: Document, path: PathView, ask: Ask, window: QWidget) -> None:
        super().__init__(window)
        self._document, self._path, self._ask, self._window = document, path, ask, window
        self.inks: Inks = path.inks
        self.panel: QWidget | None = None
        path.setAcceptDrops(True)
        path.installEventFilter(self)

    def choose(self, *_: object) -> None:
        """Ask for a recording, and read it for the selected source."""
        folder = self._document.path.parent if self._document.path is not None else Path.home()
        chosen = self._ask.open_file("Read a recording", folder, KINDS)
        if chosen is not None:
            selected = [
                key for key in self._document.selection if takes_recording(self._document.project, key)
            ]
            self.read(chosen, selected[0] if selected else None)

    def read(self, path: Path, source: str | None = None) -> None:
        """Read a recording and show what it holds; `source` is the stage it is for."""
        from .recording import RecordingPanel

        if not isinstance(self.panel, RecordingPanel):
            self.panel = RecordingPanel(self._document, self.inks, self._window)
        self.panel.read(path, source)
        self.panel.show()
        self.panel.activateWindow()

    def close(self) -> None:
        """Stop reading and put the panel away."""
        if self.panel is not None:
            self.panel.close()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """A sound file over the path may be dropped on a source."""
        if event.type() == QEvent.Type.DragEnter and isinstance(event, QDragEnterEvent):
            if _recording_of(event) is not None:
                event.acceptProposedAction()
                return True
        elif event.type() == QEvent.Type.Drop and isinstance(event, QDropEvent):
            found = _recording_of(event)
            if found is not None:
                event.acceptProposedAction()
                self.read(found, self._source_at(event.position()))
                return True
        return False

    def _source_at(self, point: QPointF) -> str | None:
        key = self._path.hit(point.x(), point.y()).id
        return key if takes_recording(self._document.project, key) else None


def _recording_of(event: QDropEvent) -> Path | None:
    for url in event.mimeData().urls():
        path = Path(url.toLocalFile())
        if url.isLocalFile() and path.suffix.lower() in ENDINGS:
            return path
    return None
