"""The window: path over level diagram, shelf left, card right, one line above and one below. No modes."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, QEvent, Qt, QTimer
from PySide6.QtGui import QAction, QCloseEvent, QPaintEvent, QResizeEvent, QShowEvent
from PySide6.QtWidgets import QApplication, QDialog, QMainWindow, QSplitter, QVBoxLayout, QWidget

from engine.project import HEADER_KEY

from . import style
from .actions import make_actions
from .ask import Ask, Dialogs
from .autosave import Autosave
from .bottom_line import BottomLine
from .centre import Centre
from .columns import Columns
from .diagram.scale import UNITS
from .document import Document
from .exports import Exports
from .files import Files
from .inks import LIGHT, SCHEMES, Inks
from .memory import Memory
from .menus import build_menus
from .notice import Notice
from .recordings import Recordings
from .recovery import Slot, orphans
from .shelf import Shelf
from .side import WIDTH_PX, Side
from .top_line import TopLine

if TYPE_CHECKING:
    from .diagram.geometry import View
    from .diagram.scale import Unit

USUAL_SIZE = (1366, 768)
SHELF_PX = 192  # the longest title of a kind fits
CHART_DELAY_MS = 30
FIRST_START = (
    "Every number here is an estimate for a plan. Warn, clear, protect ears, start 20\u202fdB low; "
    "local law, codes and the makers’ instructions come first."
)


class MainWindow(QMainWindow):
    """One document in one window. `ask` and `memory` may be handed in; tests do."""

    def __init__(self, document: Document, ask: Ask | None = None, memory: Memory | None = None) -> None:
        super().__init__()
        self.document = document
        self.ask: Ask = ask or Dialogs(self)
        self.memory = memory or Memory()
        self.inks: Inks = SCHEMES.get(self.memory.text("scheme"), LIGHT)
        self._touch = self.memory.text("density") == "touch"
        self._painted = False
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose, on=False)
        self.setMinimumSize(960, 560)

        self.columns = Columns(self)
        self.centre = Centre(document, self.columns, self.inks)
        self.shelf = Shelf(document, self.inks, self.centre.path)
        self.side = Side(document, self.inks)
        self.bottom = BottomLine(document, self.inks)
        self.notice = Notice()
        self.files = Files(document, self.ask, self.memory, self)
        self.exports = Exports(document, self.ask, self)
        self.recordings = Recordings(document, self.centre.path, self.ask, self)
        self.actions_: Mapping[str, QAction] = make_actions(self)
        self._arrange()
        self._connect()
        self.keeper = self._autosave()
        self._restore()
        self._show_file()

    # -- building --------------------------------------------------------------------------------------------
    def _arrange(self) -> None:
        find = self.actions_.__getitem__
        bar = build_menus(self, self.actions_)
        self.top = TopLine(
            bar, [find("undo"), find("redo"), None, find("hold"), find("propose"), None, find("print")]
        )
        self.setMenuWidget(self.top)
        self.centre.head.add_choices(
            [find(f"unit {unit}") for unit in UNITS], [find("view levels"), find("view to clip")]
        )
        self.across = QSplitter(Qt.Orientation.Horizontal)
        self.across.setHandleWidth(1)
        self.across.setChildrenCollapsible(False)
        for place, (widget, stretch) in enumerate(((self.shelf, 0), (self.centre, 1), (self.side, 0))):
            self.across.addWidget(widget)
            self.across.setStretchFactor(place, stretch)
        whole = QWidget()
        column = QVBoxLayout(whole)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.notice)
        column.addWidget(self.across, 1)
        column.addWidget(self.bottom)
        self.setCentralWidget(whole)

    def _connect(self) -> None:
        document, path = self.document, self.centre.path
        document.file_changed.connect(self._show_file)
        document.changed.connect(self._project_changed)
        path.shelf_wanted.connect(self.go_to_shelf)
        path.card_wanted.connect(self._go_to_card)
        self.top.venue.clicked.connect(self.edit_venue)
        self.files.noted.connect(self.notice.say)
        self.exports.noted.connect(self.notice.say)
        self.files.opened.connect(self._opened)

    def _autosave(self) -> Autosave | None:
        try:
            keeper = Autosave(self.document, Slot(), self)
        except OSError as reason:
            self.notice.say(f"Unsaved work cannot be kept aside on this machine ({reason}). Save often.")
            return None
        keeper.failed.connect(
            lambda reason: self.notice.say(
                f"Unsaved work cannot be kept aside just now ({reason}). Save it soon."
            )
        )
        return keeper

    def _restore(self) -> None:
        """The place, sizes and ways of looking of last time."""
        self.resize(*USUAL_SIZE)
        geometry = QByteArray.fromBase64(self.memory.text("geometry").encode())
        if not geometry.isEmpty():
            self.restoreGeometry(geometry)
        self.across.setSizes([SHELF_PX, self.width(), WIDTH_PX])
        for name, splitter in self._splitters().items():
            state = QByteArray.fromBase64(self.memory.text(f"splitter {name}").encode())
            if not state.isEmpty():
                splitter.restoreState(state)
                self.centre.shared_out |= splitter is self.centre.splitter
        remembered = self.memory.text("unit")
        self.set_unit(next((unit for unit in UNITS if unit == remembered), "dBu"))
        self.actions_["view levels"].setChecked(True)
        self.actions_[f"scheme {self.inks.name}"].setChecked(True)
        self.actions_["touch"].setChecked(self._touch)
        self._dress()

    def _splitters(self) -> Mapping[str, QSplitter]:
        return {"across": self.across, "centre": self.centre.splitter}

    # -- what is shown ---------------------------------------------------------------------------------------
    def _show_file(self) -> None:
        document = self.document
        header = document.project.header
        name = document.path.stem if document.path is not None else header.name
        self.setWindowTitle(f"{name}[*] – Gainwright")
        self.setWindowModified(document.modified)
        self.top.venue.show_header(header, modified=document.modified)
        self.actions_["revert"].setEnabled(document.path is not None and document.modified)

    def _project_changed(self, changes: Mapping[str, object]) -> None:
        if HEADER_KEY in changes:
            self._show_file()

    def _opened(self) -> None:
        self.actions_["hold"].setChecked(False)
        self.notice.hide()
        self.centre.fit()
        self.centre.share_out()
        self.centre.show_main_path()

    def set_unit(self, unit: Unit) -> None:
        """Show electrical levels in this unit."""
        self.actions_[f"unit {unit}"].setChecked(True)
        self.centre.diagram.set_unit(unit)
        self.memory.put("unit", unit)

    def set_view(self, view: View) -> None:
        """Show levels, or all of them referred to their clip points."""
        self.centre.diagram.set_view(view)

    def hold(self, on: bool) -> None:
        """Keep the lines as they are now for comparison, or let them go."""
        self.document.flush()
        self.centre.diagram.hold(on)

    def write_diagram(self) -> None:
        """Save the level diagram that is shown as a picture."""
        self.exports.write_diagram(self.centre.diagram.path, self.centre.diagram.look)

    def set_scheme(self, name: str) -> None:
        """Dress in another scheme."""
        self.inks = SCHEMES[name]
        self.memory.put("scheme", name)
        self._dress()
        for part in (self.centre, self.shelf, self.side, self.bottom):
            part.set_inks(self.inks)

    def set_touch(self, on: bool) -> None:
        """Make everything large enough for fingers, or not."""
        self._touch = on
        self.memory.put("density", "touch" if on else "pointer")
        self.shelf.set_touch(on)
        self.side.set_touch(on)
        self._dress()

    def _dress(self) -> None:
        application = QApplication.instance()
        if isinstance(application, QApplication):
            style.apply(application, self.inks, style.TOUCH if self._touch else style.POINTER)

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self.centre.share_out()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.centre.share_out()

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        if not self._painted:
            self._painted = True
            QTimer.singleShot(CHART_DELAY_MS, self, self.side.add_chart)

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.ActivationChange and not self.isActiveWindow():
            self.document.end_gesture()

    # -- where the keyboard is -------------------------------------------------------------------------------
    def panes(self) -> list[QWidget]:
        """The parts of the window, in the order in which F6 visits them."""
        return [self.shelf, self.centre.path, self.centre.diagram, self.side.card, self.side.findings]

    def step_pane(self, step: int) -> None:
        """Take the keyboard to the next part of the window."""
        panes = self.panes()
        focused = self.focusWidget()  # also while the window is not the active one
        at = next(
            (n for n, pane in enumerate(panes) if focused is pane or _is_in(focused, pane)),
            -1 if step > 0 else 0,
        )
        for _ in panes:
            at = (at + step) % len(panes)
            if _take_focus(panes[at]):
                return

    def go_to_shelf(self) -> None:
        """Take the keyboard to the shelf, to find a kind and add it."""
        self.shelf.filter.setFocus(Qt.FocusReason.ShortcutFocusReason)
        self.shelf.filter.selectAll()

    def _go_to_card(self, stage: str) -> None:
        self.document.select([stage])
        _take_focus(self.side.card)

    # -- beside the work -------------------------------------------------------------------------------------
    def edit_venue(self) -> None:
        """Name, revision and conditions of the venue: the card shows them where nothing is selected."""
        self.document.select(())
        _take_focus(self.side.card)

    def propose_settings(self) -> None:
        """Work out settings for the project as it stands."""
        from .proposal_panel import ProposalPanel

        self._open(lambda: ProposalPanel(self.document, lambda: self.actions_["hold"].setChecked(True), self))

    def show_about(self) -> None:
        """What this is, and the cautions."""
        from .about import About

        self._open(lambda: About(self))

    def show_keys(self) -> None:
        """Which key does what."""
        from .keys_help import KeysHelp

        self._open(lambda: KeysHelp(self.actions_, self))

    def _open(self, make: Callable[[], QDialog]) -> None:
        dialog = make()
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.show()
        dialog.activateWindow()

    # -- beginning and ending --------------------------------------------------------------------------------
    def greet(self) -> None:
        """After the first paint: offer unsaved work that was found, and on the first start say what to heed."""
        self.offer_recovery()
        if not self.memory.text("greeted") and not self.notice.text:
            self.memory.put("greeted", "yes")
            self.notice.say(FIRST_START, "Read the cautions", self.show_about)

    def offer_recovery(self) -> None:
        """Offer work that windows left behind when they died; what is opened is unsaved here and kept by us."""
        taken = False
        for orphan in orphans():
            if taken:
                orphan.release()
                continue
            where = f"from {orphan.origin}" if orphan.origin is not None else "never saved to a file"
            answer = self.ask.recover(
                f"{orphan.project.header.name}, {where}, changed {orphan.when:%d %B %Y, %H:%M}."
            )
            if answer == "discard":
                orphan.discard()
            elif answer == "open" and self.files.may_leave() and self.files.recover(orphan):
                taken = True
                if self.keeper is not None and self.keeper.keep_now():
                    orphan.discard()
                else:
                    orphan.release()
            else:
                orphan.release()

    def rescue(self) -> bool:
        """Keep unsaved work aside at once; says whether that worked. For when something has gone wrong."""
        return self.keeper is not None and self.keeper.keep_now()

    def closeEvent(self, event: QCloseEvent) -> None:
        self.document.end_gesture()
        if not self.files.may_leave():
            event.ignore()
            return
        self.memory.put("geometry", bytes(self.saveGeometry().toBase64().data()).decode())
        for name, splitter in self._splitters().items():
            if splitter is self.centre.splitter and not self.centre.shared_out:
                continue
            self.memory.put(f"splitter {name}", bytes(splitter.saveState().toBase64().data()).decode())
        self.files.close()
        self.recordings.close()
        if self.keeper is not None:
            self.keeper.close()
            self.keeper = None
        event.accept()


def _is_in(widget: QWidget | None, pane: QWidget) -> bool:
    return widget is not None and pane.isAncestorOf(widget)


def _take_focus(pane: QWidget) -> bool:
    """Give a part the keyboard, or the first thing in it that takes it."""
    for widget in (pane, *pane.findChildren(QWidget)):
        if widget.focusPolicy() & Qt.FocusPolicy.TabFocus and widget.isVisible() and widget.isEnabled():
            widget.setFocus(Qt.FocusReason.TabFocusReason)
            return True
    return False
