"""A plain text of an item: its name, where it stands, who wrote it."""

from __future__ import annotations

from collections.abc import Callable

from engine.project import Changes, Project

from .entry import Entry
from .pieces import Elided, Said, column
from .scene import SEVERAL, Keys, Part, Scene

Make = Callable[[Project, str], Changes]  # project and what was typed


class TextRow(Part):
    """A field under a quiet label, or bare where it has none."""

    def __init__(
        self,
        scene: Scene,
        keys: Keys,
        name: str,
        label: str,
        make: Make,
        *,
        bare: bool = False,
        size_px: int = 12,
        title: str = "",
    ) -> None:
        super().__init__()
        self.scene, self.keys, self.name, self._make = scene, keys, name, make
        self._title = title or f"Set {label.lower()}"
        self.field = Entry(label, bare=bare, size_px=size_px, strong=bare)
        self.field.setProperty("title", bare)
        self.said = Said()
        body = column(self, 2)
        if not bare:
            body.addWidget(Elided(label, 11, quiet=True))
        body.addWidget(self.field)
        body.addWidget(self.said)
        self.setFocusProxy(self.field)
        self.field.taken.connect(self._typed)
        self.show_project(scene.project)

    def show_project(self, project: Project) -> None:
        self.field.show_value(self._text())
        self.field.setToolTip(self._text())

    def _typed(self, text: str) -> None:
        if text == self._text():
            refused = ""
        else:
            refused = self.scene.hand.do_all(
                f"{self._title} of {self.scene.called(self.keys)}", lambda project: self._make(project, text)
            )
        self.said.say(refused)
        if refused:
            self.field.refuse(text)
        else:
            self.field.settle(self._text())

    def _text(self) -> str:
        texts = {getattr(item, self.name, None) for item in self.scene.items(self.keys)}
        if len(texts) != 1:
            return SEVERAL
        text = texts.pop()
        return "" if text is None else str(text)
