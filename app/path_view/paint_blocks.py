"""Blocks and their ports, as strokes: name and summary by the room there is, a mark for many alike."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPen

from app.gestures.base import Box, Point
from app.inks import Inks, blend, font
from engine.stages import Port, Stage

from .rows import RowScale
from .shapes import outline, shape_of, sharp
from .type import fits_in_two, fitted, metrics, two_lines

NAME_PX, SUMMARY_PX = 12, 11
TEXT_INSET_PX = 4.0
OPEN_PORT_PX = 3.0


@dataclass(frozen=True)
class Look:
    """How a block stands out at the moment."""

    selected: bool = False
    hovered: bool = False
    focused: bool = False
    faded: bool = False
    refused: bool = False


def paint_block(painter: QPainter, box: Box, stage: Stage, scale: RowScale, inks: Inks, look: Look) -> None:
    """One stage's block; its text leaves out what there is no room for."""
    frame = sharp(*box)
    if look.faded:
        painter.setOpacity(0.35)
    if stage.count > 1 and scale.detail != "bare":
        painter.setPen(QPen(inks.hairline, 1.0))
        painter.setBrush(inks.raised)
        painter.drawPath(outline(shape_of(stage), frame.translated(3.0, 3.0)))
    edge, width = inks.hairline, 1.0
    if look.selected:
        edge, width = inks.accent, 1.0 if look.focused else 1.5
    elif look.hovered:
        edge = inks.muted
    if look.refused:
        edge, width = inks.stop, 1.5
    painter.setPen(QPen(edge, width))
    painter.setBrush(blend(inks.accent, inks.raised, 0.14) if look.selected else inks.raised)
    if scale.detail == "bare" and not look.selected:
        painter.setPen(QPen(inks.accent if look.hovered else inks.muted, 1.0))
    painter.drawPath(outline(shape_of(stage), frame))
    if look.focused:
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(inks.accent, 2.0))
        painter.drawPath(outline(shape_of(stage), frame.adjusted(-4.0, -4.0, 4.0, 4.0)))
    if scale.detail != "bare":
        _paint_text(painter, frame, stage, scale, inks)
        if stage.count > 1:
            _paint_count(painter, frame, stage.count, inks)
    painter.setOpacity(1.0)


def _paint_text(painter: QPainter, frame: QRectF, stage: Stage, scale: RowScale, inks: Inks) -> None:
    room = frame.width() - 2.0 * TEXT_INSET_PX
    summary = stage.summary() if scale.detail == "full" else ""
    if scale.detail == "full":
        name_px = NAME_PX if fits_in_two(stage.name, room, NAME_PX, strong=True) else SUMMARY_PX
        lines = two_lines(stage.name, room, name_px, strong=True)
    else:
        name_px = SUMMARY_PX
        lines = (fitted(stage.name, room, name_px, strong=True),)
    leads = [name_px + 3.0] * len(lines) + ([SUMMARY_PX + 5.0] if summary else [])
    y = frame.center().y() - sum(leads) / 2.0
    painter.setPen(inks.ink)
    painter.setFont(font(name_px, strong=True))
    for line, lead in zip(lines, leads, strict=False):
        painter.drawText(QRectF(frame.left(), y, frame.width(), lead), Qt.AlignmentFlag.AlignCenter, line)
        y += lead
    if summary:
        painter.setPen(inks.muted)
        painter.setFont(font(SUMMARY_PX))
        painter.drawText(
            QRectF(frame.left(), y, frame.width(), leads[-1]),
            Qt.AlignmentFlag.AlignCenter,
            fitted(summary, room, SUMMARY_PX),
        )


def _paint_count(painter: QPainter, frame: QRectF, count: int, inks: Inks) -> None:
    text = f"×{count}"
    width = metrics(SUMMARY_PX, strong=True).horizontalAdvance(text) + 8.0
    mark = QRectF(frame.right() - width + 7.0, frame.top() - 12.0, width, 16.0)
    painter.setPen(QPen(inks.hairline, 1.0))
    painter.setBrush(inks.paper)
    painter.drawRoundedRect(mark, 5.0, 5.0)
    painter.setPen(inks.ink)
    painter.setFont(font(SUMMARY_PX, strong=True))
    painter.drawText(mark, Qt.AlignmentFlag.AlignCenter, text)


def paint_ports(
    painter: QPainter, ports: Iterable[tuple[Port, bool, Point]], linked: frozenset[tuple[bool, str]],
    inks: Inks, *, every: bool, wanted: Callable[[Port, bool], bool] | None = None,
) -> None:  # fmt: skip
    """A block's ports. Open ends always show, linked ones and taps with `every`. `wanted` marks the ends that a link
    in the hand may lead to."""
    for port, is_output, (x, y) in ports:
        is_linked = (is_output, port.name) in linked
        sought = wanted is not None and wanted(port, is_output)
        if (is_linked or port.tap) and not every and not sought:
            continue
        edge = inks.accent if sought else inks.muted
        painter.setPen(QPen(edge, 1.25 if sought else 1.0))
        painter.setBrush(inks.muted if is_linked and not sought else inks.paper)
        radius = OPEN_PORT_PX + (1.0 if sought else 0.0)
        painter.drawEllipse(QPointF(round(x), round(y) + 0.5), radius, radius)
