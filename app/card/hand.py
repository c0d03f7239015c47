"""How the card changes the document: every edit is made from the project as it is now, and a refusal is words."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from app.document import Document
from engine.project import Changes, Item, Project

Make = Callable[[Project, str], Changes]


class Hand:
    """Edits one item, or several together, as one undo entry."""

    def __init__(self, document: Document) -> None:
        self.document = document

    def do(self, title: str, keys: Sequence[str], make: Make, gesture: object | None = None) -> str:
        """Push what `make` makes of every key; returns why not, in plain words, or nothing."""

        def make_all(project: Project) -> Changes:
            changes: dict[str, tuple[Item | None, Item | None]] = {}
            for key in keys:
                changes.update(make(project, key))
            return changes

        return self.do_all(title, make_all, gesture)

    def do_all(self, title: str, make: Callable[[Project], Changes], gesture: object | None = None) -> str:
        """Push what `make` makes of the project at once; returns why not, in plain words, or nothing."""
        try:
            self.document.edit(title, make(self.document.project), gesture)
        except ValueError as reason:
            return sentence(str(reason))
        return ""

    def let_go(self) -> None:
        """The hand lets go: one undo entry is complete, and its last value is solved."""
        self.document.flush()
        self.document.end_gesture()


def sentence(text: str) -> str:
    """A reason as a sentence of its own."""
    text = text.strip()
    return text if not text else text[0].upper() + text[1:] + ("" if text[-1] in ".?!" else ".")
