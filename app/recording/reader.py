"""Read a recording in a thread of its own: progress is told, and it can be stopped."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, QThread, Signal

from engine.signals import Programme, SignalError, read_programme


class _Work(QThread):
    progress = Signal(float)

    def __init__(self, path: Path, parent: QObject) -> None:
        super().__init__(parent)
        self.path = path
        self.programme: Programme | None = None
        self.reason = ""

    def run(self) -> None:
        try:
            self.programme = read_programme(self.path, self._tell)
        except (SignalError, OSError) as reason:
            self.reason = str(reason)

    def _tell(self, share: float) -> bool:
        self.progress.emit(share)
        return not self.isInterruptionRequested()


class Reader(QObject):
    """Reads one recording at a time; a new one stops the one before."""

    progress = Signal(float)  # share read, 0 to 1
    done = Signal(object, object)  # path, programme
    failed = Signal(object, str)  # path, why in plain words
    stopped = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._work: _Work | None = None

    @property
    def is_reading(self) -> bool:
        return self._work is not None

    def read(self, path: Path) -> None:
        """Begin to read `path`."""
        self.stop()
        work = _Work(path, self)
        work.progress.connect(self.progress)
        work.finished.connect(lambda: self._finished(work))
        self._work = work
        work.start(QThread.Priority.LowPriority)

    def stop(self) -> None:
        """Stop reading and wait until it has."""
        if (work := self._work) is not None:
            self._work = None
            work.requestInterruption()
            work.wait()
            self.stopped.emit()

    def _finished(self, work: _Work) -> None:
        is_latest = work is self._work
        if is_latest:
            self._work = None
            if work.reason:
                self.failed.emit(work.path, work.reason)
            elif work.programme is not None:
                self.done.emit(work.path, work.programme)
        work.deleteLater()
