"""What a gesture shows while the hand is at it: where a block would stand, which link opens, why something cannot be."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import pairwise

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPen

from app.gestures import Ghost, Preview
from app.gestures.base import Point
from app.inks import Inks, blend, font
from engine.stages import Stage

from .layout import Layout
from .paint_links import corners, paint_link
from .shapes import outline, shape_of, sharp
from .type import fitted, metrics

NOTE_PX = 12
NOTE_WIDTH_PX = 280.0


def paint_preview(
    painter: QPainter,
    preview: Preview,
    layout: Layout,
    after: Mapping[str, Stage],
    held: frozenset[str],
    inks: Inks,
) -> None:
    """All but the note. `after` are the stages as they would be; `held` those in the hand."""
    target, project = preview.target, layout.project
    if target.what == "link" and target.id in project.link:
        line = layout.line(project.link[target.id])
        paint_link(painter, line, inks, selected=not preview.refusal, refused=bool(preview.refusal))
        if not preview.refusal:
            _paint_opening(painter, line, inks)
    elif target.what in ("output", "input") and target.id in project.stage:
        _paint_end(painter, preview, layout, inks)
    opens = target.what == "link"
    for ghost in preview.ghosts:
        stage = after.get(ghost.id)
        if stage is not None and not (opens and ghost.id not in held):
            in_hand = ghost.id in held or ghost.id not in project.stage
            _paint_ghost(painter, ghost, stage, layout, inks, in_hand=in_hand)
    if preview.line is not None:
        _paint_lead(painter, *preview.line, inks.stop if preview.refusal else inks.accent)
    if preview.band is not None:
        painter.setPen(QPen(inks.accent, 1.0))
        veil = QColor(inks.accent)
        veil.setAlphaF(0.08)
        painter.setBrush(veil)
        painter.drawRect(sharp(*preview.band))


def _paint_opening(painter: QPainter, line: tuple[Point, ...], inks: Inks) -> None:
    """A bar across the longest level run of a link: here the path opens."""
    runs = [(abs(b[0] - a[0]), a, b) for a, b in pairwise(line) if a[1] == b[1]]
    if not runs:
        return
    _, start, end = max(runs)
    middle = QPointF((start[0] + end[0]) / 2.0, start[1])
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(inks.accent)
    painter.drawRoundedRect(QRectF(middle.x() - 2.0, middle.y() - 14.0, 4.0, 28.0), 2.0, 2.0)


def _paint_end(painter: QPainter, preview: Preview, layout: Layout, inks: Inks) -> None:
    target = preview.target
    is_output = target.what == "output"
    stage = layout.project.stage[target.id]
    ports = stage.outputs() if is_output else stage.inputs()
    name = target.port or (ports[0].name if ports else "")
    x, y = layout.port(target.id, name, is_output=is_output)
    ink = inks.stop if preview.refusal else inks.accent
    painter.setPen(QPen(ink, 1.5))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.drawPath(outline(shape_of(stage), sharp(*layout.box(target.id))))
    for ghost in preview.ghosts:
        left, top, width, height = layout.cell(ghost.column, ghost.row)
        far = (left if is_output else left + width, top + height / 2.0)
        middle = (x + far[0]) / 2.0
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
        painter.setPen(QPen(ink, 1.0, Qt.PenStyle.DashLine))
        painter.drawPolyline(corners(((x, y), (middle, y), (middle, far[1]), far)))
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(ink)
    painter.drawEllipse(QPointF(round(x), round(y) + 0.5), 5.0, 5.0)


def _paint_ghost(
    painter: QPainter, ghost: Ghost, stage: Stage, layout: Layout, inks: Inks, *, in_hand: bool
) -> None:
    """Where a block would stand: what is in the hand with its name, what is pushed on as an outline alone."""
    frame = sharp(*layout.cell(ghost.column, ghost.row))
    painter.setPen(
        QPen(inks.accent if in_hand else inks.muted, 1.25 if in_hand else 1.0, Qt.PenStyle.DashLine)
    )
    painter.setBrush(blend(inks.accent, inks.paper, 0.06) if in_hand else Qt.BrushStyle.NoBrush)
    painter.drawPath(outline(shape_of(stage), frame))
    if in_hand and layout.scale.detail != "bare":
        painter.setPen(inks.accent)
        painter.setFont(font(11, strong=True))
        name = fitted(stage.name, frame.width() - 8.0, 11, strong=True)
        painter.drawText(frame, Qt.AlignmentFlag.AlignCenter, name)


def _paint_lead(painter: QPainter, start: Point, end: Point, ink: QColor) -> None:
    middle = (start[0] + end[0]) / 2.0
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(ink, 2.0))
    painter.drawPolyline(corners((start, (middle, start[1]), (middle, end[1]), end)))
    painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(ink)
    for x, y in (start, end):
        painter.drawEllipse(QPointF(round(x), round(y) + 0.5), 4.0, 4.0)


def note_box(text: str, at: Point, size: tuple[float, float], *, strong: str = "") -> QRectF:
    """Where a note of this text stands: beside the pointer, inside the view."""
    face = metrics(NOTE_PX)
    body = face.boundingRect(
        QRectF(0, 0, NOTE_WIDTH_PX, 1000), int(Qt.TextFlag.TextWordWrap), text
    )  # fmt: skip
    width = max(body.width(), metrics(NOTE_PX, strong=True).horizontalAdvance(strong)) + 26.0
    height = body.height() + (18.0 if strong else 0.0) + 14.0
    x = min(at[0] + 16.0, size[0] - width - 4.0)
    y = at[1] + 18.0
    if y + height > size[1] - 4.0:
        y = at[1] - height - 10.0
    return QRectF(max(4.0, x), max(4.0, y), width, height)


def paint_note(
    painter: QPainter, text: str, at: Point, size: tuple[float, float], inks: Inks, *, refused: bool = False
) -> None:
    """A few words beside the pointer; a refusal is marked by a word and a bar."""
    head = "Does not fit" if refused else ""
    box = note_box(text, at, size, strong=head)
    painter.setPen(QPen(inks.stop if refused else inks.hairline, 1.0))
    painter.setBrush(inks.raised)
    painter.drawRoundedRect(sharp(box.x(), box.y(), box.width(), box.height()), 5.0, 5.0)
    inner = box.adjusted(14.0 if refused else 10.0, 7.0, -10.0, -7.0)
    if refused:
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(inks.stop)
        painter.drawRoundedRect(QRectF(box.left() + 5.0, box.top() + 8.0, 3.0, box.height() - 16.0), 1.5, 1.5)
        painter.setPen(inks.stop)
        painter.setFont(font(NOTE_PX, strong=True))
        painter.drawText(inner, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop, head)
        inner.adjust(0.0, 18.0, 0.0, 0.0)
    painter.setPen(inks.ink)
    painter.setFont(font(NOTE_PX))
    painter.drawText(inner, int(Qt.TextFlag.TextWordWrap) | int(Qt.AlignmentFlag.AlignLeft), text)
