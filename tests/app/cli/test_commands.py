"""The commands: shapes of what they print, exit status, and errors in plain words on stderr."""

from __future__ import annotations

import csv
import io
import json
import subprocess
import sys
from pathlib import Path

import pytest

from app.cli import COMMANDS
from app.tabular import NODE_FIELDS, NODE_NUMBERS
from engine.outcome import evaluate
from engine.store import read

ROOT = Path(__file__).parents[3]
MEETING_ROOM = ROOT / "sample_projects" / "meeting_room.gainwright"


@pytest.fixture
def run(capsys):
    def run_command(*argv: object) -> tuple[int, str, str]:
        name, *rest = map(str, argv)
        status = COMMANDS[name](rest)
        printed = capsys.readouterr()
        return status, printed.out, printed.err

    return run_command


def number_or_null(value: object) -> bool:
    return value is None or (isinstance(value, float) and value == value)


def test_every_command_explains_itself(run):
    assert {"table", "check", "sheet", "diagram", "signal", "programme"} <= set(COMMANDS)
    for name in COMMANDS:
        status, out, _ = run(name, "--help")
        assert status == 0
        assert f"gainwright {name}" in out


def test_a_signal_is_written_and_read_back(run, tmp_path):
    target = tmp_path / "pink.wav"
    status, out, err = run("signal", "pink", "-o", target, "--level", "-18", "--seconds", "5")
    assert status == 0
    assert "-18 dBFS" in out
    assert "protect ears" in err
    status, out, _ = run("programme", target, "--json")
    assert status == 0
    assert json.loads(out)["rms_dbfs"] == pytest.approx(-18.0, abs=0.02)
    assert run("programme", target)[0] == 0
    status, _, err = run("signal", "sine", "-o", target, "--level", "3")
    assert (status, "lower the level" in err) == (2, True)
    status, _, err = run("programme", __file__)
    assert (status, "cannot be read" in err) == (2, True)


# -- table ---------------------------------------------------------------------------------------------------


def test_table_json_has_the_documented_shape(run):
    status, out, err = run("table", MEETING_ROOM, "--json")
    assert (status, err) == (0, "")
    found = json.loads(out)
    assert list(found) == ["nodes", "seats", "loudspeakers", "findings"]
    for node in found["nodes"]:
        assert tuple(node) == NODE_FIELDS
        assert node["port"] in ("in", "out")
        assert node["domain"] in ("acoustic", "analogue", "digital")
        assert node["unit"] in ("dBu", "dBFS", "dB SPL")
        assert isinstance(node["index"], int)
        assert all(number_or_null(node[name]) for name in NODE_NUMBERS)
    for seat in found["seats"]:
        assert {"name", "level", "level_a", "peak", "hiss", "hiss_a", "hiss_margin", "budget"} <= set(seat)
        shares = [line["share"] for line in seat["budget"]]
        assert shares == sorted(shares, reverse=True)
        assert sum(shares) == pytest.approx(1.0, abs=1e-9)
        assert all(
            set(line) == {"stage", "name", "origin", "hiss", "hiss_a", "share"} for line in seat["budget"]
        )
    for load in found["loudspeakers"]:
        assert set(load) == {"stage", "name", "average_w", "peak_w", "continuous_margin_db", "peak_margin_db"}
    for finding in found["findings"]:
        assert set(finding) == {"severity", "code", "stage", "message"}
        assert finding["severity"] in ("stop", "mend", "note")


def test_table_json_is_the_engines_own_numbers(run):
    outcome = evaluate(read(MEETING_ROOM)[0])
    found = json.loads(run("table", MEETING_ROOM, "--json")[1])
    for record, node in zip(found["nodes"], outcome.nodes, strict=True):
        assert (record["stage"], record["port"]) == (node.stage, node.direction)
        assert [record[name] for name in NODE_NUMBERS] == [getattr(node, name) for name in NODE_NUMBERS]


def test_table_csv_says_the_same_as_json(run):
    nodes = json.loads(run("table", MEETING_ROOM, "--json")[1])["nodes"]
    rows = list(csv.DictReader(io.StringIO(run("table", MEETING_ROOM, "--csv")[1])))
    assert len(rows) == len(nodes)
    for row, node in zip(rows, nodes, strict=True):
        assert {key: "" if value is None else str(value) for key, value in node.items()} == row


def test_table_of_a_test_tone(run):
    by_tone = json.loads(run("table", MEETING_ROOM, "--json", "--tone", "1000")[1])["nodes"]
    outcome = evaluate(read(MEETING_ROOM)[0], tone_hz=1000.0)
    assert [node["level"] for node in by_tone] == [node.level for node in outcome.nodes]
    assert (
        run("table", MEETING_ROOM, "--json", "--tone", "1 kHz")[1]
        == run("table", MEETING_ROOM, "--json", "--tone", "1000 Hz")[1]
    )


def test_table_as_text_names_every_stage(run):
    status, out, _ = run("table", MEETING_ROOM)
    assert status == 0
    for stage in read(MEETING_ROOM)[0].stages:
        assert stage.name in out


# -- check ---------------------------------------------------------------------------------------------------


def test_check_of_a_sound_project_is_status_0(run):
    status, out, err = run("check", MEETING_ROOM)
    assert (status, err) == (0, "")
    assert out.strip()
    assert not any(line.startswith("stop") for line in out.splitlines())


def test_check_with_a_stop_is_status_1(run, clipping):
    status, out, _ = run("check", clipping)
    assert status == 1
    assert out.startswith("stop  ")


@pytest.fixture
def clipping(tmp_path):
    """The meeting room with every source 60 dB too loud."""
    from engine.store import write

    project = read(MEETING_ROOM)[0]
    sources = [
        stage for stage in project.stages if not stage.inputs() and "level_spl" in type(stage).figure_specs()
    ]
    assert sources, "the meeting room has people talking"
    changes = {
        stage.id: (
            stage,
            stage.with_fields(level_spl=stage.level_spl.model_copy(update={"text": "140 dB SPL"})),
        )
        for stage in sources
    }
    path = tmp_path / "loud.gainwright"
    write(path, project.with_changes(changes))
    return path


# -- sheet and diagram ---------------------------------------------------------------------------------------


def test_sheet_writes_a_pdf(run, tmp_path, qapp):
    target = tmp_path / "out.pdf"
    assert run("sheet", MEETING_ROOM, "-o", target, "--paper", "Letter", "--only", "findings") == (0, "", "")
    assert target.read_bytes().startswith(b"%PDF-")


@pytest.mark.parametrize(("ending", "start"), [("png", b"\x89PNG"), ("svg", b"<?xml"), ("pdf", b"%PDF-")])
def test_diagram_writes_each_form(run, tmp_path, qapp, ending, start):
    target = tmp_path / f"out.{ending}"
    assert run("diagram", MEETING_ROOM, "-o", target, "--size", "900x500", "--scheme", "dark") == (0, "", "")
    assert target.read_bytes().startswith(start)


def test_diagram_has_the_size_asked_for(run, tmp_path, qapp):
    from PySide6.QtGui import QImage

    target = tmp_path / "out.png"
    run("diagram", MEETING_ROOM, "-o", target, "--size", "900x500")
    image = QImage(str(target))
    assert (image.width(), image.height()) == (900, 500)


# -- what goes wrong -----------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", ["table", "check"])
def test_a_missing_file_is_status_2(run, tmp_path, name):
    status, out, err = run(name, tmp_path / "nowhere.gainwright")
    assert (status, out) == (2, "")
    assert "nowhere.gainwright" in err
    assert "Traceback" not in err


@pytest.mark.parametrize("name", ["table", "check"])
def test_a_file_that_is_none_of_ours_is_status_2(run, tmp_path, name):
    path = tmp_path / "list.gainwright"
    path.write_text("eggs, milk\n", encoding="utf-8")
    status, out, err = run(name, path)
    assert (status, out) == (2, "")
    assert err.strip()


@pytest.mark.parametrize(
    ("argv", "said"),
    [
        (("table",), "FILE"),
        (("table", MEETING_ROOM, "--json", "--csv"), "--csv"),
        (("table", MEETING_ROOM, "--tone", "5"), "20 Hz to 20 kHz"),
        (("table", MEETING_ROOM, "--tone", "loud"), "loud"),
        (("sheet", MEETING_ROOM), "--output"),
        (("sheet", MEETING_ROOM, "-o", "x.pdf", "--paper", "B5"), "B5"),
        (("sheet", MEETING_ROOM, "-o", "x.pdf", "--only", "menu"), "there is no sheet 'menu'"),
        (("sheet", MEETING_ROOM, "-o", "no/such/folder/x.pdf"), "there is no folder"),
        (("diagram", MEETING_ROOM, "-o", "x.gif"), ".png, .svg or .pdf"),
        (("diagram", MEETING_ROOM, "-o", "x.png", "--size", "big"), "1400x700"),
        (("diagram", MEETING_ROOM, "-o", "x.png", "--path", "nobody"), "nobody"),
    ],
)
def test_wrong_arguments_are_status_2(run, qapp, argv, said):
    status, out, err = run(*argv)
    assert (status, out) == (2, "")
    assert said in err


def test_help_is_status_0(run):
    status, out, _ = run("table", "--help")
    assert status == 0
    assert "--json" in out


# -- what is loaded ------------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", ["table", "check"])
def test_no_qt_is_loaded_by(name):
    code = (
        "import sys; from app.cli import COMMANDS; "
        f"status = COMMANDS[{name!r}]([{str(MEETING_ROOM)!r}]); "
        "print(status, sorted(m for m in sys.modules if m.split('.')[0] in "
        "('PySide6', 'shiboken6', 'pyqtgraph', 'scipy', 'soundfile', 'segno')), file=sys.stderr)"
    )
    ran = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    assert ran.stderr.strip().splitlines()[-1] == "0 []"
