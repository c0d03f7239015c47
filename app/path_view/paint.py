"""The whole path as strokes: links under blocks, then what the hand is at, then what is said beside it."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtCore import QRect, QRectF, Qt
from PySide6.QtGui import QPainter, QPen

from app.gestures import LinkDrag, LinkKeys, MoveBlocks
from app.gestures.base import Point
from app.inks import font
from engine.stages import Port, Stage

from .layout import Layout
from .paint_blocks import Look, paint_block, paint_ports
from .paint_links import paint_link
from .paint_preview import paint_note, paint_preview

if TYPE_CHECKING:
    from .view import PathView

EMPTY = "Drag a source from the shelf to here, or choose one there and press Enter, to begin a signal path."
SPARE_PX = 16  # what a block's ring and count mark reach beyond it


def paint(painter: QPainter, view: PathView, area: QRect) -> None:
    """Everything inside `area`."""
    painter.fillRect(area, view.inks.paper)
    if not view.project.stages and not view.hand.preview.ghosts:
        _paint_empty(painter, view)
    _paint_links(painter, view, area)
    _paint_blocks(painter, view, area)
    gesture = view.hand.gesture
    held = gesture.ids if isinstance(gesture, MoveBlocks) else frozenset()
    plan = gesture.plan if gesture is not None else None
    after = {key: new for key, (_, new) in plan.changes.items() if isinstance(new, Stage)} if plan else {}
    paint_preview(painter, view.hand.preview, view.grid, after, held, view.inks)
    if isinstance(view.hand.link_keys, LinkKeys):
        _paint_chosen_link(painter, view, view.hand.link_keys)
    _paint_said(painter, view)
    if view.hasFocus() and not view.current:
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(view.inks.accent, 1.5))
        painter.drawRoundedRect(QRectF(view.rect()).adjusted(3, 3, -3, -3), 5.0, 5.0)


def _paint_empty(painter: QPainter, view: PathView) -> None:
    painter.setPen(view.inks.muted)
    painter.setFont(font(14))
    inner = QRectF(view.rect()).adjusted(40, 12, -40, -12)
    painter.drawText(inner, int(Qt.AlignmentFlag.AlignCenter) | int(Qt.TextFlag.TextWordWrap), EMPTY)


def _paint_links(painter: QPainter, view: PathView, area: QRect) -> None:
    layout, selection, project = view.grid, view.document.selection, view.project
    lifted = view.hand.gesture.lifted if isinstance(view.hand.gesture, LinkDrag) else ""
    late = []
    for link in project.links:
        line = layout.line(link)
        if not _touches(line, area) or link.id == lifted:
            continue
        several = min(project.stage[link.source].count, project.stage[link.target].count) > 1
        if link.id in selection:
            late.append(line)
        else:
            on_path = (link.source, link.target) in view.shown
            hovered = view.hand.hover.id == link.id
            paint_link(painter, line, view.inks, hovered=hovered, several=several, on_path=on_path)
    for line in late:
        paint_link(painter, line, view.inks, selected=True)


def _paint_blocks(painter: QPainter, view: PathView, area: QRect) -> None:
    layout, project, inks, preview = view.grid, view.project, view.inks, view.hand.preview
    selection = preview.caught if preview.band is not None else view.document.selection
    gesture, scale = view.hand.gesture, layout.scale
    held = gesture.ids if isinstance(gesture, MoveBlocks) and preview.ghosts else frozenset()
    wanted = _wanted(view)
    refused = preview.target.id if preview.refusal else ""
    near = area.adjusted(-SPARE_PX, -SPARE_PX, SPARE_PX, SPARE_PX)
    for stage in project.stages:
        left, top, width, height = box = layout.box(stage.id)
        if (
            left > near.right()
            or left + width < near.left()
            or top > near.bottom()
            or top + height < near.top()
        ):
            continue
        look = Look(
            selected=stage.id in selection,
            hovered=view.hand.hover.id == stage.id,
            focused=view.hasFocus() and view.current == stage.id and gesture is None,
            faded=stage.id in held,
            refused=stage.id == refused,
        )
        paint_block(painter, box, stage, scale, inks, look)
        if scale.detail != "bare":
            every = look.hovered or look.focused
            sought = partial(wanted, stage.id) if wanted is not None else None
            paint_ports(
                painter, layout.ports(stage.id), layout.linked(stage.id), inks, every=every, wanted=sought
            )


def _wanted(view: PathView) -> Callable[[str, Port, bool], bool] | None:
    """Which ports a link in the hand may lead to: of the same domain, on the other side, of another stage."""
    gesture, chosen, stages = view.hand.gesture, view.hand.link_keys, view.project.stage
    if isinstance(gesture, LinkDrag):
        start, name, from_output = stages[gesture.stage], gesture.port, gesture.from_output
    elif chosen is not None:
        start, name, from_output = stages[chosen.stage], chosen.output, True
    else:
        return None
    ports = start.outputs() if from_output else start.inputs()
    domain = next(port.domain for port in ports if port.name == name)
    return lambda key, port, is_output: is_output != from_output and port.domain == domain and key != start.id


def _paint_chosen_link(painter: QPainter, view: PathView, chosen: LinkKeys) -> None:
    """The line that the keyboard's link would take."""
    layout, target = view.grid, chosen.target
    start = layout.port(chosen.stage, chosen.output, is_output=True)
    if target.id not in view.project.stage:
        return
    inputs = view.project.stage[target.id].inputs()
    end = (
        layout.port(target.id, target.port or inputs[0].name, is_output=False)
        if inputs
        else _middle(layout, target.id)
    )
    turn = (start[0] + end[0]) / 2.0 if end[0] > start[0] else start[0] + 8.0
    line = (start, (turn, start[1]), (turn, end[1]), end)
    refusal = chosen.preview.refusal
    paint_link(painter, line, view.inks, selected=not refusal, refused=bool(refusal))


def _paint_said(painter: QPainter, view: PathView) -> None:
    """The refusal or hint of what is going on at the pointer; else what was said last."""
    preview, size = view.hand.preview, (float(view.width()), float(view.height()))
    at = view.hand.pointer
    if view.hand.gesture is None and view.current in view.project.stage:
        left, top, _, height = view.grid.box(view.current)
        at = (left, top + height - 8.0)
    if view.hand.link_keys is not None and preview.target.id in view.project.stage:
        left, top, _, height = view.grid.box(preview.target.id)
        at = (left, top + height - 8.0)
    if preview.refusal:
        paint_note(painter, preview.refusal, at, size, view.inks, refused=True)
    elif preview.hint:
        paint_note(painter, preview.hint, at, size, view.inks)
    elif view.note:
        paint_note(painter, view.note, at, size, view.inks, refused=view.note_refused)


def _middle(layout: Layout, key: str) -> Point:
    left, top, width, height = layout.box(key)
    return left + width / 2.0, top + height / 2.0


def _touches(line: tuple[Point, ...], area: QRect) -> bool:
    xs, ys = [x for x, _ in line], [y for _, y in line]
    return (
        min(xs) <= area.right() + 4 and max(xs) >= area.left() - 4
        and min(ys) <= area.bottom() + 4 and max(ys) >= area.top() - 4
    )  # fmt: skip
