"""The project as a whole: its layout, its versions, who imports whom, and no trace of a machine in it."""

from __future__ import annotations

import re
import shutil
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest
from importlinter.cli import EXIT_STATUS_SUCCESS, lint_imports
from packaging.requirements import Requirement
from packaging.utils import canonicalize_name

from app.version import VERSION

ROOT = Path(__file__).resolve().parent.parent
TOP_LEVEL = {
    "README.md", "DEVELOPERS.md", "pyproject.toml", "app", "engine", "tests", "sample_projects", "resources",
}  # fmt: skip
PYPROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))


def tracked_files() -> list[Path]:
    """The project's own files: what git tracks, so that what tools leave behind does not count."""
    if shutil.which("git") is None or not (ROOT / ".git").exists():
        pytest.skip("not a git checkout")
    listed = subprocess.run(["git", "ls-files", "-z"], cwd=ROOT, capture_output=True, text=True, check=True)
    return [ROOT / name for name in listed.stdout.split("\0") if name and (ROOT / name).exists()]


def test_top_level_holds_the_agreed_names_only():
    names = {path.relative_to(ROOT).parts[0] for path in tracked_files()}
    assert {name for name in names if not name.startswith(".")} <= TOP_LEVEL
    assert {name for name in names if name.startswith(".")} <= {".ci", ".gitignore"}


def test_the_newest_entry_of_the_change_notes_is_this_version():
    newest = re.search(r"^## (\S+)", (ROOT / "resources" / "CHANGELOG.md").read_text(encoding="utf-8"), re.M)
    assert newest is not None
    assert newest[1] == VERSION


def test_every_requirement_is_pinned_within_its_range():
    pins = {}
    for line in (ROOT / "resources" / "constraints.txt").read_text(encoding="utf-8").splitlines():
        if line and not line.startswith("#"):
            name, version = line.split("==")
            pins[canonicalize_name(name)] = version
    project = PYPROJECT["project"]
    wanted = [
        *project["dependencies"],
        *project["optional-dependencies"]["test"],
        *PYPROJECT["build-system"]["requires"],
    ]
    for text in wanted:
        requirement = Requirement(text)
        version = pins[canonicalize_name(requirement.name)]
        assert requirement.specifier.contains(version), f"{text}: pinned at {version}"


def test_the_import_contracts_hold(monkeypatch):
    monkeypatch.chdir(ROOT)
    assert lint_imports(config_filename="pyproject.toml", cache_dir=None) == EXIT_STATUS_SUCCESS


@pytest.mark.parametrize(
    ("module", "unwanted"),
    [
        ("engine", {"PySide6", "pyqtgraph", "scipy", "soundfile"}),
        ("app.places", {"PySide6"}),
        ("app.diagram.geometry", {"PySide6"}),
        ("app.diagram.paint", {"PySide6.QtWidgets", "pyqtgraph"}),
        ("app.sheets", {"PySide6.QtWidgets", "pyqtgraph"}),
    ],
)
def test_importing_a_module_does_not_load(module, unwanted):
    """What the import contracts cannot say: they know an outside package as a whole, not its parts."""
    script = f"import sys, {module}; print(*sys.modules)"
    loaded = subprocess.run(
        [sys.executable, "-c", script], cwd=ROOT, capture_output=True, text=True, check=True
    )
    assert not unwanted & set(loaded.stdout.split())


def test_no_file_names_a_machine_path_or_a_registry():
    """A path of the machine it was written on, or an address of a package registry, works nowhere else."""
    traces = re.compile(
        "|".join(
            [r"/(?:work|farm)/", r"/(?:root|tmp|home)/\w", "index" + "-url", "/simple" + "/", "pypi" + r"\."]
        )
    )
    text_kinds = {".py", ".md", ".toml", ".txt", ".svg", ".desktop", ".json", ".gainwright", ""}
    found = [
        f"{path.relative_to(ROOT)}:{number}: {line.strip()[:80]}"
        for path in tracked_files()
        if path.suffix in text_kinds and path != Path(__file__)
        for number, line in enumerate(path.read_text(encoding="utf-8").splitlines(), start=1)
        if traces.search(line)
    ]
    assert not found, "\n".join(found)


def test_no_source_file_outgrows_one_idea():
    longest = 450
    long = {
        str(path.relative_to(ROOT)): lines
        for path in tracked_files()
        if path.suffix == ".py" and (lines := len(path.read_text(encoding="utf-8").splitlines())) > longest
    }
    assert not long, f"split these files: {long}"
