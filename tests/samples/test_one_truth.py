"""The sample venues: what the files hold, what they come to, and that every way of saying a number says the same.

The results frozen beside this file are the program's own: they show a change, they do not prove a number. What proves
the numbers stands in tests/published and tests/judges.
"""

from __future__ import annotations

import csv
import io
import json
import math
from pathlib import Path

import pypdf
import pytest

from app import tabular
from app.cli import COMMANDS
from app.diagram import readout
from app.sheets.book import make_book
from engine.outcome import Outcome, evaluate
from engine.project import Project
from engine.store import from_text, read, to_text
from tests.samples.build_samples import SAMPLE_PROJECTS, VENUES, frozen, with_limiters_set

HERE = Path(__file__).parent
NAMES = list(VENUES)


@pytest.fixture(scope="module", params=NAMES)
def name(request) -> str:
    return request.param


@pytest.fixture(scope="module")
def path(name) -> Path:
    return SAMPLE_PROJECTS / f"{name}.gainwright"


@pytest.fixture(scope="module")
def project(path) -> Project:
    found, notes = read(path)
    assert notes == ()
    return found


@pytest.fixture(scope="module")
def outcome(project) -> Outcome:
    return evaluate(project)


# -- the venues ----------------------------------------------------------------------------------------------


def test_the_file_is_what_the_script_builds(name, project, path):
    assert project.same_as(with_limiters_set(VENUES[name]()))
    assert to_text(project) == path.read_text(encoding="utf-8")
    assert from_text(to_text(project))[0].same_as(project)


def test_every_figure_is_a_guess(project):
    for stage in project.stages:
        assert {figure.origin for _, _, figure in stage.figures()} <= {"guess"}


def test_nothing_says_stop_and_seats_reach_their_targets(outcome):
    assert not [finding for finding in outcome.findings if finding.severity == "stop"]
    assert outcome.seats
    for seat in outcome.seats:
        assert seat.off_target == pytest.approx(0.0, abs=1.0), seat.name
        assert seat.hiss_margin is not None
        assert seat.hiss_margin > 0.0, seat.name


def test_the_results_are_the_frozen_ones(name, outcome):
    """To a ten-thousandth of a dB or a hundred-thousandth of a watt."""
    kept = json.loads((HERE / f"{name}.json").read_text(encoding="utf-8"))
    assert_alike(frozen(outcome), kept, name)


def assert_alike(now: object, kept: object, where: str) -> None:
    if isinstance(kept, float):
        assert now == pytest.approx(kept, rel=1e-5, abs=1e-4), where
    elif isinstance(kept, dict):
        assert isinstance(now, dict)
        assert now.keys() == kept.keys(), where
        for key, value in kept.items():
            assert_alike(now[key], value, f"{where}, {key}")
    elif isinstance(kept, list):
        assert isinstance(now, list)
        assert len(now) == len(kept), where
        for place, (one, other) in enumerate(zip(now, kept, strict=True)):
            assert_alike(one, other, f"{where}, {place}")
    else:
        assert now == kept, where


# -- one truth -----------------------------------------------------------------------------------------------


@pytest.fixture
def nodes(path, capsys) -> list[dict]:
    """The nodes of `table --json`, which all others are compared with."""
    assert COMMANDS["table"]([str(path), "--json"]) == 0
    return json.loads(capsys.readouterr().out)["nodes"]


def said(node: dict) -> list[str]:
    """A JSON node in words, made here from its numbers alone: true minus, one decimal, sign on electrical levels."""
    texts = [node["unit"]]
    for key in ("level", "peak", "clip", "ceiling", "headroom", "peak_margin", "noise", "noise_a", "snr"):
        value = node[key]
        if value is None:
            texts.append("muted" if key == "level" else "–")
            continue
        is_level = key in ("level", "peak", "clip", "ceiling", "noise", "noise_a")
        text = f"{value:+.1f}" if is_level and node["unit"] != "dB SPL" else f"{value:.1f}"
        text = text.lstrip("+-") if float(text) == 0.0 else text
        texts.append(text.replace("-", "−"))
    return texts


def test_csv_says_the_same(path, nodes, capsys):
    assert COMMANDS["table"]([str(path), "--csv"]) == 0
    rows = list(csv.DictReader(io.StringIO(capsys.readouterr().out)))
    assert len(rows) == len(nodes)
    for row, node in zip(rows, nodes, strict=True):
        for key, value in node.items():
            if isinstance(value, float):
                assert float(row[key]) == value
            else:
                assert row[key] == ("" if value is None else str(value))


def test_the_table_says_the_same(path, nodes, capsys):
    assert COMMANDS["table"]([str(path)]) == 0
    lines = capsys.readouterr().out.splitlines()[1 : len(nodes) + 1]
    for line, node in zip(lines, nodes, strict=True):
        assert line.split("  ")[0].startswith(node["name"])
        cells = line[len(node["name"]) :].replace("dB SPL", "dB_SPL").split()
        assert cells[-10:] == [text.replace(" ", "_") for text in said(node)]


def test_paper_says_the_same(outcome, nodes, tmp_path, qapp):
    target = tmp_path / "levels.pdf"
    make_book(outcome, only=["levels"]).write(target)
    written = [line for page in pypdf.PdfReader(target).pages for line in page.extract_text().splitlines()]
    at = 0
    for node, record in zip(outcome.nodes, nodes, strict=True):
        cells = said(record)
        place = tabular.place(outcome.project, node)
        at = (
            next(
                n for n in range(at, len(written)) if written[n] == place and written[n + 1 : n + 11] == cells
            )
            + 11
        )


def test_level_diagram_sheets_say_the_same(outcome, nodes, tmp_path, qapp):
    target = tmp_path / "diagrams.pdf"
    make_book(outcome, only=["diagram"]).write(target)
    written = [line for page in pypdf.PdfReader(target).pages for line in page.extract_text().splitlines()]
    by_place = {(record["stage"], record["port"], record["index"]): said(record) for record in nodes}
    at = 0
    for path in outcome.paths():
        for node in outcome.trace(path):
            cells = by_place[node.stage, node.direction, node.index]
            place = tabular.place(outcome.project, node)
            at = (
                next(
                    n
                    for n in range(at, len(written))
                    if written[n] == place and written[n + 1 : n + 11] == cells
                )
                + 11
            )


def test_the_window_says_the_same(outcome, nodes):
    """What stands over a node in the diagram, with units; paper and table keep the unit in a column of its own."""
    labels = {
        "level": "level", "peak": "peak", "clip": "clip point", "ceiling": "usable ceiling", "headroom": "headroom",
        "peak_margin": "peak margin", "noise": "noise", "noise_a": "noise, A-weighted", "snr": "S/N",
    }  # fmt: skip
    for node, record in zip(outcome.nodes, nodes, strict=True):
        shown = dict(readout.lines(node))
        for (key, label), text in zip(labels.items(), said(record)[1:], strict=True):
            unit = "dB" if key in ("headroom", "peak_margin", "snr") else record["unit"]
            expected = text if text in ("–", "muted") else f"{text}\u202f{unit}"
            assert shown.get(label, "–") in (expected, "muted"), (node.name, label)
            assert (shown.get(label) == "muted") <= (record[key] is None)


def test_unrounded_numbers_hold_together(nodes):
    """Headroom, peak margin and S/N are differences of the levels beside them."""
    for node in nodes:
        if node["clip"] is not None and node["level"] is not None:
            assert math.isclose(node["headroom"], node["clip"] - node["level"], abs_tol=1e-9)
            assert math.isclose(node["peak_margin"], node["clip"] - node["peak"], abs_tol=1e-9)
        if node["noise"] is not None and node["level"] is not None:
            assert math.isclose(node["snr"], node["level"] - node["noise"], abs_tol=1e-9)
