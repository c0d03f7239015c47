"""What every test gets: no screen, a home of its own, repeatable draws, and no window left behind."""

from __future__ import annotations

import importlib.util
import itertools
import os
from collections.abc import Iterator
from pathlib import Path

import pytest
from hypothesis import HealthCheck, settings

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

settings.register_profile("default", deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.register_profile("ci", settings.get_profile("default"), derandomize=True, print_blob=True)
settings.load_profile("ci" if os.environ.get("CI") else "default")

QT_INSTALLED = importlib.util.find_spec("pytestqt") is not None
QT_FIXTURES = {"qapp", "qtbot", "qtmodeltester"}
_home_number = itertools.count()


def pytest_addoption(parser: pytest.Parser) -> None:
    """Know the Qt options of pyproject.toml where pytest-qt is absent: the engine is tested without it."""
    if not QT_INSTALLED:
        for name in ("qt_api", "qt_log_level_fail"):
            parser.addini(name, "option of pytest-qt, unused here")
        parser.addini("qt_log_ignore", "option of pytest-qt, unused here", type="linelist")


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Mark as `gui` each test that asks for Qt."""
    for item in items:
        if QT_FIXTURES & set(getattr(item, "fixturenames", ())):
            item.add_marker("gui")


@pytest.fixture(scope="session")
def _homes(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("homes")


@pytest.fixture(autouse=True)
def home(_homes: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Folder of this test alone for settings, recovery files and logs (made by who writes there first)."""
    folder = _homes / str(next(_home_number))
    monkeypatch.setenv("GAINWRIGHT_HOME", str(folder))
    return folder


@pytest.fixture(autouse=True)
def _no_window_left_open(request: pytest.FixtureRequest) -> Iterator[None]:
    """Fail a Qt test that leaves a window on the screen; pytest-qt has closed its own by now."""
    yield
    if not QT_FIXTURES & set(request.fixturenames):
        return
    from PySide6.QtCore import QEvent
    from PySide6.QtWidgets import QApplication

    application = QApplication.instance()
    assert isinstance(application, QApplication)
    application.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    left = [widget for widget in application.topLevelWidgets() if widget.isVisible()]
    for widget in left:
        widget.close()
    assert not left, f"windows left open: {left}"
