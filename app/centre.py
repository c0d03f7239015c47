"""The path over its level diagram, on the same columns, with one scroll bar and one zoom for both."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtWidgets import QScrollBar, QSplitter, QVBoxLayout, QWidget

from .columns import Columns
from .diagram.widget import DiagramView
from .diagram_head import DiagramHead
from .document import Document
from .inks import Inks
from .path_view import PathView

LEAST_GROWN_PX = 64.0  # narrower, a block's name no longer reads well
PATH_SHARE = 0.4  # of the height, at most, where no hand has set it


class Centre(QWidget):
    """What the eye is on: blocks above, their levels straight below."""

    def __init__(
        self, document: Document, columns: Columns, inks: Inks, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._document, self.columns = document, columns
        self._fitted = True  # the whole path is shown, and stays so when the window changes its size
        self._moving = False  # the columns move because we move them
        self.shared_out = False  # a hand has set how the height is shared
        self.path = PathView(document, columns, inks)
        self.diagram = DiagramView(document, columns, inks)
        self.head = DiagramHead(document, self.diagram)
        self.splitter = QSplitter(Qt.Orientation.Vertical)
        self.splitter.setHandleWidth(1)
        self.splitter.setChildrenCollapsible(False)
        self.splitter.addWidget(self.path)
        self.splitter.addWidget(self._lower())
        self.splitter.setStretchFactor(0, 0)
        self.splitter.setStretchFactor(1, 1)
        self.bar = QScrollBar(Qt.Orientation.Horizontal)
        self.bar.setAccessibleName("Columns of path and diagram")
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.splitter, 1)
        column.addWidget(self.bar)
        self.bar.valueChanged.connect(columns.scroll_to)
        columns.changed.connect(self._columns_changed)
        document.changed.connect(self._project_changed)
        self.splitter.splitterMoved.connect(self._shared_by_hand)
        self.diagram.path_changed.connect(self.path.show_path)
        self.path.installEventFilter(self)
        self._measure()

    def _lower(self) -> QWidget:
        lower = QWidget()
        column = QVBoxLayout(lower)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.head)
        column.addWidget(self.diagram, 1)
        return lower

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """The columns are as wide as the path view."""
        if watched is self.path and event.type() == QEvent.Type.Resize:
            self._measure()
            if self._fitted:
                self.fit()
        return False

    def fit(self) -> None:
        """Show the whole path."""
        self._moving = True
        self._measure()
        self.columns.fit()
        self._moving = False
        self._fitted = True

    def show_main_path(self) -> None:
        """Show the levels on the way to the reference seat, else to the first seat."""
        seats = [self._document.project.stage[seat.stage] for seat in self._document.outcome.seats]
        seats.sort(key=lambda seat: getattr(seat, "role", "") != "reference")
        if seats:
            self.diagram.show_path(seats[0].id)

    def share_out(self) -> None:
        """Give the path the height its rows need, as far as the diagram keeps most; not where a hand has set it."""
        if self.shared_out:
            return
        whole = self.splitter.height()
        layout = self.path.grid
        wanted = round(min(layout.scale.height(max(2, layout.rows)), PATH_SHARE * whole))
        self.splitter.setSizes([wanted, whole - wanted])

    def zoom(self, factor: float) -> None:
        """Zoom about the current stage."""
        self.path.zoom(factor)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self.path.set_inks(inks)
        self.diagram.set_inks(inks)

    def _shared_by_hand(self) -> None:
        self.shared_out = True

    def _project_changed(self, _changes: object) -> None:
        """A path that grows stays in view, as long as its blocks stay readable."""
        before = self.columns.count
        self._measure()
        if self._fitted and self.columns.count > before and self.columns.fitted_pitch_px >= LEAST_GROWN_PX:
            self.fit()

    def _measure(self) -> None:
        was, self._moving = self._moving, True
        stages = self._document.project.stages
        self.columns.set_extent(
            max((stage.column for stage in stages), default=-1) + 1, float(self.path.width())
        )
        self._columns_changed()
        self._moving = was

    def _columns_changed(self) -> None:
        moved, self._moving = self._moving, True
        self.bar.setRange(0, round(self.columns.most_scroll_px))
        self.bar.setPageStep(max(1, self.path.width()))
        self.bar.setSingleStep(max(1, round(self.columns.pitch_px / 4)))
        self.bar.setValue(round(self.columns.scroll_px))
        # The free column behind the last is there to drop on, not to read: no bar for it alone.
        self.bar.setVisible(self.bar.maximum() > self.columns.pitch_px + 1.0)
        self._moving = moved
        if not moved:
            self._fitted = False
