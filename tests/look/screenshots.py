"""Take the pictures of the real window: both sizes, three schemes, and what README shows. Fails on clipped labels.

    python -m tests.look.screenshots            # starts a screen of its own where there is none (needs Xvfb)

A person still looks at every picture.
"""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from shutil import which

ROOT = Path(__file__).parents[2]
OUT = ROOT / "resources" / "screenshots"
SIZES = ((1366, 768), (1920, 1080))
SCREEN = ":83"
SETTLE_S = 1.2
SCENES = (("meeting_room", "amp_front"), ("house_of_worship", None), ("theatre", None))


@contextmanager
def screen() -> Iterator[None]:
    """A virtual screen with a window manager, where Xvfb is installed; else the screen there is."""
    if which("Xvfb") is None:
        yield
        return
    server = subprocess.Popen(["Xvfb", SCREEN, "-screen", "0", "1920x1080x24"], stderr=subprocess.DEVNULL)
    time.sleep(1.0)
    os.environ.update(DISPLAY=SCREEN, QT_QPA_PLATFORM="xcb")
    manager = subprocess.Popen(["openbox"], stderr=subprocess.DEVNULL) if which("openbox") else None
    try:
        yield
    finally:
        for process in (manager, server):
            if process is not None:
                process.terminate()
                process.wait()


def clipped(window: object) -> list[str]:
    """Labels in one line whose text is wider than they are."""
    from PySide6.QtWidgets import QAbstractButton, QLabel, QWidget

    assert isinstance(window, QWidget)
    found = []
    for label in window.findChildren(QLabel):
        wide = label.fontMetrics().horizontalAdvance(label.text())
        if (
            label.isVisible()
            and not label.wordWrap()
            and "\n" not in label.text()
            and wide > label.width() + 1
        ):
            found.append(f"{label.text()!r}: {wide} px in {label.width()}")
    for button in window.findChildren(QAbstractButton):
        wide = button.fontMetrics().horizontalAdvance(button.text().replace("&", ""))
        if button.isVisible() and wide > button.width() + 1:
            found.append(f"{button.text()!r}: {wide} px in {button.width()}")
    return found


def take() -> int:
    """Take them all; the number of clipped labels."""
    os.environ["GAINWRIGHT_HOME"] = tempfile.mkdtemp(prefix="gainwright-look-")
    from PySide6.QtGui import QImage
    from PySide6.QtWidgets import QApplication

    from app import fonts
    from app.document import Document
    from app.window import MainWindow
    from engine.store import read

    application = QApplication(sys.argv[:1])
    fonts.family()
    OUT.mkdir(parents=True, exist_ok=True)
    faults = 0

    def settle(seconds: float = SETTLE_S) -> None:
        until = time.monotonic() + seconds
        while time.monotonic() < until:
            application.processEvents()

    for sample, selected in SCENES:
        path = ROOT / "sample_projects" / f"{sample}.gainwright"
        window = MainWindow(Document(read(path)[0], path))
        window.show()
        for width, height in SIZES:
            window.setGeometry(0, 0, width, height)
            for scheme in ("light", "dark", "red light"):
                window.set_scheme(scheme)
                settle()
                stages = window.document.project.stage
                window.document.select([selected] if selected is not None and selected in stages else [])
                settle(0.6)
                name = f"{sample}-{width}-{scheme.replace(' ', '-')}.png"
                window.grab().toImage().convertToFormat(QImage.Format.Format_RGB888).save(str(OUT / name))
                for line in clipped(window):
                    faults += 1
                    print(f"{name}: clipped {line}")
        window.close()
        settle(0.2)
    return faults


if __name__ == "__main__":
    with screen():
        sys.exit(1 if take() else 0)
