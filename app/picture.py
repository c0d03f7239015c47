"""A path's level diagram as a picture on its own: the stages over it, the diagram, what its lines mean under it.

For paper and for files, where no path view stands above and nothing can be pointed at. QtGui only; sizes in px.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPainterPath, QPen, QPolygonF

from app.diagram.geometry import Geometry, Look, Request, build
from app.diagram.metrics import text_width
from app.diagram.paint import LABEL_PX, STROKES, paint
from app.inks import Inks, font
from engine.levels import NodeLevels
from engine.outcome import Outcome
from engine.sections.base import Domain
from engine.stages import Stage

LEFT_PX, RIGHT_PX = 50.0, 76.0  # room for the axes
END_PX = 16.0  # beyond the last stage, for what stands beside a seat
BLOCK_SHARE = 0.84
LEADING_PX = 13.0
KEY_PX = 26.0  # height of the line that says what the lines mean
AXIS_TITLE_PX = 18.0
TURNED_BELOW_PX = 66.0  # narrower blocks have their names turned upright
KEY = (
    ("clip", "clip point"), ("ceiling", "usable ceiling"), ("peak", "peak"), ("level", "programme level"),
    ("noise", "noise"), ("room", "room noise"),
)  # fmt: skip


@dataclass(frozen=True)
class PathColumns:
    """The stages of one path side by side over a width: what geometry needs to know of columns."""

    count: int
    width: float

    @property
    def pitch(self) -> float:
        return (self.width - LEFT_PX - RIGHT_PX - END_PX) / max(self.count, 1)

    def x_in(self, column: float) -> float:
        return LEFT_PX + (column + (1.0 - BLOCK_SHARE) / 2.0) * self.pitch

    def x_out(self, column: float) -> float:
        return LEFT_PX + (column + (1.0 + BLOCK_SHARE) / 2.0) * self.pitch


@dataclass(frozen=True)
class Picture:
    """One path of a solved project, `width` × `height` px."""

    outcome: Outcome
    path: Sequence[str]
    width: float
    height: float
    look: Look | None = None

    @cached_property
    def columns(self) -> PathColumns:
        return PathColumns(len(self.path), self.width)

    @cached_property
    def geometry(self) -> Geometry:
        """The diagram's geometry; its y counts from `top`."""
        seat = next((seat for seat in self.outcome.seats if seat.stage == self.path[-1]), None)
        tight = tightest(self.outcome, self.path)
        return build(
            Request(
                trace=self.outcome.trace(self.path), column_of={key: at for at, key in enumerate(self.path)},
                columns=self.columns, width=self.width, height=self.height - self.top - KEY_PX, text_width=text_width,
                look=replace(self.look or Look(), narrowest=tight.stage if tight else None), seat=seat, left_px=LEFT_PX, right_px=RIGHT_PX,
            )
        )  # fmt: skip

    @property
    def top(self) -> float:
        """Where the diagram begins, under the stages and the titles of the axes."""
        return self._strip_px + AXIS_TITLE_PX

    @property
    def is_turned(self) -> bool:
        """Whether the names stand upright for want of width."""
        return self.columns.pitch * BLOCK_SHARE < TURNED_BELOW_PX

    @cached_property
    def _names(self) -> list[list[str]]:
        """The lines of every stage's name."""
        names = [self.outcome.project.stage[key].name for key in self.path]
        if self.is_turned:
            most = max(1, int(self.columns.pitch * BLOCK_SHARE / LEADING_PX))
            longest = max((text_width(name, False) for name in names), default=0.0)
            room = max(80.0, longest / most + 40.0)
        else:
            room = self.columns.pitch * BLOCK_SHARE - 8.0
        return [list(_lines(name, room)) for name in names]

    @cached_property
    def _strip_px(self) -> float:
        """Height of the blocks with the stages' names."""
        if self.is_turned:
            return (
                max((text_width(line, False) for lines in self._names for line in lines), default=0.0) + 16.0
            )
        return max((len(lines) for lines in self._names), default=1) * LEADING_PX + 12.0

    def paint(self, painter: QPainter, inks: Inks) -> None:
        """All of it; the painter's origin is the picture's corner."""
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        for at, key in enumerate(self.path):
            self._block(painter, inks, at, self.outcome.project.stage[key])
        self._axis_titles(painter, inks)
        self._key(painter, inks)
        painter.translate(0.0, self.top)
        paint(painter, self.geometry, inks)
        painter.restore()

    def _block(self, painter: QPainter, inks: Inks, at: int, stage: Stage) -> None:
        left, right = self.columns.x_in(at), self.columns.x_out(at)
        box = QRectF(left, 0.5, right - left, self._strip_px - 1.0)
        painter.setPen(QPen(inks.muted, 0.8))
        painter.setBrush(inks.raised)
        painter.drawPath(_outline(stage, box))
        painter.setPen(inks.ink)
        painter.setFont(font(LABEL_PX))
        lines = self._names[at]
        painter.save()
        painter.translate(box.center())
        if self.is_turned:
            painter.rotate(-90.0)
        for place, line in enumerate(lines):
            y = (place - (len(lines) - 1) / 2.0) * LEADING_PX + 4.0
            painter.drawText(QPointF(-text_width(line, False) / 2.0, y), line)
        painter.restore()

    def _axis_titles(self, painter: QPainter, inks: Inks) -> None:
        painter.setPen(inks.muted)
        painter.setFont(font(LABEL_PX))
        baseline = self._strip_px + AXIS_TITLE_PX - 2.0
        title = self.geometry.left_title
        painter.drawText(QPointF(max(0.0, LEFT_PX - 8.0 - text_width(title, False)), baseline), title)
        painter.drawText(QPointF(self.width - RIGHT_PX + 8.0, baseline), self.geometry.right_title)

    def _key(self, painter: QPainter, inks: Inks) -> None:
        """A sample of every line that is drawn, with its name."""
        painter.setFont(font(LABEL_PX))
        y = self.height - KEY_PX / 2.0
        x = LEFT_PX
        for series, name in self._shown():
            stroke = STROKES[series]
            pen = QPen(getattr(inks, stroke.ink), stroke.width)
            pen.setCapStyle(Qt.PenCapStyle.FlatCap)
            if stroke.dash:
                pen.setDashPattern(list(stroke.dash))
            painter.setPen(pen)
            painter.drawLine(QLineF(x, y, x + 26.0, y))
            if series == "level":
                painter.setBrush(inks.paper)
                painter.setPen(QPen(inks.level, 1.6))
                painter.drawEllipse(QPointF(x + 13.0, y), 2.6, 2.6)
            painter.setPen(inks.ink)
            painter.drawText(QPointF(x + 32.0, y + 4.0), name)
            x += 32.0 + text_width(name, False) + 20.0

    def _shown(self) -> Iterator[tuple[str, str]]:
        drawn = {series for series, spans in self.geometry.spans.items() if spans} | {
            bar for _, bar in self.geometry.bars
        }
        return ((series, name) for series, name in KEY if series in drawn)


def tightest(outcome: Outcome, path: Sequence[str]) -> NodeLevels | None:
    """The node of a path with the least peak margin."""
    trace = outcome.trace(path)
    known = [(node.peak_margin, at) for at, node in enumerate(trace) if node.peak_margin is not None]
    return trace[min(known)[1]] if known else None


def _lines(name: str, room: float) -> Iterator[str]:
    """A name broken between words into lines no wider than `room`, as far as its words allow."""
    line = ""
    for word in name.split(" "):
        longer = f"{line} {word}".strip()
        if line and text_width(longer, False) > room:
            yield line
            line = word
        else:
            line = longer
    yield line


def _outline(stage: Stage, box: QRectF) -> QPainterPath:
    """Shape says domain: round-ended in the air, one cut corner for digital, else square."""
    domains = {port.domain for port in (*stage.inputs(), *stage.outputs())} | {stage.domain}
    path = QPainterPath()
    if Domain.ACOUSTIC in domains:
        radius = min(box.width(), box.height(), 24.0) / 2.0
        path.addRoundedRect(box, radius, radius)
    elif Domain.DIGITAL in domains:
        cut = min(8.0, box.width() / 3.0)
        corners = [
            QPointF(box.right() - cut, box.top()),
            QPointF(box.right(), box.top() + cut),
            box.bottomRight(),
            box.bottomLeft(),
        ]
        path.addPolygon(QPolygonF([box.topLeft(), *corners]))
        path.closeSubpath()
    else:
        path.addRect(box)
    return path
