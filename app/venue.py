"""The venue and its conditions: what stands in every sheet's title block, and what holds for the whole project."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import Any

from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QLabel,
    QLineEdit,
    QPlainTextEdit,
    QSpinBox,
    QVBoxLayout,
    QWidget,
)

from engine.project import HEADER_KEY, Changes, Header

from . import edits
from .document import Document

Make = Callable[[], Changes]
Refresh = Callable[[Header], None]


class VenueDialog(QDialog):
    """Shown beside the work; each field takes effect, and can be undone, when it is left."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._refreshers: list[Refresh] = []
        self.setWindowTitle("Venue and conditions")
        self.setMinimumWidth(440)
        form = QFormLayout()
        form.setHorizontalSpacing(16)
        form.setVerticalSpacing(6)
        form.setLabelAlignment(Qt.AlignmentFlag.AlignLeft)
        for label, field in self._fields():
            field.setAccessibleName(label)
            form.addRow(_quiet(label), field)
        self.said = QLabel()
        self.said.setProperty("wrong", True)
        self.said.setWordWrap(True)
        close = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        close.rejected.connect(self.close)
        column = QVBoxLayout(self)
        column.setContentsMargins(20, 20, 20, 16)
        column.setSpacing(12)
        column.addLayout(form)
        column.addWidget(self.said)
        column.addWidget(close)
        document.changed.connect(self._refresh)
        self._refresh()

    def _fields(self) -> Iterator[tuple[str, QWidget]]:
        yield "Venue", self._line("name", lambda text: edits.rename(self._document.project, HEADER_KEY, text))
        yield "Revision", self._revision()
        yield "Author", self._line("author", lambda text: self._header(author=text.strip()))
        yield "Note", self._note()
        for name, option in Header.option_specs().items():
            yield option.label, self._choice(name, option.choices, option.help)
        for name, spec in Header.figure_specs().items():
            yield spec.label, self._figure(name, spec.help)

    # -- fields ----------------------------------------------------------------------------------------------
    def _line(self, name: str, make: Callable[[str], Changes]) -> QLineEdit:
        field = QLineEdit()
        field.setMaxLength(120)
        field.editingFinished.connect(lambda: self._edit(name.capitalize(), lambda: make(field.text())))
        self._refreshers.append(lambda header: _put(field, str(getattr(header, name))))
        return field

    def _figure(self, name: str, help: str) -> QLineEdit:
        field = QLineEdit()
        field.setToolTip(help)
        label = Header.figure_specs()[name].label
        field.editingFinished.connect(
            lambda: self._edit(
                label, lambda: edits.set_figure(self._document.project, HEADER_KEY, name, field.text())
            )
        )
        self._refreshers.append(lambda header: _put(field, getattr(header, name).text))
        return field

    def _revision(self) -> QSpinBox:
        field = QSpinBox()
        field.setRange(1, 1_000_000)
        field.setKeyboardTracking(False)
        field.valueChanged.connect(lambda value: self._edit("Revision", lambda: self._header(revision=value)))
        self._refreshers.append(lambda header: _silently(field, lambda: field.setValue(header.revision)))
        return field

    def _choice(self, name: str, choices: tuple[str, ...], help: str) -> QComboBox:
        field = QComboBox()
        field.setToolTip(help)
        field.addItems([choice[:1].upper() + choice[1:] for choice in choices])
        field.activated.connect(
            lambda at: self._edit(
                name.capitalize(),
                lambda: edits.set_option(self._document.project, HEADER_KEY, name, choices[at]),
            )
        )
        self._refreshers.append(lambda header: field.setCurrentIndex(choices.index(getattr(header, name))))
        return field

    def _note(self) -> QPlainTextEdit:
        field = QPlainTextEdit()
        field.setFixedHeight(72)
        field.setTabChangesFocus(True)
        field.textChanged.connect(
            lambda: self._edit(
                "Note", lambda: self._header(note=field.toPlainText()[:4000]), gesture="venue note"
            )
        )

        def refresh(header: Header) -> None:
            if field.toPlainText() != header.note:
                _silently(field, lambda: field.setPlainText(header.note))

        self._refreshers.append(refresh)
        field.installEventFilter(self)
        return field

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Leaving the note ends what was typed in one go."""
        if event.type() == QEvent.Type.FocusOut:
            self._document.end_gesture()
        return super().eventFilter(watched, event)

    # -- changing --------------------------------------------------------------------------------------------
    def _header(self, **fields: Any) -> Changes:
        return edits.set_header(self._document.project, **fields)

    def _edit(self, title: str, make: Make, gesture: str | None = None) -> None:
        try:
            self._document.edit(title, make(), gesture)
        except ValueError as reason:
            self.said.setText(edits.reason(reason))
        else:
            self.said.clear()

    def _refresh(self, changes: object = None) -> None:
        if changes is None or (isinstance(changes, dict) and HEADER_KEY in changes):
            for refresh in self._refreshers:
                refresh(self._document.project.header)


def _quiet(text: str) -> QLabel:
    label = QLabel(text)
    label.setProperty("quiet", True)
    return label


def _put(field: QLineEdit, text: str) -> None:
    if field.text() != text:
        field.setText(text)


def _silently(widget: QWidget, run: Callable[[], None]) -> None:
    """Show a value without taking it for the person's."""
    blocked = widget.blockSignals(True)
    run()
    widget.blockSignals(blocked)
