"""The project file: what goes round comes back alike, what is wrong is refused with its place, nothing is lost.

The rules are DESIGN's own; JSON itself is RFC 8259 (no NaN, no infinity, UTF-8), and the digest is SHA-256 (FIPS 180-4).
"""

from __future__ import annotations

import difflib
import hashlib
import json
import os
import stat
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from engine import store
from engine.figures import Figure
from engine.project import HEADER_KEY, Header, Link, Project
from engine.stages import KINDS, template
from engine.store import StoreError, digest, from_text, read, settings_digest, to_text, write


def small() -> Project:
    """A microphone into a preamplifier, beside a power amplifier that stands alone."""
    return Project(
        header=Header(name="Hall of nowhere"),
        stages=(
            template("microphone", "mic", "Lectern mic", column=0),
            template("preamplifier", "pre", "Preamp 3", column=1, gain_db={"value": 40.0}),
            template("power_amplifier", "amp-a", "Amplifier A", column=2, row=1),
        ),
        links=(Link(id="l1", source="mic", target="pre"),),
    )


def raw() -> dict[str, Any]:
    content: dict[str, Any] = json.loads(to_text(small()))
    return content


def stage(content: dict[str, Any], key: str) -> dict[str, Any]:
    found: dict[str, Any] = next(each for each in content["stages"] if each["id"] == key)
    return found


# -- round trips ---------------------------------------------------------------------------------------------
def test_comes_back_as_it_went():
    project = small()
    back, notes = from_text(to_text(project))
    assert back.same_as(project)
    assert notes == ()
    assert to_text(back) == to_text(project)


def test_every_kind_comes_back_as_it_went():
    project = Project(stages=tuple(template(kind, kind, column=n) for n, kind in enumerate(KINDS)))
    back, notes = from_text(to_text(project))
    assert back.same_as(project)
    assert notes == ()


def test_starts_with_format_and_version():
    lines = to_text(small()).splitlines()
    assert lines[1] == ' "format": "gainwright",'
    assert lines[2] == f' "version": {store.FORMAT_VERSION},'
    assert list(raw()) == ["format", "version", "project", "stages", "links"]


def test_version_is_number_of_migrations_plus_one():
    from engine.store.migrations import MIGRATIONS

    assert len(MIGRATIONS) + 1 == store.FORMAT_VERSION


def test_older_version_is_raised_step_by_step(monkeypatch: pytest.MonkeyPatch):
    from engine.store import migrations, opening

    def name_the_venue(old: dict[str, Any]) -> dict[str, Any]:
        return {**old, "project": {**old["project"], "name": old["project"].pop("venue")}}

    monkeypatch.setattr(migrations, "MIGRATIONS", (name_the_venue,))
    monkeypatch.setattr(migrations, "FORMAT_VERSION", 2)
    monkeypatch.setattr(opening, "FORMAT_VERSION", 2)
    old = raw()
    old["project"]["venue"] = old["project"].pop("name")
    assert from_text(json.dumps(old))[0].header.name == "Hall of nowhere"


def test_comma_decimal_stays_as_typed():
    project = small()
    amp = project.stage["amp-a"].with_fields(z_in_ohm=Figure(text="1,4 k"))
    project = project.with_changes({"amp-a": (project.stage["amp-a"], amp)})
    text = to_text(project)
    assert '"text": "1,4 k"' in text
    assert from_text(text)[0].stage["amp-a"].values()["z_in_ohm"] == pytest.approx(1400.0)


def test_an_empty_figure_that_has_a_typical_value_stays_empty():
    project = small()
    pre = project.stage["pre"].with_fields(pad_db=None)
    project = project.with_changes({"pre": (project.stage["pre"], pre)})
    assert from_text(to_text(project))[0].stage["pre"].pad_db is None


def test_unknown_fields_are_kept_and_reported():
    content = raw()
    content["mood"] = {"colour": "calm"}
    stage(content, "amp-a")["fan"] = [1, 2, {"deep": None}]
    stage(content, "amp-a")["z_in_ohm"]["sheet_page"] = 7
    content["links"][0]["plug"] = "XLR"
    content["project"]["client"] = "nobody"
    project, notes = from_text(json.dumps(content))
    again = json.loads(to_text(project))
    assert again["mood"] == {"colour": "calm"}
    assert stage(again, "amp-a")["fan"] == [1, 2, {"deep": None}]
    assert stage(again, "amp-a")["z_in_ohm"]["sheet_page"] == 7
    assert again["links"][0]["plug"] == "XLR"
    assert again["project"]["client"] == "nobody"
    assert set(notes) == {
        'the project: "client" is not known here; it is kept as it stands',
        'stage "amp-a": "fan" is not known here; it is kept as it stands',
        'stage "amp-a", Input impedance: "sheet_page" is not known here; it is kept as it stands',
        'link "l1": "plug" is not known here; it is kept as it stands',
        'the file: "mood" is not known here; it is kept as it stands',
    }


def test_unknown_fields_outlive_an_edit():
    content = raw()
    stage(content, "pre")["fan"] = 3
    project, _ = from_text(json.dumps(content))
    moved = project.stage["pre"].with_control("gain_db", 12.0)
    project = project.with_changes({"pre": (project.stage["pre"], moved)})
    assert stage(json.loads(to_text(project)), "pre")["fan"] == 3


names = st.text(st.characters(exclude_categories=["Cs"]), min_size=1, max_size=20)
json_values = st.recursive(
    st.none()
    | st.booleans()
    | st.integers(-(2**53), 2**53)
    | st.floats(allow_nan=False, allow_infinity=False)
    | names,
    lambda inside: st.lists(inside, max_size=3) | st.dictionaries(names, inside, max_size=3),
    max_leaves=5,
)


@given(
    venue=names,
    blocks=st.lists(st.tuples(st.sampled_from(sorted(KINDS)), names, st.integers(0, 50)), max_size=6),
    extra=st.dictionaries(names.map(lambda name: f"x_{name}"), json_values, max_size=2),
    gain=st.integers(0, 60),
)
def test_anything_valid_comes_back_as_it_went(
    venue: str, blocks: list[tuple[str, str, int]], extra: dict[str, Any], gain: int
):
    stages = [
        template(kind, f"s-{n}", name, column=column, **extra)
        for n, (kind, name, column) in enumerate(blocks)
    ]
    stages.append(template("preamplifier", "pre", gain_db={"value": float(gain)}))
    project = Project(header=Header(name=venue), stages=tuple(stages), **extra)
    text = to_text(project)
    back, _ = from_text(text)
    assert back.same_as(project)
    assert to_text(back) == text
    assert digest(back) == digest(project)


# -- a file that diffs well ----------------------------------------------------------------------------------
def test_one_control_moved_is_one_line_changed():
    before = small()
    moved = before.stage["pre"].with_control("gain_db", 12.0)
    after = before.with_changes({"pre": (before.stage["pre"], moved)})
    lines = difflib.unified_diff(to_text(before).splitlines(), to_text(after).splitlines(), n=0, lineterm="")
    changed = [line for line in lines if line[0] in "+-" and line[:3] not in ("+++", "---")]
    assert [line.strip("+- ") for line in changed] == ['"value": 40.0,', '"value": 12.0,']


def test_no_line_holds_two_values():
    for line in to_text(small()).splitlines():
        assert len(line.split('": ')) <= 2


def test_text_does_not_depend_on_the_order_of_building():
    project = small()
    turned = Project(header=project.header, stages=project.stages[::-1], links=project.links[::-1])
    assert to_text(turned) == to_text(project)
    mic = project.stage["mic"]
    gone = project.with_changes({"l1": (project.link["l1"], None), "mic": (mic, None)})
    back = gone.with_changes({"mic": (None, mic), "l1": (None, project.link["l1"])})
    assert to_text(back) == to_text(project)


# -- refusals ------------------------------------------------------------------------------------------------
def put(*path: str | int, value: object) -> Callable[[], str]:
    """A file with one value put in its place; the first name of a stage's path is its id."""

    def text() -> str:
        content = raw()
        at: Any = stage(content, str(path[1])) if path[0] == "stages" and len(path) > 2 else content
        for key in path[2:-1] if at is not content else path[:-1]:
            at = at[key]
        at[path[-1]] = value
        return json.dumps(content)

    return text


def replaced(old: str, new: str) -> Callable[[], str]:
    def text() -> str:
        whole = to_text(small())
        assert old in whole
        return whole.replace(old, new, 1)

    return text


REFUSED: list[tuple[Callable[[], str], str]] = [
    (lambda: "", "line 1, column 1"),
    (lambda: "[]", "a project file is one JSON object"),
    (lambda: to_text(small())[:-200], "this is no JSON"),
    (lambda: "[" * 100_000, "nested deeper"),
    (lambda: '{"format": "gainwright", "version": 1, "x": ' + "[" * 60 + "]" * 60 + "}", 'the file, "x"'),
    (lambda: '{"version": ' + "9" * 6000 + "}", "thousands of digits"),
    (lambda: '{"version": 1}', '"format" should be "gainwright"'),
    (put("format", value="else"), '"format" should be "gainwright"'),
    (put("version", value="1"), '"version" should be a whole number'),
    (put("version", value=True), '"version" should be a whole number'),
    (put("version", value=0), '"version" should be a whole number'),
    (put("version", value=store.FORMAT_VERSION + 1), "open it with a newer one. The file was left as it is"),
    (replaced('"format": "gainwright",', '"format": "gainwright", "format": "gainwright",'), '"format" stands twice'),
    (replaced('"name": "Preamp 3",', '"name": "Preamp 3", "name": "P",'), 'stage "pre": "name" stands twice'),
    (replaced('"text": "60 dB",', '"text": "60 dB", "text": "6 dB",'), 'stage "pre", Highest gain: "text" stands twice'),
    (replaced('"value": 40.0', '"value": NaN'), 'stage "pre", Gain: NaN is no number'),
    (replaced('"value": 40.0', '"value": -Infinity'), 'stage "pre", Gain: -Infinity is no number'),
    (replaced('"value": 40.0', '"value": 1e999'), 'stage "pre", Gain: a number too large'),
    (replaced('"Preamp 3"', '"\\ud83d"'), 'stage "pre", "name": the text holds half a character'),
    (put("stages", value={}), '"stages" should be a list'),
    (put("stages", 0, value=5), "stage 1, kind: it has none"),
    (put("links", value=[5]), "link 1: it should be an object"),
    (put("project", value=[]), "the project: it should be an object"),
    (put("header", value={}), '"header" should be called "project"'),
    (put("project", "revision", value=0), 'the project, "revision"'),
    (put("project", "temperature_c", "text", value="warm"), "the project, Temperature"),
    (put("stages", "pre", "kind", value="flux_capacitor"), 'stage "pre", kind: \'flux_capacitor\' is unknown here'),
    (put("stages", "pre", "kind", value=["preamplifier"]), 'stage "pre", kind'),
    (put("stages", "pre", "id", value="mic"), "id 'mic' stands twice"),
    (put("stages", "pre", "column", value="1"), 'stage "pre", "column": input should be a valid integer'),
    (put("stages", "pre", "column", value=-1), 'stage "pre", "column"'),
    (put("stages", "pre", "name", value=None), 'stage "pre", "name"'),
    (put("stages", "pre", "gain_db", value=40), 'stage "pre", Gain'),
    (put("stages", "pre", "gain_db", value={}), 'stage "pre", Gain: it is missing'),
    (put("stages", "pre", "gain_db", "value", value="40"), 'stage "pre", Gain'),
    (put("stages", "pre", "gain_db", "value", value=99.0), 'stage "pre", Gain stands at 99 dB: it goes from'),
    (put("stages", "pre", "gain_db", "state", value="stuck"), 'stage "pre", Gain, "state"'),
    (put("stages", "pre", "z_in_ohm", "text", value="2 furlongs"), 'stage "pre", Input impedance: '),
    (put("stages", "pre", "z_in_ohm", "text", value="−3 k"), 'stage "pre", Input impedance: '),
    (put("stages", "pre", "z_in_ohm", value=None), 'stage "pre", Input impedance'),
    (put("stages", "pre", "form", value="shouted"), 'stage "pre", '),
    (put("links", 0, "source", value="nobody"), "link 'l1' names stage 'nobody', which is not in the project"),
    (put("links", 0, "target", value="amp-z"), "link 'l1' names stage 'amp-z', which is not in the project"),
    (put("links", 0, "input", value="in_9"), "Preamp 3 has no input 'in_9'"),
    (put("links", 0, "wiring", value="wet string"), 'link "l1", Wiring'),
    (put("links", 0, "distance_m", value={"text": "NaN m"}), 'link "l1", Distance'),
]  # fmt: skip


@pytest.mark.parametrize(("text", "says"), REFUSED, ids=[says[:40] for _, says in REFUSED])
def test_wrong_files_are_refused_with_their_place(text: Callable[[], str], says: str):
    with pytest.raises(StoreError) as refused:
        from_text(text())
    assert says in str(refused.value)
    assert "pydantic" not in str(refused.value)


def test_a_text_too_long_is_refused(monkeypatch: pytest.MonkeyPatch, tmp_path: Path):
    from engine.store import disk, opening

    monkeypatch.setattr(opening, "MAX_BYTES", 100)
    with pytest.raises(StoreError, match="at most 100"):
        from_text(to_text(small()))
    monkeypatch.setattr(disk, "MAX_BYTES", 100)
    file = tmp_path / "a.gainwright"
    write(file, small())
    with pytest.raises(StoreError, match=r"a\.gainwright is .* bytes long"):
        read(file)


def test_too_many_links_are_refused_before_they_are_looked_at():
    with pytest.raises(StoreError, match='"links" holds 100,001'):
        from_text(json.dumps({"format": "gainwright", "version": 1, "links": [0] * 100_001}))


def test_a_number_that_is_not_finite_is_not_written():
    with pytest.raises(StoreError, match="not finite"):
        to_text(Project.model_construct(header=Header(), stages=(), links=(), x=float("nan")))


# -- the disk ------------------------------------------------------------------------------------------------
def test_write_then_read(tmp_path: Path):
    file = tmp_path / "venue.gainwright"
    write(file, small())
    assert read(file)[0].same_as(small())
    assert file.read_bytes() == to_text(small()).encode()
    assert list(tmp_path.iterdir()) == [file]


def test_reads_past_a_byte_order_mark_and_refuses_other_encodings(tmp_path: Path):
    file = tmp_path / "venue.gainwright"
    file.write_bytes(b"\xef\xbb\xbf" + to_text(small()).encode())
    assert read(file)[0].same_as(small())
    file.write_bytes(to_text(small()).encode("utf-16"))
    with pytest.raises(StoreError, match=r"venue\.gainwright is not a project: byte 0 is no UTF-8"):
        read(file)


def test_a_folder_is_no_file_and_a_missing_file_says_so(tmp_path: Path):
    with pytest.raises(StoreError, match="is not a file"):
        read(tmp_path)
    with pytest.raises(FileNotFoundError):
        read(tmp_path / "none.gainwright")


def test_a_symbolic_link_is_followed_and_kept(tmp_path: Path):
    (tmp_path / "real").mkdir()
    file, link = tmp_path / "real" / "a.gainwright", tmp_path / "b.gainwright"
    write(file, Project())
    link.symlink_to(file)
    write(link, small())
    assert link.is_symlink()
    assert read(file)[0].same_as(small())
    assert {each.name for each in tmp_path.iterdir()} == {"real", "b.gainwright"}


def test_what_a_killed_write_left_is_cleared_by_the_next(tmp_path: Path):
    file, left, fresh = (
        tmp_path / name for name in ("a[1].gainwright", ".a[1].gainwright.0.part", ".a[1].gainwright.1.part")
    )
    for each in (left, fresh):
        each.write_text("{", encoding="utf-8")
    os.utime(left, (0, 0))
    write(file, small())
    assert not left.exists()
    assert fresh.exists(), "another process may be at it just now"


@pytest.mark.skipif(os.name == "nt", reason="POSIX permissions")
def test_permissions_are_kept(tmp_path: Path):
    file = tmp_path / "a.gainwright"
    write(file, Project())
    usual = stat.S_IMODE(file.stat().st_mode)
    assert usual == 0o666 & ~_umask()
    file.chmod(0o640)
    write(file, small())
    assert stat.S_IMODE(file.stat().st_mode) == 0o640


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask


@pytest.mark.parametrize("broken", ["fsync", "replace", "write"])
def test_the_old_file_outlives_any_failure(broken: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch):
    file = tmp_path / "a.gainwright"
    write(file, Project())
    old = file.read_bytes()

    def fail(*_: object, **__: object) -> None:
        raise OSError(28, "No space left on device")

    if broken == "fsync":
        monkeypatch.setattr(os, "fsync", fail)
    elif broken == "replace":
        monkeypatch.setattr(Path, "replace", fail)
    else:
        monkeypatch.setattr("engine.store.disk.os.fdopen", fail)
    with pytest.raises(OSError, match="No space left"):
        write(file, small())
    monkeypatch.undo()
    assert file.read_bytes() == old
    assert list(tmp_path.iterdir()) == [file]


def test_what_cannot_be_written_never_touches_the_file(tmp_path: Path):
    file = tmp_path / "a.gainwright"
    write(file, small())
    old = file.stat().st_mtime_ns
    with pytest.raises(StoreError):
        write(file, Project.model_construct(header=Header(), stages=(), links=(), x=float("inf")))
    assert file.stat().st_mtime_ns == old


def test_a_missing_folder_and_a_folder_in_its_place_are_told(tmp_path: Path):
    with pytest.raises(FileNotFoundError):
        write(tmp_path / "gone" / "a.gainwright", small())
    (tmp_path / "dir.gainwright").mkdir()
    with pytest.raises(OSError, match=r"dir\.gainwright"):
        write(tmp_path / "dir.gainwright", small())
    assert [each.name for each in tmp_path.iterdir()] == ["dir.gainwright"]


def test_a_write_protected_file_is_not_replaced(tmp_path: Path, monkeypatch: pytest.MonkeyPatch):
    file = tmp_path / "a.gainwright"
    write(file, Project())
    monkeypatch.setattr(os, "access", lambda *_: False)  # root may write anywhere
    with pytest.raises(PermissionError, match="write-protected"):
        write(file, small())
    assert read(file)[0].same_as(Project())


# -- digests -------------------------------------------------------------------------------------------------
def test_digest_is_ten_hex_digits_of_sha256():
    empty = Project(header=Header())
    found = digest(empty)
    assert len(found) == 10
    assert int(found, 16) >= 0
    assert settings_digest(empty) == hashlib.sha256(b"{}").hexdigest()[:10]


def test_digest_follows_what_counts_and_nothing_else():
    project = small()
    pre = project.stage["pre"]

    def after(key: str, new: Any) -> Project:
        return project.with_changes({key: (project.item(key), new)})

    amp = project.stage["amp-a"]
    assert digest(after("amp-a", amp.with_fields(column=7, row=3))) == digest(project)
    assert digest(after(HEADER_KEY, project.header.model_copy(update={"name": "Elsewhere"}))) == digest(
        project
    )
    moved = after("pre", pre.with_control("gain_db", 12.0))
    assert digest(moved) != digest(project)
    assert settings_digest(moved) != settings_digest(project)
    typed = after("pre", pre.with_fields(z_in_ohm=Figure(text="3 k")))
    assert digest(typed) != digest(project)
    assert settings_digest(typed) == settings_digest(project)
    warm = after(HEADER_KEY, project.header.with_fields(temperature_c=Figure(text="30 °C")))
    assert digest(warm) != digest(project)
    assert digest(after("l1", None)) != digest(project)
