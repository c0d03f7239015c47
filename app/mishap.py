"""Errors in the program itself: logged, the work kept, and told once in plain words. Never a silent exit."""

from __future__ import annotations

import faulthandler
import logging
import sys
import threading
from collections.abc import Callable
from logging.handlers import RotatingFileHandler
from pathlib import Path
from types import TracebackType
from typing import TextIO

from PySide6.QtCore import QMessageLogContext, QtMsgType, qInstallMessageHandler

from . import places
from .version import VERSION

LOG_BYTES = 512 * 1024

_log = logging.getLogger("app")
_QT_LEVELS = {
    QtMsgType.QtDebugMsg: logging.DEBUG,
    QtMsgType.QtInfoMsg: logging.INFO,
    QtMsgType.QtWarningMsg: logging.WARNING,
    QtMsgType.QtCriticalMsg: logging.ERROR,
    QtMsgType.QtFatalMsg: logging.CRITICAL,
}


def log_file() -> Path:
    """The log."""
    return places.logs() / "gainwright.log"


def words(error: BaseException, kept: bool) -> str:
    """What a person is told."""
    work = (
        "Your work up to now is kept and will be offered at the next start if this window does not last."
        if kept
        else "Your work could not be kept aside: save it now, under another name."
    )
    return (
        "Something in Gainwright itself went wrong. That is our fault, not yours.\n\n"
        f"{work}\n\nYou can go on. If it happens again, save and start anew.\n\n"
        f"What happened stands in {log_file()}\n({type(error).__name__}: {str(error)[:200]})"
    )


class Mishaps:
    """Catches what nobody caught. `rescue` keeps the work and says whether it could; `tell` shows one text."""

    def __init__(self, rescue: Callable[[], bool], tell: Callable[[str], None]) -> None:
        self._rescue = rescue
        self._tell = tell
        self._told: set[tuple[type[BaseException], str]] = set()
        self._telling = False
        self._previous = (sys.excepthook, threading.excepthook)
        self._handler: logging.Handler | None = None
        self._crash_log: TextIO | None = None

    def install(self) -> None:
        """Begin: log to a file, and catch in this thread, in others, and what Qt says."""
        try:
            places.logs().mkdir(parents=True, exist_ok=True)
            handler = RotatingFileHandler(
                log_file(), maxBytes=LOG_BYTES, backupCount=2, encoding="utf-8", delay=True
            )
            handler.setFormatter(logging.Formatter("%(asctime)s %(levelname)s %(name)s: %(message)s"))
            _log.addHandler(handler)
            self._handler = handler
            self._crash_log = (places.logs() / "crash.log").open("a", encoding="utf-8")
            faulthandler.enable(self._crash_log)
        except OSError as reason:
            _log.warning("no log is written: %s", reason)
        sys.excepthook = self._caught
        threading.excepthook = self._caught_in_thread
        qInstallMessageHandler(_from_qt)

    def uninstall(self) -> None:
        """End."""
        sys.excepthook, threading.excepthook = self._previous
        qInstallMessageHandler(None)
        if self._crash_log is not None:
            faulthandler.disable()
            self._crash_log.close()
            self._crash_log = None
        if self._handler is not None:
            _log.removeHandler(self._handler)
            self._handler.close()
            self._handler = None

    def _caught(self, kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        if not issubclass(kind, Exception):
            self._previous[0](kind, error, trace)
            return
        _log.error("Gainwright %s", VERSION, exc_info=(kind, error, trace))
        try:
            kept = self._rescue()
        except Exception:  # noqa: BLE001 - nothing may stop the telling
            _log.exception("the work could not be kept")
            kept = False
        # The same mishap at every mouse move is told once; one while another is being read is in the log.
        mark = (kind, _place(trace))
        if self._telling or mark in self._told:
            return
        self._told.add(mark)
        self._telling = True
        try:
            self._tell(words(error, kept))
        finally:
            self._telling = False

    def _caught_in_thread(self, args: threading.ExceptHookArgs) -> None:
        # A dialog may only come from the window's own thread.
        error = args.exc_value or args.exc_type()
        _log.error("in a thread", exc_info=(args.exc_type, error, args.exc_traceback))


def _place(trace: TracebackType | None) -> str:
    while trace is not None and trace.tb_next is not None:
        trace = trace.tb_next
    return "" if trace is None else f"{trace.tb_frame.f_code.co_filename}:{trace.tb_lineno}"


def _from_qt(kind: QtMsgType, context: QMessageLogContext, message: str | None) -> None:
    _log.log(_QT_LEVELS.get(kind, logging.WARNING), "Qt: %s", message)
