"""One data-sheet figure: typed in any unit, what was understood beside it, where it came from, how far it may be off."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtGui import QEnterEvent
from PySide6.QtWidgets import QApplication

from app import edits
from engine.figures import QUANTITIES, Figure, FigureError, Origin, echo, parse
from engine.project import Project
from engine.stages.declare import FigureSpec

from .entry import Entry
from .pieces import Elided, Said, Word, column, row, tip
from .scene import SEVERAL, Keys, Part, Scene

TOLERANCE_PX = 72
NEXT: dict[Origin, Origin] = {"guess": "sheet", "sheet": "measured", "measured": "guess"}
MEANS: dict[Origin, str] = {
    "guess": "A usual value, until the real one is known. Press: it is from the data sheet.",
    "sheet": "From the data sheet. Press: it was measured.",
    "measured": "Measured on the unit. Press: it is a guess.",
}


class FigureRow(Part):
    """Edits a figure of one item, or the same figure of several together. `name` is numbered where there are many.

    `absent` says what holds while nothing is given.
    """

    def __init__(self, scene: Scene, keys: Keys, name: str, label: str = "", absent: str = "") -> None:
        super().__init__()
        self.scene, self.keys, self.name = scene, keys, name
        self.spec = self._spec()
        self._seen: Sequence[Figure | None] | None = None
        self.label = Elided(label or self._label(), 11, quiet=True)
        self.label.set_help(self.spec.help)
        self.field = Entry(self.label.text())
        self.field.setToolTip(tip(self._help()))
        self.field.setAccessibleDescription(self._help())
        self.field.setPlaceholderText(absent or f"such as {self.spec.typical or _example(self.spec)}")
        self.origin = Word()
        kept = self.origin.sizePolicy()
        kept.setRetainSizeWhenHidden(True)  # or fields side by side would stand at unlike heights
        self.origin.setSizePolicy(kept)
        self.tolerance = Entry(f"{self.label.text()}, tolerance", bare=True, size_px=11)
        self.tolerance.setProperty("small", True)
        self.tolerance.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.tolerance.fix_width(TOLERANCE_PX)
        self.tolerance.setPlaceholderText("± none")
        self.tolerance.setToolTip(tip("How far it may be off: ±1 dB, 5 % or ±20 ohm. Empty: not said."))
        self.under = Elided("", 11, quiet=True)
        self.under.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.said = Said()
        self._arrange()
        self._connect()
        self.show_project(scene.project)
        self._recall()

    def _arrange(self) -> None:
        body = column(self)
        body.addLayout(row(self.label, self.tolerance, self.origin, spacing=4))
        body.addWidget(self.field)
        body.addWidget(self.under)
        body.addWidget(self.said)
        self.under.hide()
        self.setFocusProxy(self.field)
        self.setTabOrder(self.field, self.origin)
        self.setTabOrder(self.origin, self.tolerance)

    def _connect(self) -> None:
        self.field.taken.connect(self._typed)
        self.field.textEdited.connect(self._echo)
        self.field.fitted.connect(self._fit)
        self.origin.clicked.connect(self._change_origin)
        self.tolerance.taken.connect(self._tolerate)
        for part in (self.field, self.origin, self.tolerance):
            part.installEventFilter(self)

    # -- what it shows ---------------------------------------------------------------------------------------
    def show_project(self, project: Project) -> None:
        given = self._figures()
        if self._seen is not None and all(new is old for new, old in zip(given, self._seen, strict=True)):
            return  # a stage that changed elsewhere keeps its other figures, the very same
        self._seen = given
        texts = {figure.text if figure else "" for figure in given}
        self.field.show_value(texts.pop() if len(texts) == 1 else SEVERAL)
        if not self.field.is_wrong and not self.field.is_dirty:
            self._echo(self.field.text())
        first = given[0]
        tolerances = {figure.tolerance if figure else None for figure in given}
        self.tolerance.show_value((tolerances.pop() or "") if len(tolerances) == 1 else SEVERAL)
        origins = {figure.origin for figure in given if figure}
        said = "" if first is None else first.origin if len(origins) == 1 else SEVERAL
        if said != self.origin.text():
            self.origin.setText(said)
            self.origin.setAccessibleName(f"{self.label.text()}: {said}")
            self.origin.setToolTip(tip(MEANS[first.origin] if first else ""))
        self.origin.setVisible(first is not None)
        self._show_tolerance()

    def _echo(self, text: str) -> None:
        """What is understood of a text, while it is typed."""
        inks = self.scene.inks
        said, ink = "", inks.muted
        try:
            parsed = parse(text, self.spec.quantity)
            said = echo(parsed)
            said = "" if _plain(said) == _plain(text) else said
            ink = inks.mend if parsed.missing else inks.muted
        except FigureError:
            pass
        self.field.show_echo(said, ink)
        self.under.show_text(said)
        self._fit()

    def _fit(self) -> None:
        """The echo stands under the field where it has no room inside."""
        self.under.setVisible(not self.field.has_room)

    def _show_tolerance(self) -> None:
        has_focus = QApplication.focusWidget() in (self.field, self.origin, self.tolerance)
        given = self._figures()[0] is not None
        is_pointed_at = self.underMouse() and self.width() >= 3 * TOLERANCE_PX  # the label keeps its room
        shown = bool(self.tolerance.text()) or (given and (has_focus or is_pointed_at))
        self.tolerance.setVisible(shown)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """The tolerance is offered where a hand or the keyboard is."""
        if event.type() in (QEvent.Type.FocusIn, QEvent.Type.FocusOut):
            self._show_tolerance()
        return False

    def enterEvent(self, event: QEnterEvent) -> None:
        self._show_tolerance()

    def leaveEvent(self, event: QEvent) -> None:
        self._show_tolerance()

    # -- what a hand does ------------------------------------------------------------------------------------
    def _typed(self, text: str) -> None:
        if text.strip() == self._text() or (text == SEVERAL and len(self.keys) > 1):
            self._settle()
            return
        refused = self._set(text)
        if refused:
            self.field.refuse(text)
            self.said.say(refused)
            self.scene.refused[self.keys, self.name] = (text, refused)
        else:
            self._settle()

    def _set(self, text: str) -> str:
        verb = "Type" if text.strip() else "Take away"
        return self.scene.hand.do(
            f"{verb} {self.spec.label.lower()} of {self.scene.called(self.keys)}",
            self.keys,
            lambda project, key: edits.set_figure(project, key, self.name, text),
        )

    def _change_origin(self) -> None:
        figure = self._figures()[0]
        if figure is None:
            return
        after = NEXT[figure.origin]
        self.said.say(
            self.scene.hand.do(
                f"{self.spec.label} of {self.scene.called(self.keys)} is {_from(after)}",
                self.keys,
                lambda project, key: edits.set_figure(
                    project, key, self.name, self._text_of(key), origin=after
                ),
            )
        )

    def _tolerate(self, text: str) -> None:
        if text == SEVERAL:
            self.tolerance.settle(text)
            return
        refused = self.scene.hand.do(
            f"Tolerance of {self.spec.label.lower()} of {self.scene.called(self.keys)}",
            self.keys,
            lambda project, key: edits.set_figure(
                project, key, self.name, self._text_of(key), tolerance=text.strip() or None,
                origin=self._origin_of(key),
            ),
        )  # fmt: skip
        if refused:
            self.tolerance.refuse(text)
        else:
            figure = self._figures()[0]
            self.tolerance.settle((figure.tolerance or "") if figure else "")
        self.said.say(refused)

    def _settle(self) -> None:
        self.scene.refused.pop((self.keys, self.name), None)
        self.said.say("")
        self.field.settle(self._text())
        self._echo(self.field.text())

    def _recall(self) -> None:
        if (waiting := self.scene.refused.get((self.keys, self.name))) is not None:
            self.field.refuse(waiting[0])
            self.said.say(waiting[1])

    # -- inside ----------------------------------------------------------------------------------------------
    def _spec(self) -> FigureSpec:
        return self.scene.items(self.keys)[0].figure_specs()[self.name.partition(".")[0]]

    def _label(self) -> str:
        _, _, number = self.name.partition(".")
        return self.spec.label if number in ("", "0") else f"{self.spec.label} {int(number) + 1}"

    def _help(self) -> str:
        empty = " Empty takes it away." if self.spec.optional or self.spec.many else ""
        return f"{self.spec.help} Typed like {_example(self.spec)}.{empty}"

    def _text(self) -> str:
        texts = {figure.text if figure else "" for figure in self._figures()}
        return texts.pop() if len(texts) == 1 else SEVERAL

    def _figures(self) -> Sequence[Figure | None]:
        return [self._figure_of(key) for key in self.keys]

    def _figure_of(self, key: str) -> Figure | None:
        field, _, number = self.name.partition(".")
        given = getattr(self.scene.project.item(key), field, None)
        if not number:
            return given if isinstance(given, Figure) else None
        return given[int(number)] if given is not None and int(number) < len(given) else None

    def _text_of(self, key: str) -> str:
        figure = self._figure_of(key)
        return figure.text if figure else ""

    def _origin_of(self, key: str) -> Origin | None:
        figure = self._figure_of(key)
        return figure.origin if figure else None


def _plain(text: str) -> str:
    """The text without what makes no difference, to see whether an echo says anything new."""
    return "".join(text.lower().replace("−", "-").replace("ohm", "ω").replace("+", "").split())


def _example(spec: FigureSpec) -> str:
    return QUANTITIES[spec.quantity].example


def _from(origin: Origin) -> str:
    return {"guess": "a guess", "sheet": "from the sheet", "measured": "measured"}[origin]
