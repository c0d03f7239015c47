"""Needed and potential acoustic gain of a reinforcement system, omnidirectional and in the free field.

NAG = 20 log(D0 / EAD);  PAG = 20 log(D1 D0 / (D2 Ds)) - 10 log NOM - FSM  (the classic acoustic gain equations of
sound-reinforcement handbooks). D0 talker to listener, D1 microphone to loudspeaker, D2 loudspeaker to listener,
Ds talker to microphone, EAD the distance the listener should feel the talker at, NOM open microphones, FSM the
feedback margin.
"""

from __future__ import annotations

from dataclasses import dataclass

from numpy import log10


@dataclass(frozen=True)
class AcousticGain:
    """`needed_db`, `potential_db` (open microphones and feedback margin taken off), and what is left."""

    needed_db: float
    potential_db: float

    @property
    def margin_db(self) -> float:
        return self.potential_db - self.needed_db


def acoustic_gain(
    *,
    talker_listener_m: float,
    microphone_loudspeaker_m: float,
    loudspeaker_listener_m: float,
    talker_microphone_m: float,
    equivalent_m: float,
    open_microphones: float = 1.0,
    feedback_margin_db: float = 6.0,
) -> AcousticGain:
    """Needed and potential acoustic gain [dB]. Raises ValueError for a distance or count that is not above nothing."""
    given = {
        "talker to listener": talker_listener_m,
        "microphone to loudspeaker": microphone_loudspeaker_m,
        "loudspeaker to listener": loudspeaker_listener_m,
        "talker to microphone": talker_microphone_m,
        "equivalent distance": equivalent_m,
        "open microphones": open_microphones,
    }
    for name, value in given.items():
        if not value > 0.0:
            raise ValueError(f"{name} is {value:g}: it must be above nothing")
    needed = 20.0 * log10(talker_listener_m / equivalent_m)
    raw = 20.0 * log10(
        microphone_loudspeaker_m * talker_listener_m / (loudspeaker_listener_m * talker_microphone_m)
    )
    return AcousticGain(float(needed), float(raw - 10.0 * log10(open_microphones) - feedback_margin_db))
