"""Start the window."""

from __future__ import annotations

import os
import sys
from pathlib import Path

from PySide6.QtCore import QTimer
from PySide6.QtGui import QIcon
from PySide6.QtWidgets import QApplication

from . import places, style
from .document import Document
from .inks import LIGHT, SCHEMES
from .memory import Memory
from .mishap import Mishaps
from .version import VERSION
from .window import MainWindow

NO_SCREEN = (
    "gainwright: there is no screen here to open a window on. Without one: gainwright table, check, sheet or diagram, "
    "each with the project file."
)


def run(path: Path | None) -> int:
    """Open the window, on a project where one is named, and stay until it is closed."""
    if not has_screen():
        print(NO_SCREEN, file=sys.stderr)
        return 2
    application = QApplication(sys.argv[:1])
    application.setApplicationName("Gainwright")
    application.setApplicationVersion(VERSION)
    application.setDesktopFileName("gainwright")
    application.setWindowIcon(QIcon(str(places.icon())))
    memory = Memory()
    style.apply(application, SCHEMES.get(memory.text("scheme"), LIGHT))
    window = MainWindow(Document(), memory=memory)
    mishaps = Mishaps(window.rescue, lambda text: window.ask.tell("Something went wrong", text))
    mishaps.install()
    window.show()
    if path is not None:
        window.files.open(path)
    QTimer.singleShot(0, window, window.greet)
    status = application.exec()
    mishaps.uninstall()
    return status


def has_screen() -> bool:
    """Whether a window can be opened; Qt itself would abort without saying why."""
    if sys.platform in ("win32", "darwin") or os.environ.get("QT_QPA_PLATFORM"):
        return True
    return bool(os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"))
