"""Propose settings: wishes above, what a hand has to touch in order of work, what it gains, and one button to apply it."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QDoubleSpinBox,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QVBoxLayout,
    QWidget,
)

from app import words
from app.document import Document
from app.inks import font
from engine.propose import ALIGNMENTS, Impossible, Proposal, Standing, Wishes, propose

AMPLIFIERS = (("Amplifiers may be turned", "free"), ("Amplifiers stay as they are", "locked"))
ALIGNED = {
    "reserve": "Keep the wanted reserve",
    "together": "Clip together",
    "amplifier first": "Amplifiers clip first by",
    "amplifier last": "Amplifiers clip last by",
    "limiter first": "Limiters work first",
}
SCOPES = ("the whole venue", "the selected stages")
NEEDS_DB = ("amplifier first", "amplifier last")


class ProposalPanel(QDialog):
    """Works out settings for the document as it stands; applying them is one undo step, with the old trace held."""

    def __init__(self, document: Document, hold: Callable[[], None], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document, self._hold = document, hold
        self.found: Proposal | Impossible | None = None
        self.setWindowTitle("Propose settings")
        self.resize(760, 560)
        self.alignment = QComboBox()
        self.alignment.addItems([ALIGNED[each] for each in ALIGNMENTS])
        self.alignment.setAccessibleName("How clip points are to meet")
        self.by_db = QDoubleSpinBox()
        self.by_db.setRange(0.0, 30.0)
        self.by_db.setSuffix(" dB")
        self.by_db.setValue(3.0)
        self.by_db.setAccessibleName("By how much")
        self.amplifiers = QComboBox()
        for text, value in AMPLIFIERS:
            self.amplifiers.addItem(text, value)
        self.scope = QComboBox()
        self.scope.addItems([text.capitalize() for text in SCOPES])
        self.headline = QLabel("")
        self.headline.setFont(font(14, strong=True))
        self.headline.setWordWrap(True)
        self.body = QWidget()
        self.rows = QGridLayout()
        self.rows.setHorizontalSpacing(16)
        self.rows.setVerticalSpacing(8)
        for column, share in enumerate((2, 3, 3, 4)):
            self.rows.setColumnStretch(column, share)
        filled = QVBoxLayout(self.body)
        filled.setContentsMargins(0, 0, 0, 0)
        filled.addLayout(self.rows)
        filled.addStretch(1)
        self.apply_button = QPushButton("Apply these settings")
        self.apply_button.setProperty("primary", True)
        self._arrange()
        for box in (self.alignment, self.amplifiers, self.scope):
            box.currentIndexChanged.connect(self.work_out)
        self.by_db.valueChanged.connect(self.work_out)
        self.apply_button.clicked.connect(self.apply)
        self.work_out()

    def _arrange(self) -> None:
        wishes = QHBoxLayout()
        for widget in (self.alignment, self.by_db, self.amplifiers, self.scope):
            wishes.addWidget(widget)
        area = QScrollArea()
        area.setWidgetResizable(True)
        area.setFrameShape(QScrollArea.Shape.NoFrame)
        area.setWidget(self.body)
        last = QHBoxLayout()
        last.addStretch(1)
        last.addWidget(self.apply_button)
        column = QVBoxLayout(self)
        column.setContentsMargins(20, 16, 20, 16)
        column.setSpacing(10)
        column.addLayout(wishes)
        column.addWidget(self.headline)
        column.addWidget(area, 1)
        column.addLayout(last)

    def wishes(self) -> Wishes:
        """What the controls above ask for."""
        alignment = ALIGNMENTS[self.alignment.currentIndex()]
        chosen = frozenset(key for key in self.document.selection if key in self.document.project.stage)
        return Wishes(
            alignment=alignment,
            by_db=self.by_db.value() if alignment in NEEDS_DB else 0.0,
            amplifiers=self.amplifiers.currentData(),
            stages=chosen if self.scope.currentIndex() == 1 else None,
        )

    def work_out(self, *_: object) -> None:
        """Search again, for the project as it is now."""
        self.document.flush()
        wishes = self.wishes()
        self.by_db.setVisible(wishes.alignment in NEEDS_DB)
        self.found = propose(self.document.outcome, wishes)
        while (item := self.rows.takeAt(0)) is not None:
            if (old := item.widget()) is not None:
                old.deleteLater()
        if isinstance(self.found, Proposal):
            self._show_proposal(self.found)
        else:
            self._show_impossible(self.found)

    def _show_proposal(self, found: Proposal) -> None:
        self.apply_button.setEnabled(not found.is_settled)
        count = len(found.touched)
        self.headline.setText(
            "Nothing to touch: the present settings are as good as any."
            if found.is_settled
            else f"{count} control{'s' if count != 1 else ''} to set, in this order:"
        )
        for touched in found.touched:
            self._row(touched.name, touched.label, f"{touched.before} → {touched.after}", touched.reason)
        self._row("", "now", "proposed", "", quiet=True)
        for label, say in _NUMBERS:
            self._row(label, say(found.before), say(found.after), "")
        for line in (*found.reasons, *found.notes):
            self._line(line)

    def _show_impossible(self, found: Impossible) -> None:
        self.apply_button.setEnabled(False)
        self.headline.setText(found.message)
        for relief in found.reliefs:
            self._line(relief.text)

    def _row(self, *texts: str, quiet: bool = False) -> None:
        at = self.rows.rowCount()
        for place, text in enumerate(texts):
            label = QLabel(text)
            label.setWordWrap(True)
            label.setFont(font(12, strong=place == 2 and not quiet))
            label.setProperty("quiet", quiet or place in (1, 3))
            self.rows.addWidget(label, at, place, Qt.AlignmentFlag.AlignTop)

    def _line(self, text: str) -> None:
        label = QLabel(text)
        label.setWordWrap(True)
        label.setProperty("quiet", True)
        self.rows.addWidget(label, self.rows.rowCount(), 0, 1, 4)

    def apply(self) -> None:
        """Put the proposed settings in place as one undo step, the lines of before held for comparison."""
        if isinstance(self.found, Proposal) and not self.found.is_settled:
            self._hold()
            self.document.edit("Apply proposed settings", self.found.changes)
            self.document.flush()
            self.work_out()


def _hiss(standing: Standing) -> str:
    if standing.hiss_a is None:
        return words.NOTHING
    return f"{words.level(standing.hiss_a, 'dB(A)')} at {standing.seat}, {standing.owner}"


_NUMBERS: tuple[tuple[str, Callable[[Standing], str]], ...] = (
    ("Narrowest margin", lambda s: f"{words.margin(s.margin_db)} {s.margin_where}".strip()),
    ("Hiss", _hiss),
    ("Level at the reference seat", lambda s: words.level(s.level, "dB SPL")),
    ("Target", lambda s: words.level(s.target, "dB SPL")),
)
