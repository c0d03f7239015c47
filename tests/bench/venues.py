"""Systems of any size for the benchmarks, from the shelf's own stages with their typical figures."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

from engine.figures import Figure
from engine.project import Link, Project
from engine.stages import Stage, template

#: One path from source to seat: 20 stages, 60 sections.
PATH = (
    "line_source", "line_cable", "mixer_channel", "mix_bus", "mix_bus", "equaliser", "dynamics", "equaliser", "dynamics",
    "mixer_channel", "mix_bus", "processor", "dynamics", "pad", "processor", "processor", "power_amplifier", "speaker_line",
    "loudspeaker", "seat",
)  # fmt: skip
#: What every zone has behind the mix.
ZONE = ("processor", "line_cable", "power_amplifier", "speaker_line", "loudspeaker", "seat")
CHANNEL = ("line_source", "mixer_channel")


def _linked(start: str, end: str) -> Link:
    return Link(id=f"{start} > {end}", source=start, target=end, distance_m=Figure(text="8 m"))


def _run(kinds: tuple[str, ...], prefix: str, column: int) -> list[Stage]:
    return [
        template(kind, f"{prefix}{place}", f"{prefix}{place}", column=column + place)
        for place, kind in enumerate(kinds)
    ]


def _chain(stages: list[Stage]) -> Iterator[Link]:
    for before, after in pairwise(stages):
        yield _linked(before.id, after.id)


def path() -> Project:
    """One path of 20 stages."""
    stages = _run(PATH, "p", 0)
    return Project(stages=tuple(stages), links=tuple(_chain(stages)))


def venue(stages: int, zones: int) -> Project:
    """Channels into a mix, and zones behind it: about `stages` in all."""
    channels = (stages - 1 - zones * len(ZONE)) // len(CHANNEL)
    made: list[Stage] = [template("mix_bus", "mix", "mix", column=2)]
    links: list[Link] = []
    for n in range(channels):
        channel = _run(CHANNEL, f"c{n}.", 0)
        made += channel
        links += [*_chain(channel), _linked(channel[-1].id, "mix")]
    for n in range(zones):
        zone = _run(ZONE, f"z{n}.", 3)
        made += zone
        links += [_linked("mix", zone[0].id), *_chain(zone)]
    return Project(stages=tuple(made), links=tuple(links))
