"""The rows of a card for one selection, built from its contents."""

from __future__ import annotations

from functools import partial

from PySide6.QtCore import QPoint, Qt
from PySide6.QtWidgets import QHBoxLayout, QMenu, QVBoxLayout, QWidget

from app import edits
from engine.outcome import Outcome
from engine.project import HEADER_KEY, Changes, Link, Project
from engine.seat import SeatLevels
from engine.stages import Stage

from . import results
from .contents import Contents, domain_of, is_heard
from .control_row import ControlRow
from .figure_row import FigureRow
from .option_row import OptionRow
from .pieces import GAP_PX, Elided, Heading, Word, column, row, tip
from .scene import Part, Scene
from .tables import Budget, LevelTable, Lines
from .text_row import TextRow

PADDING_PX = 20
TOP_PX = 16
CONTROL_GAP_PX = 10


class Pane(QWidget):
    """Everything a card shows; its `rows` follow the document."""

    def __init__(self, scene: Scene, contents: Contents) -> None:
        super().__init__()
        self.setObjectName("card")
        self.scene, self.contents = scene, contents
        self.rows: list[Part] = []
        self._body = QVBoxLayout(self)
        self._body.setContentsMargins(PADDING_PX, TOP_PX, PADDING_PX, PADDING_PX)
        self._body.setSpacing(GAP_PX)
        {"project": self._project, "stages": self._stages, "links": self._links, "mixed": self._mixed}[
            contents.sort
        ]()
        self._body.addStretch(1)
        #: What the keyboard comes to first: a control where there is one, else what stands topmost.
        takes = [part for part in self.rows if part.focusProxy() is not None]
        self.first: Part | None = next(
            (part for part in takes if isinstance(part, ControlRow)), next(iter(takes), None)
        )

    def show_project(self, project: Project) -> None:
        """Follow a change that leaves the rows what they are."""
        for each in self.rows:
            each.show_project(project)

    def show_outcome(self, outcome: Outcome) -> None:
        """Follow a solve."""
        for each in self.rows:
            each.show_outcome(outcome)

    # -- what is selected ------------------------------------------------------------------------------------
    def _stages(self) -> None:
        keys, scene = self.contents.keys, self.scene
        stage = scene.project.stage[keys[0]]
        one = len(keys) == 1
        if one:
            self._add(_name_row(scene, keys[0]))
        else:
            self._title(f"{len(keys)} stages")
        self._add(About(scene, keys), gap=-GAP_PX)
        for name in self.contents.controls:
            self._add(ControlRow(scene, keys, name), gap=CONTROL_GAP_PX - GAP_PX)
        if one:
            self._results(stage)
        self._distances()
        self._figures("Figures")
        self._options("Build")
        self._place(keys)

    def _links(self) -> None:
        keys, scene = self.contents.keys, self.scene
        link = scene.project.link[keys[0]]
        one = len(keys) == 1
        self._title(_ends(scene.project, link) if one else f"{len(keys)} links")
        self._quiet(f"Link · {_carries(scene.project, link)}" if one else "Changed together")
        if one:
            self._add(Lines(scene.inks, "Levels of the link", partial(_link_lines, keys[0])))
        self._figures("")
        self._options("")

    def _mixed(self) -> None:
        self._title(f"{len(self.contents.keys)} selected")
        self._quiet("Stages and links have nothing in common to set.")

    def _project(self) -> None:
        scene, keys = self.scene, (HEADER_KEY,)
        self._add(_name_row(scene, HEADER_KEY))
        self._add(ProjectAbout(), gap=-GAP_PX)
        texts = (
            ("revision", "Revision", lambda _p, text: edits.set_header(_p, revision=_whole(text))),
            ("author", "Author", lambda _p, text: edits.set_header(_p, author=" ".join(text.split()))),
        )
        revision, author = (TextRow(scene, keys, name, label, make) for name, label, make in texts)
        revision.setFixedWidth(72)
        self._body.addLayout(row(revision, author, stretch=1))
        self.rows += [revision, author]
        self._figures("")
        self._options("")
        self._add(
            TextRow(scene, keys, "note", "Note", lambda _p, text: edits.set_header(_p, note=text.strip()))
        )

    # -- groups ----------------------------------------------------------------------------------------------
    def _results(self, stage: Stage) -> None:
        scene, key = self.scene, stage.id
        if stage.is_seat:
            self._heading("At this seat")
            self._add(Lines(scene.inks, "What the seat hears", partial(_seat_lines, key)))
            self._heading("Who owns the hiss")
            self._add(Budget(scene.inks, partial(_owners, key), lambda stage: scene.document.select([stage])))
            return
        if stage.is_loudspeaker:
            self._heading("What it carries")
            self._add(Lines(scene.inks, "What it carries", partial(_load_lines, key)))
        self._heading("Levels")
        self._add(Lines(scene.inks, "Levels of its inputs and outputs", partial(_node_lines, key)))
        self._add(LevelTable(scene.inks, "Levels of its sections", partial(_levels, key)))

    def _distances(self) -> None:
        if self.contents.distances:
            self._heading("Distances")
        for key in self.contents.distances:
            source = self.scene.project.stage[self.scene.project.link[key].source]
            distance = FigureRow(self.scene, (key,), "distance_m", label=f"From {source.name}")
            if is_heard(self.scene.project, self.scene.project.link[key]):
                self._side_by_side(distance, FigureRow(self.scene, (key,), "off_axis_db", absent="on axis"))
            else:
                self._add(distance)

    def _figures(self, heading: str) -> None:
        if not self.contents.figures and not self.contents.absent:
            return
        if heading:
            self._heading(heading)
        for name in self.contents.figures:
            self._add(FigureRow(self.scene, self.contents.keys, name))
        if self.contents.absent:
            self._body.addWidget(_Add(self.scene, self.contents), 0, Qt.AlignmentFlag.AlignLeft)

    def _options(self, heading: str) -> None:
        if self.contents.options and heading:
            self._heading(heading)
        for name in self.contents.options:
            self._add(OptionRow(self.scene, self.contents.keys, name))

    def _place(self, keys: tuple[str, ...]) -> None:
        scene = self.scene
        self._heading("Place")
        rack, area = (
            TextRow(scene, keys, name, label, partial(_put, keys, name))
            for name, label in (("rack", "Rack"), ("area", "Area"))
        )
        count = TextRow(
            scene, keys, "count", "Alike", lambda p, text: edits.set_count(p, list(keys), _whole(text))
        )
        count.setFixedWidth(60)
        self._add(rack)
        self._body.addLayout(row(area, count))
        self.rows += [area, count]
        self._add(TextRow(scene, keys, "note", "Note", partial(_put, keys, "note")))

    # -- pieces ----------------------------------------------------------------------------------------------
    def _add(self, part: Part, gap: int = 0) -> None:
        if gap > 0:
            self._body.addSpacing(gap)
        self._body.addWidget(part)
        self.rows.append(part)

    def _side_by_side(self, left: Part, right: Part) -> None:
        """Two alike in width, their fields on one line whatever stands under them."""
        both = QHBoxLayout()
        both.setSpacing(GAP_PX)
        for part in (left, right):
            both.addWidget(part, 1, Qt.AlignmentFlag.AlignTop)
        self._body.addLayout(both)
        self.rows += [left, right]

    def _heading(self, text: str) -> None:
        self._body.addWidget(Heading(text, self.scene.inks))

    def _title(self, text: str) -> None:
        self._body.addWidget(Elided(text, 16, strong=True))

    def _quiet(self, text: str) -> None:
        self._body.addWidget(Elided(text, 12, quiet=True))


class About(Part):
    """Which kind it is and where it stands; of several, their names."""

    def __init__(self, scene: Scene, keys: tuple[str, ...]) -> None:
        super().__init__()
        self._scene, self._keys = scene, keys
        self._label = Elided("", 12, quiet=True)
        column(self).addWidget(self._label)
        self.show_project(scene.project)

    def show_project(self, project: Project) -> None:
        stages = [project.stage[key] for key in self._keys]
        if len(stages) > 1:
            self._label.show_text(", ".join(stage.name for stage in stages))
            return
        stage = stages[0]
        count = f"{stage.count} alike" if stage.count > 1 else ""
        parts = (stage.title, stage.rack, stage.area, count)
        self._label.show_text(" · ".join(part for part in parts if part))
        self._label.set_help(stage.help)


class ProjectAbout(Part):
    """How much there is to the project."""

    def __init__(self) -> None:
        super().__init__()
        self._label = Elided("", 12, quiet=True)
        column(self).addWidget(self._label)

    def show_project(self, project: Project) -> None:
        stages, seats = len(project.stages), sum(stage.is_seat for stage in project.stages)
        self._label.show_text(f"Whole project · {_counted(stages, 'stage')}, {_counted(seats, 'seat')}")

    def show_outcome(self, outcome: Outcome) -> None:
        self.show_project(outcome.project)


class _Add(Word):
    """Offers the figures a sheet may give and that are not there yet."""

    def __init__(self, scene: Scene, contents: Contents) -> None:
        super().__init__("+ Add a figure", quiet=False)
        self._scene, self._contents = scene, contents
        self.setAccessibleName("Add a figure")
        self.setToolTip("Further figures a data sheet may give")
        self.menu_: QMenu | None = None
        self.clicked.connect(self._offer)

    def _offer(self) -> None:
        item = self._scene.items(self._contents.keys)[0]
        menu = QMenu(self)
        menu.setToolTipsVisible(True)
        for name in self._contents.absent:
            spec = item.figure_specs()[name]
            action = menu.addAction(spec.label)
            action.setToolTip(tip(spec.help))
            action.triggered.connect(partial(self._open, name))
        self.menu_ = menu
        menu.popup(self.mapToGlobal(QPoint(0, self.height())))

    def _open(self, name: str, _checked: bool = False) -> None:
        keys, scene = self._contents.keys, self._scene
        spec = scene.items(keys)[0].figure_specs()[name]
        count = len(getattr(scene.items(keys)[0], name)) if spec.many else 0
        scene.opened.add((keys[0], name))
        scene.wanted = (keys, f"{name}.{count}" if spec.many else name)
        scene.rebuild()


def _name_row(scene: Scene, key: str) -> TextRow:
    return TextRow(
        scene, (key,), "name", "Name", lambda project, text: edits.rename(project, key, text),
        bare=True, size_px=16, title="Rename",
    )  # fmt: skip


def _put(keys: tuple[str, ...], name: str, project: Project, text: str) -> Changes:
    return {
        key: pair for each in keys for key, pair in edits.set_place(project, each, **{name: text}).items()
    }


def _whole(text: str) -> int:
    clean = text.strip().lstrip("×x").strip()
    if not clean.isdecimal():
        raise ValueError(f"{text.strip() or 'nothing'} will not do: type a whole number, such as 2")
    return int(clean)


def _counted(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"


def _ends(project: Project, link: Link) -> str:
    return f"{project.stage[link.source].name} → {project.stage[link.target].name}"


def _carries(project: Project, link: Link) -> str:
    return {"acoustic": "through air", "analogue": "analogue wire", "digital": "digital"}.get(
        domain_of(project, link).name.lower(), ""
    )


# -- what the rows read of an outcome; a stage that is just being taken away has nothing ----------------------
def _seat(key: str, outcome: Outcome) -> SeatLevels | None:
    return next((seat for seat in outcome.seats if seat.stage == key), None)


def _seat_lines(key: str, outcome: Outcome) -> tuple[results.Line, ...]:
    seat = _seat(key, outcome)
    return () if seat is None else results.seat_lines(seat)


def _owners(key: str, outcome: Outcome) -> tuple[results.Owner, ...]:
    seat = _seat(key, outcome)
    return () if seat is None else results.owners_of(seat)


def _load_lines(key: str, outcome: Outcome) -> tuple[results.Line, ...]:
    return results.load_lines(outcome, key)


def _levels(key: str, outcome: Outcome) -> tuple[results.Levels, ...]:
    return results.levels_of(outcome, key) if key in outcome.project.stage else ()


def _node_lines(key: str, outcome: Outcome) -> tuple[results.Line, ...]:
    return results.node_lines(outcome, key) if key in outcome.project.stage else ()


def _link_lines(key: str, outcome: Outcome) -> tuple[results.Line, ...]:
    link = outcome.project.link.get(key)
    return () if link is None else results.link_lines(outcome, link)
