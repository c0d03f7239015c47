"""Which key does what, from the actions themselves and from what path, diagram and card say of theirs."""

from __future__ import annotations

import html
from collections.abc import Mapping

from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QTextBrowser, QVBoxLayout, QWidget

#: Keys that no action carries: what they do, where.
BY_HAND: Mapping[str, tuple[tuple[str, str], ...]] = {
    "On the shelf": (
        ("Letters", "find a kind"), ("Enter", "add it behind the selection"), ("Shift+Enter", "add it as a branch"),
        ("Ctrl+Enter", "add it ahead"),
    ),
    "On the path": (
        ("Arrows", "go along the path"), ("Shift+arrows", "select more"), ("Ctrl+left or right", "go to a link"),
        ("Alt+arrows", "move the stage"), ("Enter", "to its card"), ("L", "link: arrows choose, Enter confirms"),
        ("N", "how many alike"), ("F2", "rename"), ("Del", "delete"), ("Ins", "to the shelf"), ("Esc", "let go"),
    ),
    "On the diagram": (
        ("Left, right", "read node by node"), ("Up, down", "move the level by 1 dB"), ("Shift+up, down", "by 0.1 dB"),
    ),
}  # fmt: skip


class KeysHelp(QDialog):
    """Shown beside the work."""

    def __init__(self, actions: Mapping[str, QAction], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Keys")
        self.resize(520, 640)
        text = QTextBrowser()
        text.setAccessibleName("Keys")
        text.setHtml(_tables(actions))
        close = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        close.rejected.connect(self.close)
        column = QVBoxLayout(self)
        column.setContentsMargins(20, 20, 20, 16)
        column.addWidget(text, 1)
        column.addWidget(close)


def _tables(actions: Mapping[str, QAction]) -> str:
    anywhere = tuple(
        (
            action.shortcut().toString(QKeySequence.SequenceFormat.NativeText),
            action.text().replace("&", "").rstrip("…"),
        )
        for name, action in actions.items()
        if not action.shortcut().isEmpty() and name not in ("delete", "rename", "link")
    )
    return "".join(_table(title, rows) for title, rows in {"Anywhere": anywhere, **BY_HAND}.items())


def _table(title: str, rows: tuple[tuple[str, str], ...]) -> str:
    lines = "".join(
        f"<tr><td style='padding: 2px 20px 2px 0'>{html.escape(key)}</td><td>{html.escape(does)}</td></tr>"
        for key, does in rows
    )
    return f"<p><b>{html.escape(title)}</b></p><table>{lines}</table>"
