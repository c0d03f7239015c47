"""Start to a painted window, and a whole `table`: printed beside their goals, in processes of their own."""

from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).parents[2]
SAMPLE = ROOT / "sample_projects" / "meeting_room.gainwright"
PAINTED = """
import sys, time
began = float(sys.argv[1])
from PySide6.QtWidgets import QApplication
from app import fonts
application = QApplication([])
fonts.family()
from app.document import Document
from app.window import MainWindow
from engine.store import read
from pathlib import Path
window = MainWindow(Document(read(Path(sys.argv[2]))[0], Path(sys.argv[2])))
window.show()
while not window._painted:
    application.processEvents()
print(time.time() - began)
"""


def environment(tmp_path: Path) -> dict[str, str]:
    return {
        **os.environ,
        "GAINWRIGHT_HOME": str(tmp_path),
        "QT_QPA_PLATFORM": "offscreen",
        "PYTHONPATH": str(ROOT),
    }


def test_start_to_painted_window(tmp_path, capsys):
    """Goal 1.2 s with software rendering."""
    best = 1e9
    for _ in range(3):
        found = subprocess.run(
            [sys.executable, "-c", PAINTED, str(time.time()), str(SAMPLE)],
            capture_output=True, text=True, check=True, cwd=ROOT, env=environment(tmp_path),
        )  # fmt: skip
        best = min(best, float(found.stdout.split()[-1]))
    with capsys.disabled():
        print(f"\nstart to a painted window: {best:.2f} s (goal 1.2)")


def test_table(tmp_path, capsys):
    """Goal 0.5 s."""
    best = 1e9
    for _ in range(3):
        began = time.perf_counter()
        subprocess.run(
            [sys.executable, "-m", "app", "table", str(SAMPLE)],
            capture_output=True, check=True, cwd=ROOT, env=environment(tmp_path),
        )  # fmt: skip
        best = min(best, time.perf_counter() - began)
    with capsys.disabled():
        print(f"\ngainwright table: {best:.2f} s (goal 0.5)")
