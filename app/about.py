"""What this program is, what it does not vouch for, and the cautions."""

from __future__ import annotations

import html

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QLabel, QTextBrowser, QVBoxLayout, QWidget

from .cautions import CAUTIONS, CONVENTION_LINE
from .inks import font
from .version import VERSION


class About(QDialog):
    """Shown beside the work; it asks nothing."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("About Gainwright")
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.resize(620, 560)
        name, about = (
            QLabel("Gainwright"),
            QLabel(f"A planner for gain structure · version {VERSION} · MIT licence"),
        )
        name.setFont(font(16, strong=True))
        about.setProperty("quiet", True)
        text = QTextBrowser()
        text.setHtml(_cautions())
        text.setAccessibleName("Cautions and conventions")
        close = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        close.rejected.connect(self.close)
        column = QVBoxLayout(self)
        column.setContentsMargins(20, 20, 20, 16)
        column.setSpacing(6)
        for widget in (name, about):
            column.addWidget(widget)
        column.addSpacing(6)
        column.addWidget(text, 1)
        column.addWidget(close)
        text.setTextInteractionFlags(Qt.TextInteractionFlag.TextBrowserInteraction)


def _cautions() -> str:
    parts = [f"<p><b>{html.escape(each.about)}.</b> {html.escape(each.text)}</p>" for each in CAUTIONS]
    return "".join([*parts, f"<p><b>Conventions.</b> {html.escape(CONVENTION_LINE)}</p>"])
