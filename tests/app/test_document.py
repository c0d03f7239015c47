"""The document: one way to change, one undo entry per gesture, one solve per frame, modified against what is saved."""

from __future__ import annotations

import gc
import sys
import time
import weakref
from pathlib import Path

import pytest
from PySide6.QtCore import QCoreApplication

from app import edits
from app.document import Document, Edit
from engine import store
from engine.outcome import Outcome, evaluate
from engine.project import Link, Project
from engine.stages import template
from engine.topology import LinkError


def chain() -> Project:
    return Project(
        stages=(
            template("sound_source", "talker", "Talker", column=0),
            template("microphone", "mic", "Lectern mic", column=1),
            template("preamplifier", "pre", "Preamp 3", column=2, gain_db={"value": 40.0}),
        ),
        links=(
            Link(id="l1", source="talker", target="mic"),
            Link(id="l2", source="mic", target="pre"),
        ),
    )


@pytest.fixture
def document(qapp: QCoreApplication) -> Document:
    return Document(chain())


@pytest.fixture
def solves(monkeypatch: pytest.MonkeyPatch) -> list[Project]:
    """Every project that is solved."""
    seen: list[Project] = []

    def counted(project: Project, previous: Outcome | None = None) -> Outcome:
        seen.append(project)
        return evaluate(project, previous)

    monkeypatch.setattr("app.document.evaluate", counted)
    return seen


def slide(document: Document, value: float, gesture: object | None = "gain") -> bool:
    return document.edit(
        "Gain of Preamp 3", edits.set_control(document.project, "pre", "gain_db", value), gesture
    )


def gain(document: Document) -> float | None:
    value: float | None = document.project.stage["pre"].gain_db.value
    return value


# -- counting: DESIGN section 11 -----------------------------------------------------------------------------
def test_one_tick_is_one_edit_and_one_solve(document, solves, qtbot):
    facts: list[object] = []
    document.changed.connect(facts.append)
    with qtbot.waitSignal(document.solved):
        slide(document, 41.0)
    assert document.undo_stack.count() == 1
    assert len(solves) == 1
    assert len(facts) == 1
    assert list(facts[0]) == ["pre"]  # type: ignore[call-overload]
    assert document.outcome.project is document.project


def test_a_drag_of_a_hundred_ticks_is_one_undo_entry(document, solves):
    start = document.project
    for tick in range(100):
        slide(document, 10.0 + tick % 50)
    document.end_gesture()
    assert document.undo_stack.count() == 1
    assert len(solves) == 1
    document.undo()
    assert document.project.same_as(start)
    document.redo()
    assert gain(document) == 59.0


def test_a_flood_is_throttled_and_not_starved(document, solves, qtbot):
    ticks = 0
    end = time.monotonic() + 0.5
    while time.monotonic() < end:
        for _ in range(20):
            ticks += 1
            slide(document, float(ticks % 60))
        QCoreApplication.processEvents()
    slide(document, 42.0)
    document.end_gesture()
    assert ticks > 200
    # 16 ms a frame allow 31 solves in half a second; a debounce would have allowed the last one only.
    assert 5 <= len(solves) <= 33
    assert document.outcome.project is document.project
    assert document.undo_stack.count() == 1


def test_flush_solves_what_waits_and_only_that(document, solves):
    slide(document, 41.0)
    document.flush()
    document.flush()
    assert len(solves) == 1


# -- gestures ------------------------------------------------------------------------------------------------
def test_two_gestures_are_two_entries(document):
    slide(document, 41.0)
    document.end_gesture()
    slide(document, 42.0)
    slide(document, 43.0, gesture=None)
    slide(document, 44.0, gesture="another")
    assert document.undo_stack.count() == 4


def test_a_gesture_that_comes_back_leaves_nothing(document):
    slide(document, 41.0)
    slide(document, 45.0)
    slide(document, 40.0)
    assert document.undo_stack.count() == 0
    assert not document.modified


def test_undo_ends_a_gesture(document):
    slide(document, 41.0)
    document.undo()
    slide(document, 45.0)
    document.undo()
    assert gain(document) == 40.0


def test_undo_within_a_gesture_takes_back_the_whole(document):
    slide(document, 41.0)
    slide(document, 42.0)
    document.undo()
    assert gain(document) == 40.0


def test_save_ends_a_gesture(document, tmp_path):
    slide(document, 41.0)
    document.save(tmp_path / "a.gainwright")
    slide(document, 42.0)
    assert document.undo_stack.count() == 2
    document.undo()
    assert gain(document) == 41.0
    assert not document.modified


def test_what_waits_for_the_end_of_a_gesture_is_told(document, solves):
    told: list[bool] = []
    document.solved.connect(lambda _: told.append(document.gesture_open))
    slide(document, 41.0)
    document.flush()
    assert document.gesture_open
    document.end_gesture()
    document.end_gesture()
    assert told == [True, False]
    assert len(solves) == 1


# -- checked before it is pushed -----------------------------------------------------------------------------
def test_what_cannot_be_is_refused_and_changes_nothing(document):
    before = document.project
    link = Link(id="l9", source="pre", target="talker")
    with pytest.raises(LinkError):
        document.edit("Link", {"l9": (None, link)})
    assert document.project is before
    assert document.undo_stack.count() == 0


def test_an_edit_made_for_another_state_is_refused(document):
    stale = edits.set_control(document.project, "pre", "gain_db", 12.0)
    slide(document, 41.0)
    with pytest.raises(ValueError, match="changed in the meantime"):
        document.edit("Gain", stale)


def test_an_edit_that_changes_nothing_is_none(document):
    assert not slide(document, 40.0)
    assert document.undo_stack.count() == 0


def test_adding_and_deleting_is_undone_whole(document, solves):
    start = document.project
    document.edit("Delete Lectern mic", edits.delete(document.project, {"mic"}))
    assert "mic" not in document.project.stage
    assert len(solves) == 1
    assert document.outcome.project.same_as(document.project)
    document.undo()
    assert document.project.same_as(start)
    assert {node.stage for node in document.outcome.nodes} == {"talker", "mic", "pre"}


def test_changes_are_announced_in_the_direction_they_go(document):
    facts: list[dict[str, tuple[object, object]]] = []
    slide(document, 41.0)
    document.changed.connect(facts.append)
    document.undo()
    before, after = facts[0]["pre"]
    assert before.gain_db.value == 41.0
    assert after.gain_db.value == 40.0


# -- modified ------------------------------------------------------------------------------------------------
def test_modified_means_not_identical_to_the_saved_project(document, tmp_path):
    told: list[bool] = []
    document.file_changed.connect(lambda: told.append(document.modified))
    slide(document, 41.0)
    assert document.modified
    slide(document, 42.0, gesture=None)
    document.undo()
    document.undo()
    assert not document.modified
    document.redo()
    document.save(tmp_path / "a.gainwright")
    assert not document.modified
    document.undo()
    assert document.modified
    slide(document, 41.0)  # by hand to where it was saved, and not by redo
    assert not document.modified
    assert told == [True, False, True, False, True, False]


def test_save_writes_the_file_and_a_failed_save_changes_nothing(document, tmp_path):
    file = tmp_path / "a.gainwright"
    slide(document, 41.0)
    document.save(file)
    assert store.read(file)[0].same_as(document.project)
    assert document.path == file
    slide(document, 42.0)
    with pytest.raises(OSError, match="b"):
        document.save(tmp_path / "missing" / "b.gainwright")
    assert document.path == file
    assert document.modified
    with pytest.raises(ValueError, match="no file yet"):
        Document().save()


def test_a_file_changed_by_someone_else_is_noticed(document, tmp_path):
    file = tmp_path / "a.gainwright"
    assert not document.changed_on_disk
    document.save(file)
    assert not document.changed_on_disk
    store.write(file, Project())
    assert document.changed_on_disk
    document.save()
    assert not document.changed_on_disk
    file.unlink()
    assert not document.changed_on_disk


def test_load_puts_another_project_in_place(document, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, Project(stages=(template("pad", "pad-1"),)))
    slide(document, 41.0)
    document.select({"pre"})
    facts: list[dict[str, object]] = []
    document.changed.connect(facts.append)
    project, _ = store.read(file)
    document.load(project, file)
    assert set(facts[0]) == {"talker", "mic", "pre", "l1", "l2", "pad-1"}
    assert document.selection == frozenset()
    assert document.undo_stack.count() == 0
    assert not document.modified
    assert {node.stage for node in document.outcome.nodes} == {"pad-1"}


def test_recovered_work_is_modified_against_its_file(document, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, Project())
    document.load(chain(), file, saved=Project())
    assert document.modified


# -- selection -----------------------------------------------------------------------------------------------
def test_selection_holds_only_what_is_there(document):
    told: list[frozenset[str]] = []
    document.selection_changed.connect(told.append)
    document.select({"pre", "l1", "nobody"})
    document.select({"pre", "l1"})
    document.edit("Delete Preamp 3", edits.delete(document.project, {"pre"}))
    assert told == [frozenset({"pre", "l1"}), frozenset({"l1"})]


# -- hygiene -------------------------------------------------------------------------------------------------
def test_many_edits_leave_nothing_behind(qapp):
    """Documents come and go with their stacks; the reference count of None is steady where it is counted."""
    gone: list[weakref.ref[Document]] = []
    nones = 0
    for run in range(51):
        if run == 1:  # the first one warms the caches
            gc.collect()
            nones = sys.getrefcount(None)
        document = Document(chain())
        for tick in range(20):
            slide(document, float(tick), gesture=None)
        document.undo()
        document.redo()
        gone.append(weakref.ref(document))
        del document
    gc.collect()
    assert not any(ref() for ref in gone)
    assert abs(sys.getrefcount(None) - nones) < 400


def test_an_edit_whose_document_is_gone_does_nothing(qapp):
    document = Document(chain())
    edit = Edit(document, "Gain", {}, None)
    del document
    gc.collect()
    edit.redo()
    edit.undo()


def test_paths_are_kept_absolute(document, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    document.save(Path("a.gainwright"))
    assert document.path == tmp_path / "a.gainwright"
