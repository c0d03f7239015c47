"""Unsaved work outlives its window, a file is open once, and a mishap is told and logged with the work kept."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest
from PySide6.QtCore import QCoreApplication

from app import autosave, edits, places, recovery
from app.autosave import Autosave
from app.document import Document
from app.file_lock import FileLock
from app.mishap import Mishaps, log_file
from app.recovery import Orphan, Slot, hold, orphans
from engine import store
from engine.project import Header, Project
from engine.stages import template


def chain(name: str = "Hall") -> Project:
    return Project(
        header=Header(name=name),
        stages=(template("preamplifier", "pre", "Preamp 3", gain_db={"value": 40.0}),),
    )


def slide(document: Document, value: float) -> None:
    document.edit("Gain", edits.set_control(document.project, "pre", "gain_db", value), "gain")


def gain(project: Project) -> float:
    value: float = project.stage["pre"].gain_db.value
    return value


@pytest.fixture
def document(qapp: QCoreApplication) -> Document:
    return Document(chain())


@pytest.fixture
def kept(document: Document, monkeypatch: pytest.MonkeyPatch) -> Autosave:
    monkeypatch.setattr(autosave, "DELAY_MS", 30)
    return Autosave(document, Slot())


# -- autosave ------------------------------------------------------------------------------------------------
def test_autosave_waits_two_seconds():
    assert autosave.DELAY_MS == 2000


def test_a_change_is_kept_soon(document, kept, qtbot):
    slide(document, 41.0)
    qtbot.waitUntil(kept._slot.file.exists)
    assert gain(store.read(kept._slot.file)[0]) == 41.0
    kept.close()
    assert list(places.recovery().iterdir()) == []


def test_a_hand_that_never_rests_is_kept_too(document, kept, qtbot):
    end = time.monotonic() + 3.0
    value = 0
    while not kept._slot.file.exists():
        value += 1
        slide(document, float(value % 39))
        QCoreApplication.processEvents()
        assert time.monotonic() < end, "autosave starved"
    kept.close()


def test_what_is_saved_or_undone_is_cleared(document, kept, tmp_path):
    slide(document, 41.0)
    kept.keep_now()
    document.save(tmp_path / "a.gainwright")
    assert not kept._slot.file.exists()
    slide(document, 42.0)
    kept.keep_now()
    assert kept._slot.file.exists()
    document.undo()
    assert not kept._slot.file.exists()
    kept.close()


def test_the_users_file_is_never_touched(document, kept, tmp_path):
    file = tmp_path / "a.gainwright"
    document.save(file)
    before = file.read_bytes()
    slide(document, 41.0)
    kept.keep_now()
    assert file.read_bytes() == before
    assert list(tmp_path.iterdir()) == [file]
    kept.close()


def test_unchanged_work_is_not_written_again(document, kept):
    slide(document, 41.0)
    kept.keep_now()
    first = kept._slot.file.stat().st_mtime_ns
    kept.keep_now()
    assert kept._slot.file.stat().st_mtime_ns == first
    kept.close()


def test_a_full_disk_is_told_once_and_tried_again(document, kept, monkeypatch):
    said: list[str] = []
    kept.failed.connect(said.append)

    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(store, "write", full)
    slide(document, 41.0)
    assert not kept.keep_now()
    assert not kept.keep_now()
    assert said == ["[Errno 28] No space left on device"]
    monkeypatch.undo()
    assert kept.keep_now()
    assert kept._slot.file.exists()
    kept.close()


# -- orphans -------------------------------------------------------------------------------------------------
def test_living_windows_keep_their_own(document, kept):
    slide(document, 41.0)
    kept.keep_now()
    assert orphans() == []
    assert kept._slot.file.exists()
    kept.close()


WINDOW = """
import sys
from pathlib import Path
from PySide6.QtCore import QCoreApplication
from app import edits
from app.autosave import Autosave
from app.document import Document
from app.recovery import Slot
from engine import store

app = QCoreApplication([])
file = Path(sys.argv[1])
document = Document(store.read(file)[0], file)
keeper = Autosave(document, Slot())
step = 0
while True:
    step += 1
    document.edit("Gain", edits.set_control(document.project, "pre", "gain_db", float(step % 39)), "gain")
    app.processEvents()
    keeper.keep_now()
    if step == 3:
        print("ready", flush=True)
    if step % 7 == 0:
        document.save()
"""


def killed_window(file: Path, after_s: float) -> None:
    """A process that edits and saves without pause, killed with no warning."""
    process = subprocess.Popen(
        [sys.executable, "-c", WINDOW, str(file)],
        stdout=subprocess.PIPE,
        env=os.environ | {"PYTHONPATH": str(Path.cwd())},
    )
    assert process.stdout is not None
    with process.stdout:
        assert process.stdout.readline() == b"ready\n"
        time.sleep(after_s)
        process.kill()
        process.wait()


@pytest.mark.skipif(not hasattr(signal, "SIGKILL"), reason="no SIGKILL here")
@pytest.mark.parametrize("after_s", [0.0, 0.013, 0.037])
def test_a_killed_window_leaves_work_and_a_whole_file(after_s, tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, chain("Venue"))
    killed_window(file, after_s)
    saved = store.read(file)[0]  # the old one or the new one, whole
    found = orphans()
    assert len(found) <= 1  # none where it was killed right behind a save
    for orphan in found:
        assert orphan.origin == file
        assert orphan.project.header.name == "Venue"
        assert not orphan.project.same_as(saved)
        orphan.discard()
    assert orphans() == []
    assert [each for each in places.recovery().iterdir() if each.suffix != ".part"] == []


def orphaned(project: Project, origin: Path | None = None) -> None:
    slot = Slot()
    slot.keep(project, origin)
    slot._lock.release()  # as the system does when the process ends


def test_an_orphan_is_offered_once_at_a_time(tmp_path):
    orphaned(chain(), tmp_path / "gone.gainwright")
    first = orphans()
    assert [orphan.origin for orphan in first] == [tmp_path / "gone.gainwright"]
    assert first[0].saved() is None
    assert orphans() == []  # another start meanwhile
    first[0].release()
    again = orphans()
    assert len(again) == 1
    again[0].discard()
    assert list(places.recovery().iterdir()) == []


def test_work_that_equals_its_file_is_not_offered(tmp_path):
    file = tmp_path / "a.gainwright"
    store.write(file, chain())
    orphaned(chain(), file)
    assert orphans() == []
    assert list(places.recovery().iterdir()) == []


def test_work_without_its_note_is_still_offered():
    orphaned(chain(), Path("somewhere.gainwright"))
    for note in places.recovery().glob("*.origin"):
        note.unlink()
    found: list[Orphan] = orphans()
    assert [orphan.origin for orphan in found] == [None]
    found[0].release()


def test_damaged_work_is_left_and_does_not_hide_the_rest(caplog):
    orphaned(chain("One"))
    for file in places.recovery().glob("*.gainwright"):
        file.write_text("{", encoding="utf-8")
    orphaned(chain("Two"))
    found = orphans()
    assert [orphan.project.header.name for orphan in found] == ["Two"]
    assert "cannot be read" in caplog.text
    assert len(list(places.recovery().glob("*.gainwright"))) == 2
    found[0].discard()


def test_locks_of_dead_windows_without_work_are_swept():
    slot = Slot()
    assert slot._lock._handle is not None
    os.close(slot._lock._handle)
    slot._lock._handle = None
    assert len(list(places.recovery().glob("*.lock"))) == 1
    unfinished = places.recovery() / ".x.gainwright.0.part"
    unfinished.write_text("{")
    os.utime(unfinished, (0, 0))
    assert orphans() == []
    assert list(places.recovery().iterdir()) == []


# -- one file, one window ------------------------------------------------------------------------------------
def test_the_second_window_on_a_file_is_told(tmp_path):
    file, link = tmp_path / "a.gainwright", tmp_path / "b.gainwright"
    store.write(file, chain())
    link.symlink_to(file)
    first = hold(file)
    assert first is not None
    assert hold(link) is None
    first.release()
    second = hold(link)
    assert second is not None
    second.release()
    second.release()
    assert [each.name for each in tmp_path.iterdir() if each.suffix == ".lock"] == []


def test_a_lock_whose_file_was_taken_away_is_taken_anew(tmp_path, monkeypatch):
    path = tmp_path / "x.lock"
    seen: list[int] = []

    def taken_away(at: Path, handle: int) -> bool:
        seen.append(handle)
        return len(seen) > 1

    monkeypatch.setattr("app.file_lock._is_still", taken_away)
    lock = FileLock.take(path)
    assert lock is not None
    assert len(seen) == 2
    lock.release()


def test_no_place_to_note_it_is_an_error_of_the_system(home):
    home.parent.mkdir(parents=True, exist_ok=True)
    home.write_text("a file where a folder should be")
    with pytest.raises(OSError, match=r"data|open|directory"):
        recovery.hold(Path("a.gainwright"))


# -- mishaps -------------------------------------------------------------------------------------------------
@pytest.fixture
def told():
    said: list[str] = []
    mishaps = Mishaps(lambda: True, said.append)
    mishaps.install()
    yield said
    mishaps.uninstall()


def boom(text: str = "out of solder") -> None:
    try:
        raise RuntimeError(text)
    except RuntimeError as error:
        sys.excepthook(RuntimeError, error, error.__traceback__)


def test_a_mishap_is_logged_and_told_in_plain_words_once(told):
    boom()
    boom()
    assert len(told) == 1
    assert "Your work up to now is kept" in told[0]
    assert str(log_file()) in told[0]
    assert "Traceback" not in told[0]
    log = log_file().read_text(encoding="utf-8")
    assert log.count("RuntimeError: out of solder") == 2
    assert "Traceback" in log


def test_a_mishap_while_the_work_cannot_be_kept_says_so():
    said: list[str] = []

    def fail() -> bool:
        raise OSError("no disk")

    mishaps = Mishaps(fail, said.append)
    mishaps.install()
    boom()
    mishaps.uninstall()
    assert "could not be kept aside: save it now" in said[0]


def test_a_mishap_in_the_telling_is_not_told_again():
    said: list[str] = []

    def tell(text: str) -> None:
        said.append(text)
        boom("in the telling")

    mishaps = Mishaps(lambda: True, tell)
    mishaps.install()
    boom()
    mishaps.uninstall()
    assert len(said) == 1


def test_hooks_are_given_back():
    before = sys.excepthook
    mishaps = Mishaps(lambda: True, lambda _: None)
    mishaps.install()
    assert sys.excepthook is not before
    mishaps.uninstall()
    assert sys.excepthook is before
