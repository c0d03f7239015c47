"""Where files are, in a checkout and in an installed package, and where the user's own go."""

from __future__ import annotations

import importlib.util
import os
import shutil
import sys
from pathlib import Path

import pytest

from app import places


def test_shipped_files_are_there():
    assert places.icon().is_file()
    assert {face.suffix for face in places.fonts().iterdir()} >= {".otf", ".txt"}
    assert (places.resources() / "LICENSE").is_file()


def test_the_meeting_room_is_the_first_sample():
    samples = places.sample_projects()
    assert samples[0].name == "meeting_room.gainwright"
    assert samples[1:] == sorted(samples[1:])


def test_an_installed_package_finds_its_own_copies(tmp_path):
    """In a wheel, resources and sample projects stand inside the package."""
    package = tmp_path / "app"
    for folder in ("resources", "sample_projects"):
        (package / folder).mkdir(parents=True)
    shutil.copy(places.__file__, package / "places.py")
    spec = importlib.util.spec_from_file_location("installed_places", package / "places.py")
    assert spec is not None
    assert spec.loader is not None
    installed = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(installed)
    assert installed.fonts() == package.resolve() / "resources" / "fonts"
    assert installed.sample_projects() == []


def test_one_variable_moves_all_that_is_the_users(home):
    assert {places.data().parent, places.recovery().parent, places.logs().parent} == {home}
    assert not home.exists(), "asking for a place makes nothing"


@pytest.fixture
def nowhere(monkeypatch):
    """No variable says where the user's files go."""
    for name in ("GAINWRIGHT_HOME", "XDG_DATA_HOME", "XDG_STATE_HOME", "LOCALAPPDATA"):
        monkeypatch.delenv(name, raising=False)


@pytest.mark.parametrize(
    ("platform", "data", "recovery", "logs"),
    [
        # XDG Base Directory Specification 0.8: data and state folders and their defaults.
        (
            "linux",
            ".local/share/gainwright",
            ".local/state/gainwright/recovery",
            ".local/state/gainwright/logs",
        ),
        # The system's own habits, from memory.
        (
            "darwin",
            "Library/Application Support/Gainwright/data",
            "Library/Application Support/Gainwright/recovery",
            "Library/Logs/Gainwright",
        ),
        (
            "win32",
            "AppData/Local/Gainwright/data",
            "AppData/Local/Gainwright/recovery",
            "AppData/Local/Gainwright/logs",
        ),
    ],
)
@pytest.mark.usefixtures("nowhere")
def test_each_system_has_its_habit(monkeypatch, platform, data, recovery, logs):
    monkeypatch.setattr(sys, "platform", platform)
    home = Path.home()
    assert [places.data(), places.recovery(), places.logs()] == [home / data, home / recovery, home / logs]


@pytest.mark.skipif(os.name == "nt", reason="an absolute path is written otherwise there")
@pytest.mark.usefixtures("nowhere")
def test_a_relative_xdg_folder_is_ignored(monkeypatch):
    """XDG Base Directory Specification 0.8: paths in these variables must be absolute."""
    monkeypatch.setattr(sys, "platform", "linux")
    monkeypatch.setenv("XDG_DATA_HOME", "here")
    assert places.data() == Path.home() / ".local" / "share" / "gainwright"
    monkeypatch.setenv("XDG_DATA_HOME", "/srv/mine")
    assert places.data() == Path("/srv/mine/gainwright")
