"""A block with a count against as many blocks drawn out, in webs drawn at random."""

from __future__ import annotations

from dataclasses import dataclass, field

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from engine.figures import Figure
from engine.outcome import Outcome, evaluate
from engine.stages import Stage, template
from tests.engine.plain_kinds import amplifier, project, source
from tests.scenarios.build import stage as shelf

SORTS = ("amplifier", "pad", "compressor", "cable", "speaker_line")


@dataclass
class Web:
    """Stages inside a group, each fed by one or more of what stands ahead; then a sum outside."""

    count: int
    sorts: list[str] = field(default_factory=list)
    fed_by: list[list[int]] = field(
        default_factory=list
    )  # places of what feeds each; −1 is the stage ahead of all
    numbers: list[float] = field(default_factory=list)

    def member(self, place: int, id: str, count: int) -> Stage:
        """One stage of the group."""
        number, column = self.numbers[place], place + 2
        sort = self.sorts[place]
        if sort == "amplifier":
            return amplifier(
                id, column, round(number / 2.0, 1), noise="3 uV", z_in="2 k", z_out="300 ohm", count=count
            )
        if sort == "compressor":
            made = shelf(
                "dynamics",
                id,
                noise="-70 dBu unweighted",
                threshold_dbu=-40.0,
                ratio=3.0,
                z_in_ohm="5 k",
                count=count,
            )
            return made.with_fields(column=column)
        if sort == "pad":
            loss = Figure(text=f"{abs(number) + 1.0:.2f} dB")
            return template(
                "pad", id, column=column, count=count, loss_db=loss, shape="H" if number > 0 else "U"
            )
        if sort == "cable":
            length = Figure(text=f"{10.0 * abs(number) + 1.0:.1f} m")
            return template("line_cable", id, column=column, count=count, length_m=length)
        return template("speaker_line", id, column=column, count=count)

    def ends(self) -> list[int]:
        """Places that feed nothing inside the group."""
        return [place for place in range(len(self.sorts)) if not any(place in fed for fed in self.fed_by)]

    def as_one(self) -> Outcome:
        stages = [
            source("s", emf="100 mV"),
            amplifier("a", 1, 6.0, z_in="1 k", z_out="600 ohm", noise="5 uV"),
        ]
        stages += [self.member(place, f"g{place}", self.count) for place in range(len(self.sorts))]
        stages.append(amplifier("d", 20, 0.0, z_in="7 k"))
        ends = [("s", "a"), *((f"g{place}", "d") for place in self.ends())]
        for place, fed in enumerate(self.fed_by):
            ends += [("a" if other < 0 else f"g{other}", f"g{place}") for other in fed]
        return evaluate(project(stages, *ends))

    def drawn_out(self) -> Outcome:
        stages = [
            source("s", emf="100 mV"),
            amplifier("a", 1, 6.0, z_in="1 k", z_out="600 ohm", noise="5 uV"),
        ]
        ends = [("s", "a")]
        for k in range(self.count):
            stages += [self.member(place, f"g{place}.{k}", 1) for place in range(len(self.sorts))]
            for place, fed in enumerate(self.fed_by):
                ends += [("a" if other < 0 else f"g{other}_{k}", f"g{place}_{k}") for other in fed]
            ends += [(f"g{place}_{k}", "d") for place in self.ends()]
        stages = [stage.model_copy(update={"id": stage.id.replace(".", "_")}) for stage in stages]
        stages.append(amplifier("d", 20, 0.0, z_in="7 k"))
        return evaluate(project(stages, *ends))


@st.composite
def webs(draw: st.DrawFn) -> Web:
    web = Web(draw(st.integers(2, 4)))
    for place in range(draw(st.integers(1, 4))):
        web.sorts.append(draw(st.sampled_from(SORTS)))
        ahead = list(range(-1, place))
        most = 2 if web.sorts[place] == "amplifier" else 1
        web.fed_by.append(draw(st.lists(st.sampled_from(ahead), min_size=1, max_size=most, unique=True)))
        web.numbers.append(draw(st.sampled_from([-9.0, -4.0, 0.5, 3.0, 8.0])))
    return web


@settings(max_examples=120, deadline=None)
@given(webs())
def test_a_count_equals_as_many_drawn_out(web):
    """Levels, peaks, noise and clip points ahead of the group, in its members and in the sum behind it, to 1e-7 dB.

    A cable's phase is not carried beyond its own net, in either drawing.
    """
    one, many = web.as_one(), web.drawn_out()
    places = [("a", "out", "a"), ("d", "in", "d"), ("d", "out", "d")]
    places += [
        (f"g{place}", side, f"g{place}_0") for place in range(len(web.sorts)) for side in ("in", "out")
    ]
    for stage, side, drawn in places:
        # Drawn out, a member's input is the very node of the output that feeds it, siblings and all; in one block it is its own.
        ceiling = () if side == "in" and stage != "d" else ("ceiling",)
        for number in ("level", "peak", "noise", "noise_a", "clip", *ceiling):
            found, expected = getattr(one.node(stage, side), number), getattr(many.node(drawn, side), number)
            assert found == pytest.approx(expected, abs=1e-7), (stage, side, number)
