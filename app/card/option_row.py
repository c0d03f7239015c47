"""How a stage, a link or the project is built: one choice among names, or a number."""

from __future__ import annotations

from app import edits
from engine.project import Project
from engine.stages.declare import OptionSpec

from .choice import Choice
from .entry import Entry
from .hand import sentence
from .pieces import Elided, Said, column, row, tip
from .scene import SEVERAL, Keys, Part, Scene

NUMBER_PX = 64


class OptionRow(Part):
    """Sets an option of one item, or of several together."""

    def __init__(self, scene: Scene, keys: Keys, name: str) -> None:
        super().__init__()
        self.scene, self.keys, self.name = scene, keys, name
        self.spec = self._spec()
        self.label = Elided(self.spec.label, 11 if self.spec.choices else 12, quiet=bool(self.spec.choices))
        self.label.set_help(self.spec.help)
        self.said = Said()
        self.choice: Choice | None = None
        self.number: Entry | None = None
        body = column(self)
        if self.spec.choices:
            self.choice = Choice(self.spec.label, self.spec.choices)
            self.choice.setToolTip(tip(self.spec.help))
            self.choice.chosen.connect(lambda place: self._set(self.spec.choices[place]))
            self.setFocusProxy(self.choice)
            body.setSpacing(2)
            body.addWidget(self.label)
            body.addWidget(self.choice)
        else:
            self.number = Entry(self.spec.label)
            self.number.fix_width(NUMBER_PX)
            self.number.setToolTip(tip(f"{self.spec.help} From {self.spec.low} to {self.spec.high}."))
            self.number.steps = True
            self.number.taken.connect(self._typed)
            self.number.stepped.connect(lambda hand, _fine: self._step(1 if hand > 0 else -1))
            self.setFocusProxy(self.number)
            body.addLayout(row(self.label, self.number))
        body.addWidget(self.said)
        self.show_project(scene.project)

    def show_project(self, project: Project) -> None:
        given = self._given()
        same = all(each == given[0] for each in given)
        if self.choice is not None:
            self.choice.show_place(self.spec.choices.index(str(given[0])) if same else -1)
        elif self.number is not None:
            self.number.show_value(str(given[0]) if same else SEVERAL)

    def _typed(self, text: str) -> None:
        assert self.number is not None
        low, high = self.spec.low, self.spec.high
        if text in (str(self._given()[0]), SEVERAL):
            self.said.say("")
            self.number.settle(text)
        elif not text.strip().isdecimal() or not low <= int(text) <= high:
            self.number.refuse(text)
            self.said.say(
                sentence(f"{text.strip() or 'nothing'} will not do: type a whole number from {low} to {high}")
            )
        else:
            self._set(int(text))

    def _step(self, way: int) -> None:
        value = int(str(self._given()[0])) + way
        if self.spec.low <= value <= self.spec.high:
            self._set(value)

    def _set(self, value: object) -> None:
        refused = self.scene.hand.do(
            f"Set {self.spec.label.lower()} of {self.scene.called(self.keys)}",
            self.keys,
            lambda project, key: edits.set_option(project, key, self.name, value),
        )
        self.said.say(refused)
        if self.number is not None:
            (self.number.refuse if refused else self.number.settle)(str(value))
        self.show_project(self.scene.project)

    def _given(self) -> list[object]:
        return [getattr(item, self.name) for item in self.scene.items(self.keys)]

    def _spec(self) -> OptionSpec:
        return self.scene.items(self.keys)[0].option_specs()[self.name]
