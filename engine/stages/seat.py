"""A listening position."""

from __future__ import annotations

from collections.abc import Iterator
from typing import ClassVar, Literal

import numpy as np

from engine.bands import Axis
from engine.figures import Figure
from engine.sections.air import absorption_db_per_m
from engine.sections.base import Active, ActiveStage, Domain, Input, Number, StageSections
from engine.sections.room import absorption_m2, direct_gain, reverberant_gain

from .base import Port, Stage
from .declare import figure, option
from .declared import Values


class Seat(Stage):
    """Where people listen: what reaches it from every loudspeaker linked to it, and the room's own noise there.

    The distance of each loudspeaker is a figure of its link.
    """

    title: ClassVar[str] = "Seat"
    family: ClassVar[str] = "Places"
    order: ClassVar[int] = 710
    domain: ClassVar[Domain] = Domain.ACOUSTIC
    is_seat: ClassVar[bool] = True
    help: ClassVar[str] = "A listening position. Each link from a loudspeaker holds its distance."

    kind: Literal["seat"] = "seat"
    target_spl_db: Figure | None = figure(
        "Target level", "spl", "85 dB SPL", help="Programme level wanted here, unweighted rms."
    )
    ambient: Figure | None = figure(
        "Room noise",
        "ambient",
        "30 dB(A)",
        help="dB(A), an NC or an NR curve. 20 dB(A) in a fine hall, 30 to 35 in a meeting room, 45 in a full theatre.",
    )
    volume_m3: Figure | None = figure(
        "Room volume", "volume", "1000 m³", help="With the reverberation time it gives the reverberant field."
    )
    rt60_s: Figure | None = figure("Reverberation time", "time", "1 s", help="RT60 of the occupied room.")
    room_constant_m2: Figure | None = figure(
        "Room constant",
        "absorption",
        help="Where known it stands in for volume and reverberation time [m²].",
    )
    role: Literal["reference", "nearest", "other"] = option(
        "Role",
        "reference",
        choices=("reference", "nearest", "other"),
        help="The reference seat has the target; the nearest seat hears the hiss first.",
    )
    field_kind: Literal["free field", "room"] = option(
        "Sound field",
        "free field",
        choices=("free field", "room"),
        help="Free field: direct sound only. Room: the reverberant field too.",
    )
    adds: Literal["power", "coherent"] = option(
        "Loudspeakers add", "power", choices=("power", "coherent"),
        help="Usually as power. Coherent: as pressure, for loudspeakers close together and equally far.",
    )  # fmt: skip

    talker_m: Figure | None = figure(
        "Talker to this seat", "length", help="For acoustic gain: how far the talker is from this listener."
    )
    equivalent_m: Figure | None = figure(
        "Should sound as near as",
        "length",
        help="Equivalent acoustic distance: how near the talker should seem.",
    )
    microphone_loudspeaker_m: Figure | None = figure(
        "Microphone to loudspeaker",
        "length",
        help="From the open microphone to the nearest loudspeaker it may hear.",
    )
    talker_microphone_m: Figure | None = figure(
        "Talker to microphone", "length", help="0.3 m at a lectern, 0.05 m hand-held, 0.6 m on a table."
    )
    open_microphones: Figure = figure("Open microphones", "count", "1", help="How many are open at once.")
    feedback_margin_db: Figure = figure(
        "Feedback margin", "level_db", "6 dB", help="Kept free against ringing; 6 dB is usual."
    )

    def inputs(self) -> tuple[Port, ...]:
        return (Port("in", Domain.ACOUSTIC, many=True),)

    def in_use(self, name: str) -> bool:
        if name in ("open_microphones", "feedback_margin_db"):
            return self.talker_m is not None
        return name not in ("volume_m3", "rt60_s", "room_constant_m2") or self.field_kind == "room"

    def arrival(self, values: Values, link: Values, reference_m: Number | None, axis: Axis) -> Number:
        """Direct sound by inverse square, off-axis loss and air absorption (ISO 9613-1); in a room the reverberant field too.

        Sensitivity holds at `reference_m`, so the air's loss counts from there on.
        """
        if reference_m is None or "distance_m" not in link:
            return 1.0
        distance = np.asarray(link["distance_m"])
        air = absorption_db_per_m(axis.f_hz, link["temperature_k"], link["humidity_percent"]) * link.get(
            "air_counts", 1.0
        )
        through_air = 10.0 ** (-air * np.maximum(distance - reference_m, 0.0) / 10.0)
        direct = direct_gain(distance, reference_m, link.get("off_axis_db", 0.0)) * through_air
        constant = self._room_constant(values)
        if constant is None:
            return direct
        return direct + reverberant_gain(constant, link["directivity_q"], reference_m)

    def _room_constant(self, values: Values) -> Number | None:
        if "room_constant_m2" in values:
            return values["room_constant_m2"]
        if "volume_m3" in values and "rt60_s" in values:
            return absorption_m2(values["volume_m3"], values["rt60_s"])
        return None

    def sections(self, values: Values, axis: Axis) -> StageSections:
        return ActiveStage((Active("ears"),), {"in": Input("ears")}, join=self.adds)

    def check(self, values: Values, axis: Axis) -> Iterator[str]:
        if self.field_kind == "room" and self._room_constant(values) is None:
            yield f"{self.name} stands in a room: give its volume and reverberation time, or its room constant"

    def summary(self) -> str:
        return self.target_spl_db.text if self.target_spl_db else self.role
