"""The judges are worth something only while they know nothing of what they judge."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

from tests.judges import ngspice

HERE = Path(__file__).parent


def test_the_netlist_is_written_from_figures_alone():
    """`netlist.py` imports `engine.figures` and nothing else of the engine, or it would repeat the engine's mistakes."""
    tree = ast.parse((HERE / "netlist.py").read_text(encoding="utf-8"))
    modules = {node.module or "" for node in ast.walk(tree) if isinstance(node, ast.ImportFrom)}
    modules |= {name.name for node in ast.walk(tree) if isinstance(node, ast.Import) for name in node.names}
    assert {module for module in modules if module.split(".")[0] in ("engine", "app", "tests")} == {
        "engine.figures"
    }


def test_a_missing_simulator_is_said_plainly(monkeypatch):
    """Without ngspice its tests fail and say what to install; they are not left out."""
    monkeypatch.setenv("PATH", "")
    with pytest.raises(RuntimeError, match="install it"):
        ngspice.program()
