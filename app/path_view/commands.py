"""What can be done to the selection by key, menu or button: each is one edit, and says so when it is refused."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from PySide6.QtGui import QGuiApplication

from app import edits
from app.gestures import Plan
from app.gestures.base import Place
from engine.project import Changes

from .adding import How, add_kind

if TYPE_CHECKING:
    from .view import PathView


class Commands:
    """Edits of the path view's document, for its keys and menus and for the window's."""

    def __init__(self, view: PathView) -> None:
        self._view = view
        self._document = view.document

    # -- clipboard -------------------------------------------------------------------------------------------
    def copy(self) -> None:
        """Put the selected stages and the links among them on the clipboard, as text."""
        text = edits.copy_text(self._document.project, self._document.selection)
        if text:
            QGuiApplication.clipboard().setText(text)

    def cut(self) -> None:
        """Copy, then delete."""
        self.copy()
        self.delete()

    def paste(self, place: Place | None = None) -> None:
        """Put in what the clipboard holds, at a place or near where it came from."""
        text = QGuiApplication.clipboard().text()
        self._edit("Paste", lambda: edits.paste(self._document.project, text, place), select_new=True)

    def duplicate(self) -> None:
        """The selected stages again, with their links."""
        project, chosen = self._document.project, self._document.selection
        self._edit(f"Duplicate {self._called()}", lambda: edits.duplicate(project, chosen), select_new=True)

    # -- the selection ---------------------------------------------------------------------------------------
    def delete(self) -> None:
        """Take the selected stages and links away; a neighbour is selected instead."""
        document = self._document
        chosen, title = document.selection, f"Delete {self._called()}"
        beside = self._neighbour()
        if self._edit(title, lambda: edits.delete(document.project, chosen)):
            document.select({beside} if beside else ())

    def select_all(self) -> None:
        """Select every stage."""
        self._document.select(self._document.project.stage)

    def move(self, columns: int, rows: int) -> None:
        """Move the selected stages by whole places."""
        project, chosen = self._document.project, self._document.selection
        self._edit(f"Move {self._called()}", lambda: edits.move(project, chosen, columns, rows))
        self._view.reveal(self._view.current)

    def rename(self, key: str, name: str) -> bool:
        """Give a stage another name; says whether it was taken."""
        return self._edit("Rename", lambda: edits.rename(self._document.project, key, name))

    def set_count(self, text: str) -> bool:
        """Let each selected stage stand for as many alike; says whether it was taken."""
        number = text.strip().lstrip("×x").strip()
        if not number.isdecimal():
            self._view.say(f"{text!r} is no number: type how many alike, such as 8", refused=True)
            return False
        project = self._document.project
        keys = [key for key in self._document.selection if key in project.stage]
        return self._edit("Set count", lambda: edits.set_count(project, keys, int(number)))

    def set_option(self, key: str, name: str, value: object) -> None:
        """Choose how a stage or link is built."""
        self._edit("Set option", lambda: edits.set_option(self._document.project, key, name, value))

    def add(self, kind: str, how: How = "behind") -> None:
        """Add a kind to the selection."""
        self._do(lambda: add_kind(self._document, kind, how))

    def add_at(self, kind: str, place: Place) -> None:
        """Add a kind at a place."""
        self._edit("Add", lambda: edits.add_stage(self._document.project, kind, *place), select_new=True)

    def carry_out(self, plan: Plan) -> None:
        """Make the edit that a gesture has planned."""
        if plan.changes:
            self._edit(plan.title, lambda: plan.changes)
            self._document.end_gesture()
        if plan.select is not None:
            self._document.select(plan.select)

    # ----------------------------------------------------------------------------------------------------
    def _edit(self, title: str, make: Callable[[], Changes], *, select_new: bool = False) -> bool:
        def run() -> str:
            changes = make()
            self._document.edit(title, changes)
            if select_new:
                self._document.select(edits.added_stages(changes))
            return ""

        return self._do(run)

    def _do(self, run: Callable[[], str]) -> bool:
        """Run an edit that may be refused; whatever it answers is said to the person."""
        try:
            note = run()
        except ValueError as error:
            self._view.say(edits.reason(error), refused=True)
            return False
        if note:
            self._view.say(note)
        return True

    def _called(self) -> str:
        project, chosen = self._document.project, self._document.selection
        stages = [key for key in chosen if key in project.stage]
        if not stages:
            return "link" if len(chosen) == 1 else f"{len(chosen)} links"
        return project.stage[stages[0]].name if len(stages) == 1 else f"{len(stages)} stages"

    def _neighbour(self) -> str | None:
        """Who to select when the selection goes: what feeds it, else what it feeds."""
        project, chosen = self._document.project, self._document.selection
        around = project.topology
        for key in chosen:
            if key in project.link:
                return project.link[key].source
        stages = [key for key in around.order if key in chosen]
        ahead = [link.source for key in stages for link in around.into[key] if link.source not in chosen]
        behind = [link.target for key in stages for link in around.out_of[key] if link.target not in chosen]
        return next(iter([*ahead, *behind]), None)
