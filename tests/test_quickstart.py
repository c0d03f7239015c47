"""The two commands' own logic, without a network: what they need, what they say, when they do nothing."""

from __future__ import annotations

import ast
import importlib.util
import sys
from pathlib import Path
from types import ModuleType

import pytest

SCRIPT = Path(__file__).resolve().parent.parent / "resources" / "quickstart.py"


@pytest.fixture
def quickstart(tmp_path, monkeypatch) -> ModuleType:
    """The script as a module, with an environment folder of its own."""
    spec = importlib.util.spec_from_file_location("quickstart", SCRIPT)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    monkeypatch.setattr(module, "ENVIRONMENT", tmp_path / "env")
    monkeypatch.setattr(module, "STAMP", tmp_path / "stamp.json")
    return module


def test_needs_the_standard_library_only():
    imported = set()
    for node in ast.walk(ast.parse(SCRIPT.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            imported |= {name.name.split(".")[0] for name in node.names}
        elif isinstance(node, ast.ImportFrom):
            imported.add((node.module or "").split(".")[0])
    assert imported <= sys.stdlib_module_names


def test_an_old_python_can_read_it_far_enough_to_be_told():
    """3.6 has no `from __future__ import annotations` and cannot evaluate `list[str]`."""
    tree = ast.parse(SCRIPT.read_text(encoding="utf-8"), feature_version=(3, 6))
    hints = [
        hint
        for node in ast.walk(tree)
        if isinstance(node, ast.FunctionDef)
        for hint in [node.returns, *(argument.annotation for argument in node.args.args)]
        if hint is not None
    ]
    assert hints
    assert not [ast.unparse(hint) for hint in hints if isinstance(hint, ast.Subscript | ast.BinOp)]


@pytest.mark.parametrize(
    ("version", "fits"),
    [((3, 10, 13), False), ((3, 11, 0), True), ((3, 13, 9), True), ((3, 14, 0), False), ((), False)],
)
def test_which_python_fits(quickstart, version, fits):
    assert quickstart.fits(version) is fits


def test_an_unsuitable_python_hands_over_or_says_what_to_install(quickstart, monkeypatch, capsys):
    monkeypatch.setattr(quickstart.sys, "version_info", (3, 10, 2, "final", 0))
    monkeypatch.setattr(quickstart.shutil, "which", lambda _: None)
    assert quickstart.main([]) == 1
    assert "This is Python 3.10" in capsys.readouterr().err
    monkeypatch.setattr(quickstart.shutil, "which", lambda name: name if name == "python3.12" else None)
    monkeypatch.setattr(quickstart, "version_of", lambda _: (3, 12, 4))
    called = []

    def call(command: list[str]) -> int:
        called.append(command)
        return 7

    monkeypatch.setattr(quickstart.subprocess, "call", call)
    assert quickstart.main(["test", "-x"]) == 7
    assert called == [["python3.12", quickstart.__file__, "test", "-x"]]


@pytest.mark.parametrize(
    ("environment", "reason"),
    [
        ({}, "neither DISPLAY nor WAYLAND_DISPLAY is set"),
        ({"DISPLAY": ":4711"}, "nothing answers at DISPLAY=:4711"),
        ({"WAYLAND_DISPLAY": "wayland-0"}, ""),
        (
            {"WAYLAND_DISPLAY": "wayland-0", "QT_QPA_PLATFORM": "offscreen"},
            "QT_QPA_PLATFORM asks for no screen",
        ),
    ],
)
@pytest.mark.skipif(not sys.platform.startswith("linux"), reason="elsewhere there is a screen")
def test_why_no_window_can_open(quickstart, monkeypatch, environment, reason):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    for name, value in environment.items():
        monkeypatch.setenv(name, value)
    assert quickstart.why_no_window() == reason


@pytest.mark.skipif(not sys.platform.startswith("linux"), reason="only Linux needs them from its packages")
def test_missing_libraries_are_named_with_the_line_that_brings_them(quickstart, monkeypatch):
    monkeypatch.setattr(quickstart, "as_root", lambda: None)
    monkeypatch.setattr(quickstart.shutil, "which", lambda name: name if name == "apt-get" else None)
    with pytest.raises(quickstart.Stop) as caught:
        quickstart.provide_libraries({"libnone.so.7": "libnone7", "libc.so.6": "libc6"})
    assert "libnone.so.7" in str(caught.value)
    assert str(caught.value).endswith("sudo apt-get update && sudo apt-get install -y libnone7")


def test_what_is_installed_is_not_installed_again(quickstart, monkeypatch):
    monkeypatch.setattr(quickstart, "is_sound", lambda: True)
    monkeypatch.setattr(quickstart, "version_of", lambda _: (3, 12, 4))
    quickstart.ENVIRONMENT.mkdir()
    installed: list[list[str]] = []
    monkeypatch.setattr(quickstart, "pip_install", installed.append)
    for extras, expected in ((set(), "."), ({"test"}, ".[test]")):
        installed.clear()
        quickstart.provide_packages(extras)
        assert [what[-1] for what in installed] == ["editables", expected]
        installed.clear()
        quickstart.provide_packages(extras)
        quickstart.provide_packages(set())
        assert installed == []
    monkeypatch.setattr(quickstart, "version_of", lambda _: (3, 13, 0))
    quickstart.provide_packages(set())
    assert installed, "another Python needs its own packages"


def test_an_interrupted_install_counts_as_none(quickstart, monkeypatch, capsys):
    monkeypatch.setattr(quickstart, "is_sound", lambda: True)
    quickstart.ENVIRONMENT.mkdir()

    def fails(_: list[str]) -> None:
        raise quickstart.Stop("pip could not install the packages")

    monkeypatch.setattr(quickstart, "pip_install", fails)
    assert quickstart.main(["setup"]) == 1
    assert "pip could not install the packages" in capsys.readouterr().err
    assert not quickstart.is_installed(set())


def test_the_suites_status_is_the_commands(quickstart, monkeypatch):
    monkeypatch.setattr(quickstart, "setup", lambda: 0)
    called = []

    def call(command: list[str], **_: object) -> int:
        called.append(command)
        return 5

    monkeypatch.setattr(quickstart.subprocess, "call", call)
    assert quickstart.main(["test", "-k", "pad"]) == 5
    assert called[0][1:3] == ["-m", "pytest"]
    assert called[0][-2:] == ["-k", "pad"]
