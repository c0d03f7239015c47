"""What a hand or the keyboard is in the middle of on the path: press, carry, let go, think better of it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QPoint, Qt, QTimer

from app.gestures import Gesture, Hit, LinkKeys, Press, Preview, ShelfDrag
from app.gestures.base import Point

from . import keys

if TYPE_CHECKING:
    from .view import PathView

EDGE_PX, EDGE_STEP_PX, EDGE_MS = 28, 14, 30


class Hand(QObject):
    """Turns presses and motion on the path into gestures, and their plans into edits."""

    def __init__(self, view: PathView) -> None:
        super().__init__(view)
        self._view = view
        self.gesture: Gesture | None = None
        self.link_keys: LinkKeys | None = None
        self.pointer: Point = (0.0, 0.0)
        self.hover = Hit()
        self._press: Press | None = None
        self._pan: Point | None = None
        self._edge = QTimer(self, interval=EDGE_MS)
        self._edge.timeout.connect(self._scroll_at_edge)

    @property
    def busy(self) -> bool:
        """Whether something is under way."""
        return any(each is not None for each in (self.gesture, self.link_keys, self._press, self._pan))

    @property
    def preview(self) -> Preview:
        """What is to be shown of it."""
        if self.gesture is not None:
            return self.gesture.preview
        return self.link_keys.preview if self.link_keys is not None else Preview()

    # -- press, move, release, cancel ------------------------------------------------------------------------
    def press(self, x: float, y: float, *, extend: bool = False, touch: bool = False) -> None:
        """A hand comes down."""
        self._view.hush()
        self.link_keys = None
        self.pointer = (x, y)
        self._press = Press(self._view, x, y, self._view.document.selection, extend=extend, touch=touch)

    def move(self, x: float, y: float) -> None:
        """The hand moves, down or not."""
        self.pointer = (x, y)
        if self._pan is not None:
            self._view.pan(x - self._pan[0], y - self._pan[1])
            self._pan = (x, y)
        elif self.gesture is not None:
            self._carry_on(x, y)
        elif self._press is not None:
            begun = self._press.move(x, y)
            if begun is not None:
                self._begin(begun)
                self._carry_on(x, y)
        else:
            self._hover(x, y)

    def release(self) -> bool:
        """The hand goes up: a gesture makes its edit, a press without motion selects. Says whether anything was done."""
        press, self._press = self._press, None
        if self.gesture is None:
            if press is not None:
                self._view.choose(press.hit.id, press.click())
            return press is not None
        preview, plan = self.gesture.preview, self.gesture.release()
        self.cancel()
        if plan is not None:
            self._view.commands.carry_out(plan)
        elif preview.refusal:
            self._view.say(preview.refusal, refused=True)
        return plan is not None

    def cancel(self) -> None:
        """Drop whatever is under way."""
        if self.gesture is not None:
            self.gesture.cancel()
        self.gesture, self.link_keys, self._press, self._pan = None, None, None, None
        self._edge.stop()
        self._view.unsetCursor()
        self._view.update()

    def grab_ground(self, x: float, y: float) -> None:
        """Take hold of the whole path, to carry it about."""
        self._pan = (x, y)
        self._view.setCursor(Qt.CursorShape.ClosedHandCursor)

    def forget_hover(self) -> None:
        """The pointer is elsewhere, or what lay under it has changed."""
        if self.hover != Hit():
            self.hover = Hit()
            self._view.update()

    # -- from the shelf --------------------------------------------------------------------------------------
    def carry(self, kind: str, at: QPoint) -> bool:
        """A kind from the shelf is at this point of the view; says whether a drop there would do something."""
        if not isinstance(self.gesture, ShelfDrag) or self.gesture.kind != kind:
            self._begin(ShelfDrag(self._view, kind))
        assert isinstance(self.gesture, ShelfDrag)
        if self._view.rect().contains(at):
            self._carry_on(float(at.x()), float(at.y()))
        else:
            self.gesture.leave()
            self._edge.stop()
            self._view.update()
        return self.gesture.plan is not None

    # -- a link by keyboard ----------------------------------------------------------------------------------
    def start_link(self, key: str) -> None:
        """Draw a link from a stage with the arrow keys."""
        try:
            self.link_keys = LinkKeys(self._view, key)
        except ValueError as error:
            self._view.say(str(error), refused=True)
            return
        self.announce_link()

    def announce_link(self) -> None:
        """Show and say where the keyboard's link would lead."""
        if self.link_keys is not None:
            preview = self.link_keys.preview
            self._view.reveal(preview.target.id)
            self._view.said.emit(preview.refusal or preview.hint)
            self._view.update()

    def confirm_link(self) -> None:
        """Make the link that the keyboard has chosen; a refused one stays to be led elsewhere."""
        if self.link_keys is None:
            return
        plan, refusal = self.link_keys.confirm(), self.link_keys.preview.refusal
        if plan is None:
            self._view.say(
                refusal or "There is nothing to link to yet: add a stage first", refused=bool(refusal)
            )
            return
        self.link_keys = None
        self._view.commands.carry_out(plan)
        self._view.update()

    # ----------------------------------------------------------------------------------------------------
    def _begin(self, gesture: Gesture) -> None:
        self.gesture = gesture
        self.hover = Hit()
        self._view.hush()
        self._view.setCursor(Qt.CursorShape.ClosedHandCursor)

    def _carry_on(self, x: float, y: float) -> None:
        if self.gesture is None:
            return
        self.pointer = (x, y)
        self.gesture.move(x, y)
        inner = self._view.rect().adjusted(EDGE_PX, EDGE_PX, -EDGE_PX, -EDGE_PX)
        if inner.contains(round(x), round(y)):
            self._edge.stop()
        elif not self._edge.isActive():
            self._edge.start()
        self._view.update()

    def _scroll_at_edge(self) -> None:
        """While something is carried to the edge, bring more of the path into view."""
        (x, y), view = self.pointer, self._view
        across = EDGE_STEP_PX * ((x > view.width() - EDGE_PX) - (x < EDGE_PX))
        down = EDGE_STEP_PX * ((y > view.height() - EDGE_PX) - (y < EDGE_PX))
        view.pan(-across, -down)
        if self.gesture is not None:
            self.gesture.move(x, y)
            view.update()

    def _hover(self, x: float, y: float) -> None:
        hover = self._view.hit(x, y)
        if hover != self.hover:
            self.hover = hover
            grabs = hover.what in ("output", "input")
            self._view.setCursor(Qt.CursorShape.CrossCursor if grabs else Qt.CursorShape.ArrowCursor)
            self._view.setToolTip(keys.tip(self._view.project, hover))
            self._view.update()
