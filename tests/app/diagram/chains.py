"""Chains of real stages for tests of the diagram."""

from __future__ import annotations

from itertools import pairwise

from engine.project import Header, Link, Project
from engine.stages import Stage, template

WHOLE = (
    "sound_source", "microphone", "preamplifier", "mixer_channel", "mix_bus", "processor", "power_amplifier",
    "speaker_line", "loudspeaker", "seat",
)  # fmt: skip


def chain(kinds: tuple[str, ...] = WHOLE) -> Project:
    """One stage of each kind in a row, linked by their first ports."""
    stages: list[Stage] = [
        template(kind, f"{kind}-{column}", column=column) for column, kind in enumerate(kinds)
    ]
    links = []
    for one, two in pairwise(stages):
        far = {"distance_m": {"text": "12 m"}} if two.kind == "seat" else {}
        links.append(
            Link(
                id=f"{one.id}>{two.id}",
                source=one.id,
                output=one.outputs()[0].name,
                target=two.id,
                input=two.inputs()[0].name,
                **far,
            )
        )
    return Project(header=Header(name="Test hall"), stages=tuple(stages), links=tuple(links))


def long_chain(amplifiers: int = 27) -> Project:
    """Sixty nodes: a source, a microphone, many channels, and what makes sound of it."""
    return chain(
        (
            "sound_source",
            "microphone",
            "preamplifier",
            *(["mixer_channel"] * amplifiers),
            "power_amplifier",
            "loudspeaker",
            "seat",
        )
    )
