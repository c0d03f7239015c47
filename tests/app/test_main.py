"""The first word: a command if it is one of ours, else a file for the window."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from app import places, start
from app.__main__ import main
from app.version import VERSION
from engine import store
from engine.project import Project

ROOT = Path(__file__).parents[2]
SAMPLE = str(places.sample_projects()[0])


def python(code: str, *arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-c", code, *arguments], capture_output=True, text=True, check=False
    )


def test_a_command_is_run(capsys):
    assert main(["table", SAMPLE]) == 0
    assert capsys.readouterr().out


def test_any_other_word_is_a_file(monkeypatch):
    opened: list[Path | None] = []

    def run(path: Path | None) -> int:
        opened.append(path)
        return 0

    monkeypatch.setattr(start, "run", run)
    assert main(["venue.gainwright"]) == 0
    assert main([]) == 0
    assert opened == [Path("venue.gainwright"), None]


@pytest.mark.parametrize("words", [["--nonsense"], ["a.gainwright", "b.gainwright"]])
def test_what_is_not_understood_is_said(words, capsys):
    assert main(words) == 2
    captured = capsys.readouterr()
    assert "is not understood" in captured.err
    assert captured.out == ""


def test_help_and_version(capsys):
    assert main(["--help"]) == 0
    assert "gainwright table FILE" in capsys.readouterr().out
    assert main(["--version"]) == 0
    assert capsys.readouterr().out == f"gainwright {VERSION}\n"


def test_without_a_screen_it_says_so(monkeypatch, capsys):
    for name in ("QT_QPA_PLATFORM", "DISPLAY", "WAYLAND_DISPLAY"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setattr(sys, "platform", "linux")
    assert start.run(None) == 2
    assert "there is no screen" in capsys.readouterr().err


def test_the_table_needs_no_qt():
    code = (
        "import sys; from app.__main__ import main; status = main(['table', sys.argv[1]]); "
        "print([name for name in sys.modules if name.split('.')[0] in ('PySide6', 'shiboken6', 'pyqtgraph', 'scipy')], "
        "file=sys.stderr); sys.exit(status)"
    )
    done = python(code, SAMPLE)
    assert done.returncode == 0
    assert done.stderr.strip() == "[]"


def test_an_empty_window_loads_nothing_heavy():
    code = (
        "import sys; from PySide6.QtWidgets import QApplication; app = QApplication([]); "
        "from app.window import MainWindow; from app.document import Document; w = MainWindow(Document()); w.show(); "
        "heavy = ('pyqtgraph', 'scipy', 'soundfile', 'PySide6.QtPrintSupport'); "
        "print([name for name in heavy if name in sys.modules]); w.close()"
    )
    done = python(code)
    assert done.returncode == 0, done.stderr
    assert done.stdout.strip() == "[]"


def test_the_program_starts_opens_a_file_and_ends(tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, Project())
    code = (
        "import sys; from pathlib import Path; from PySide6.QtCore import QTimer; from PySide6.QtWidgets import QApplication; "
        "from app import window, start; greet = window.MainWindow.greet\n"
        "def greeted(self):\n"
        "    greet(self); print(self.windowTitle(), self.document.path.name); self.close()\n"
        "window.MainWindow.greet = greeted; sys.exit(start.run(Path(sys.argv[1])))"
    )
    done = python(code, str(file))
    assert done.returncode == 0, done.stderr
    assert done.stdout.strip() == "a[*] – Gainwright a.gainwright"
