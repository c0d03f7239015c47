"""The line over the level diagram: which path it shows, in what, and the switches for both."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtGui import QAction, QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QLabel, QSizePolicy, QToolButton, QWidget

from . import words
from .diagram.widget import DiagramView
from .document import Document
from .inks import font

HEIGHT_PX = 32
CEILING = "thin dotted: usable ceiling, all sources rising together"


class DiagramHead(QWidget):
    """Says what is drawn below; `choices` are the actions that change it."""

    def __init__(self, document: Document, diagram: DiagramView, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document, self._diagram = document, diagram
        self.setFixedHeight(HEIGHT_PX)
        title = QLabel("Level diagram")
        title.setFont(font(12, strong=True))
        title.setProperty("quiet", True)
        self._about = QLabel()
        self._about.setFont(font(12))
        self._about.setProperty("quiet", True)
        self._about.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        self._row = QHBoxLayout(self)
        self._row.setContentsMargins(20, 4, 12, 0)
        self._row.setSpacing(4)
        self._row.addWidget(title)
        self._row.addSpacing(8)
        self._row.addWidget(self._about, 1)
        self._text = ""
        diagram.path_changed.connect(self.refresh)
        document.solved.connect(self.refresh)
        self.refresh()

    def add_choices(self, *groups: Sequence[QAction]) -> None:
        """Set switches at the right, group by group."""
        for actions in groups:
            self._row.addSpacing(8)
            for action in actions:
                button = QToolButton()
                button.setDefaultAction(action)
                button.setFont(font(11))
                button.setProperty("flat", True)
                button.setProperty("small", True)
                button.setFocusPolicy(Qt.FocusPolicy.TabFocus)
                self._row.addWidget(button)

    @property
    def text(self) -> str:
        """What is said of the path, whole."""
        return self._text

    def refresh(self, _what: object = None) -> None:
        """Say what is shown now."""
        self._text = self._said()
        self.setAccessibleName(f"Level diagram, {self._text}")
        self._fit()

    def _said(self) -> str:
        outcome, path = self._document.outcome, self._diagram.path
        stages = [outcome.project.stage[key].name for key in path if key in outcome.project.stage]
        if not stages:
            return ""
        parts = [f"{stages[0]} → {stages[-1]}" if len(stages) > 1 else stages[0]]
        nodes = outcome.trace([path[0]])
        if nodes and nodes[-1].level is not None and nodes[-1].peak is not None:
            crest = nodes[-1].peak - nodes[-1].level + 3.01  # the peak lane is sine-scaled
            parts.append(f"crest {words.margin(crest, 0)}")
        return " · ".join([*parts, CEILING])

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit()

    def _fit(self) -> None:
        shown = self._about.fontMetrics().elidedText(
            self._text, Qt.TextElideMode.ElideRight, self._about.width()
        )
        self._about.setText(shown)
