"""What a command that draws needs: Qt with its typeface, and no screen."""

from __future__ import annotations

import os

from PySide6.QtGui import QGuiApplication


def application() -> QGuiApplication:
    """The running application, or one that needs no display. Keep it as long as there is drawing to do."""
    running = QGuiApplication.instance()
    if isinstance(running, QGuiApplication):
        return running
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    return QGuiApplication(["gainwright"])
