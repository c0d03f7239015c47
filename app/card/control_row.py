"""One control: its name and exact value, a slider on its real steps (a switch: its positions), panel marking, state."""

from __future__ import annotations

import math

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLabel

from app import edits
from app.inks import font
from engine.project import Project
from engine.stages import Setting, Stage, panel
from engine.stages.declare import ControlRange, ControlSpec, State

from . import typed
from .choice import Choice
from .entry import Entry
from .pieces import Elided, Said, Word, column, row, tip
from .scene import SEVERAL, Keys, Part, Scene
from .slider import StepSlider

VALUE_PX = 92
NEXT: dict[State, State] = {"adjustable": "locked", "locked": "operator", "operator": "adjustable"}
SAYS: dict[State, str] = {"adjustable": "adjustable", "locked": "locked", "operator": "operator’s"}
MEANS: dict[State, str] = {
    "adjustable": "A hand and a proposal may move it. Press to lock it.",
    "locked": "It stays where it is. Press to leave it to the operator.",
    "operator": "Left to the operator; a proposal does not move it. Press to make it adjustable.",
}


class ControlRow(Part):
    """Moves a control of one stage, or the same control of several together."""

    def __init__(self, scene: Scene, keys: Keys, name: str) -> None:
        super().__init__()
        self.scene, self.keys, self.name = scene, keys, name
        spec, ranged = self._declared()
        self._seen: tuple[ControlRange, list[Setting]] | None = None
        self.label = Elided(spec.label)
        self.label.set_help(spec.help)
        self.value = Entry(f"{spec.label}, value", bare=True, strong=True)
        self.value.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.value.fix_width(VALUE_PX)
        self.value.setProperty("value", True)
        self.value.steps = True
        self.slider = StepSlider(spec.label, scene.inks, scene.may_wheel)
        self.switch = Choice(spec.label, [text for text, _ in ranged.choices]) if ranged.choices else None
        self.panel = Entry(f"{spec.label}, marking on the panel", bare=True, size_px=11)
        self.panel.setProperty("small", True)
        self.panel.setToolTip(
            tip("How it reads on its panel. Type your own marking; empty brings ours back.")
        )
        self.state = Word()
        self.said = Said()
        self._arrange()
        self._connect()
        self.show_project(scene.project)
        self._recall()

    def _arrange(self) -> None:
        body = column(self)
        foot = QLabel("panel")
        foot.setFont(font(11))
        foot.setProperty("quiet", True)
        if self.switch is None:
            body.addLayout(row(self.label, self.value))
            body.addWidget(self.slider)
            body.addLayout(row(foot, self.panel, self.state, stretch=1, spacing=4))
        else:
            for unused in (self.value, self.slider):  # a child all the same, or it would outlive the row
                unused.setParent(self)
                unused.hide()
            body.addLayout(row(self.label, self.state))
            body.addWidget(self.switch)
            body.addLayout(row(foot, self.panel, stretch=1, spacing=4))
        body.addWidget(self.said)
        self.setFocusProxy(self.slider if self.switch is None else self.switch)

    def _connect(self) -> None:
        self.slider.asked.connect(self._ask)
        self.slider.let_go.connect(self.scene.hand.let_go)
        self.slider.typing.connect(self._begin_typing)
        self.value.taken.connect(self._typed)
        self.value.stepped.connect(self._step)
        self.value.entered.connect(lambda: self.slider.setFocus(Qt.FocusReason.OtherFocusReason))
        self.panel.taken.connect(self._mark)
        self.state.clicked.connect(self._change_state)
        if self.switch is not None:
            self.switch.chosen.connect(self._choose)

    # -- what it shows ---------------------------------------------------------------------------------------
    def show_project(self, project: Project) -> None:
        spec, ranged = self._declared()
        settings = self._settings()
        if self._seen == (ranged, settings):
            return
        self._seen = (ranged, settings)
        first = settings[0]
        agree = all(each.value == first.value for each in settings)
        text = panel.position(spec, ranged, first) if agree else SEVERAL
        self.value.show_value(text)
        self.slider.show_place(spec, ranged, first.value)
        if self.switch is not None:
            self.switch.show_place(_place(ranged, first) if agree else -1)
        self._show_panel(spec, ranged, settings, agree)
        self._show_state(spec, settings)

    def _show_panel(
        self, spec: ControlSpec, ranged: ControlRange, settings: list[Setting], agree: bool
    ) -> None:
        own = {each.panel for each in settings}
        ours = (
            panel.marking(spec, ranged, settings[0].model_copy(update={"panel": None})) if agree else SEVERAL
        )
        if self.panel.placeholderText() != ours:
            self.panel.setPlaceholderText(ours)
            self.panel.setAccessibleDescription(ours)
        self.panel.show_value((own.pop() or "") if len(own) == 1 else "")

    def _show_state(self, spec: ControlSpec, settings: list[Setting]) -> None:
        states = {each.state for each in settings}
        state = settings[0].state
        said = SAYS[state] if len(states) == 1 else SEVERAL
        if said != self.state.text():
            self.state.setText(said)
            self.state.setAccessibleName(f"{spec.label} is {said}")
            self.state.setToolTip(tip(MEANS[state] if len(states) == 1 else "Press to lock them all."))
        free = "locked" not in states
        if free != self.slider.isEnabled():
            self.slider.setEnabled(free)
            self.value.setReadOnly(not free)
            if self.switch is not None:
                self.switch.setEnabled(free)

    # -- what a hand does ------------------------------------------------------------------------------------
    def _ask(self, place: int) -> None:
        value = float(self.slider.positions[place])
        self._move(None if value == -math.inf else value, gesture=("card", self.keys, self.name))

    def _step(self, hand: int, fine: bool) -> None:
        self._ask(self.slider.stepped(hand, fine=fine))
        self.scene.hand.let_go()

    def _choose(self, place: int) -> None:
        _, ranged = self._declared()
        self.said.say(self._move(ranged.choices[place][1]))
        self._seen = None  # a refused choice leaves the pressed button where it was
        self.show_project(self.scene.project)

    def _begin_typing(self, text: str) -> None:
        self.value.setFocus(Qt.FocusReason.OtherFocusReason)
        self.value.setText(text)
        self.value.setCursorPosition(len(text))

    def _typed(self, text: str) -> None:
        spec, ranged = self._declared()
        before = self._text()
        if text == before:
            self._settle(before)
            return
        try:
            value = typed.read(text, spec, ranged)
        except ValueError as reason:
            self._refuse(text, str(reason))
            return
        refused = self._move(value)
        if refused:
            self._refuse(text, refused)
        else:
            self._settle(self._text())

    def _move(self, value: float | None, gesture: object | None = None) -> str:
        spec, _ = self._declared()
        return self.scene.hand.do(
            f"Move {spec.label.lower()} of {self.scene.called(self.keys)}",
            self.keys,
            lambda project, key: edits.set_control(project, key, self.name, value),
            gesture,
        )

    def _mark(self, text: str) -> None:
        spec, _ = self._declared()
        self.said.say(
            self.scene.hand.do(
                f"Name the marking of {spec.label.lower()} of {self.scene.called(self.keys)}",
                self.keys,
                lambda project, key: edits.set_panel(project, key, self.name, text),
            )
        )
        self.panel.settle(self._settings()[0].panel or "")

    def _change_state(self) -> None:
        spec, _ = self._declared()
        states = {each.state for each in self._settings()}
        after: State = NEXT[self._settings()[0].state] if len(states) == 1 else "locked"
        verb = {"locked": "Lock", "adjustable": "Free", "operator": "Leave to the operator"}[after]
        self.scene.hand.do(
            f"{verb}: {spec.label.lower()} of {self.scene.called(self.keys)}",
            self.keys,
            lambda project, key: edits.set_state(project, key, self.name, after),
        )

    # -- inside ----------------------------------------------------------------------------------------------
    def _refuse(self, text: str, reason: str) -> None:
        from .hand import sentence

        self.value.refuse(text)
        self.said.say(sentence(reason))
        self.scene.refused[self.keys, self.name] = (text, sentence(reason))

    def _settle(self, text: str) -> None:
        self.value.settle(text)
        self.said.say("")
        self.scene.refused.pop((self.keys, self.name), None)

    def _recall(self) -> None:
        if (waiting := self.scene.refused.get((self.keys, self.name))) is not None:
            self.value.refuse(waiting[0])
            self.said.say(waiting[1])

    def _text(self) -> str:
        spec, ranged = self._declared()
        settings = self._settings()
        same = all(each.value == settings[0].value for each in settings)
        return panel.position(spec, ranged, settings[0]) if same else SEVERAL

    def _declared(self) -> tuple[ControlSpec, ControlRange]:
        stage = self._stages()[0]
        return stage.control_specs()[self.name], stage.control_range(self.name)

    def _settings(self) -> list[Setting]:
        return [getattr(stage, self.name) for stage in self._stages()]

    def _stages(self) -> list[Stage]:
        return [item for item in self.scene.items(self.keys) if isinstance(item, Stage)]


def _place(ranged: ControlRange, setting: Setting) -> int:
    value = 0.0 if setting.value is None else setting.value
    distances = [abs(each - value) for _, each in ranged.choices]
    return distances.index(min(distances))
