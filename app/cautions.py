"""What may hurt someone, and what the numbers mean: the same words on screen and on paper. Our own words."""

from __future__ import annotations

from typing import NamedTuple

from app.words import MINUS


class Caution(NamedTuple):
    """One caution: what it is about, and what to do."""

    about: str
    text: str


CAUTIONS: tuple[Caution, ...] = (
    Caution(
        "Hearing",
        "Before any loud test: tell everyone, clear the room, have ear protection at hand. Start at least 20\u202fdB below "
        "the level you expect and come up slowly. Amplifiers go on last and off first; mute the source before you patch. "
        "The levels printed here are estimates for a plan. They do not measure anyone's exposure, and they do not make a "
        "show lawful: the limits of your country and of the venue's licence do that.",
    ),
    Caution(
        "Loudspeakers",
        "A steady tone heats a driver far more than programme does. Keep tones short, and check amplifier gain or limiter "
        "volts with the loudspeakers disconnected or on a dummy load. A limiter setting on this paper holds for the "
        "amplifier gain it was worked out for and for no other. It does not replace the maker's instructions, which come "
        "first, nor the high-pass filter that guards a driver's excursion.",
    ),
    Caution(
        "Amplifier outputs and constant-voltage lines",
        "An amplifier output can carry well over 100\u202fV, and so can a 70 or 100\u202fV line: enough to injure. Switch off "
        "before you touch a terminal. Bridged outputs, and those of many modern amplifiers, have no earthed side: never "
        "clip an earthed meter or oscilloscope to them. Constant-voltage lines may need a wiring class or conduit of "
        "their own where you are.",
    ),
    Caution(
        "Mains",
        "Mains and fixed line wiring are work for qualified people under the local code. Never lift a protective earth to "
        "cure hum: find the loop, or put a transformer in the signal line.",
    ),
    Caution(
        "Phantom power",
        "Before 48\u202fV is switched on, know what is at the far end: outputs, ribbon microphones and home-made adapters may "
        "not survive it. Mute first.",
    ),
    Caution(
        "Emergency paths",
        "Alarms, voice evacuation and the muting they need are not trimmed from this plan. Where they share or mute this "
        "chain the responsible authority's rules govern, and the muting is proved by the test that authority asks for.",
    ),
    Caution(
        "What comes first",
        "Local law, local codes, the makers' instructions and the judgement of licensed people override every number "
        "printed here. Rigging, structure, electrical design, fire safety and radio licences are outside this plan.",
    ),
)

#: What stands at the foot of every sheet.
CAUTION_LINE = (
    "Warn, clear, protect ears, start 20\u202fdB low. No long tones into drivers. Amplifier outputs and 70/100\u202fV lines can injure: "
    "switch off first. Mains is for qualified people. Emergency paths are not trimmed from here. Makers' instructions, "
    "local law and codes come first."
)

#: The conventions of every number, at the foot of every sheet.
CONVENTION_LINE = (
    "0\u202fdBu\u202f=\u202f0.7746\u202fV rms · 0\u202fdBV\u202f=\u202f1\u202fV · 0\u202fdBFS: rms of a full-scale sine · "
    "94\u202fdB SPL\u202f=\u202f1\u202fPa · level: rms of the programme · "
    f"clip: rms of the largest clean sine · peak: level + crest {MINUS} 3.01\u202fdB · headroom: clip {MINUS} level · peak margin: "
    f"clip {MINUS} peak · noise: 20\u202fHz to 20\u202fkHz, flat or (A)"
)
