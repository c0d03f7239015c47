"""Larkfield Meeting House: a hall for four hundred with a choir and a band, invented."""

from __future__ import annotations

from engine.project import Project

from .venue import Venue

# fmt: off: one line per thing reads as a table
MIXER = "Mixing desk"
AMPLIFIERS = "Vestry rack"

#: key, name, level at the microphone or close to it, crest factor, how many, microphone, preamplifier gain, fader.
VOICES = (
    ("lectern", "Lectern", "70 dB SPL", "16 dB", 1, "condenser", 44, -9),
    ("celebrant", "Celebrant", "72 dB SPL", "16 dB", 1, "condenser", 42, -6),
    ("choir", "Choir", "76 dB SPL", "16 dB", 4, "choir", 36, -12),
    ("singers", "Singers", "96 dB SPL", "16 dB", 3, "dynamic", 42, -18),
    ("piano", "Piano", "88 dB SPL", "18 dB", 2, "condenser", 24, -14),
    ("drums", "Drums", "104 dB SPL", "20 dB", 3, "dynamic", 28, -20),
)
MICROPHONES = {
    "condenser": {
        "sensitivity_v_per_pa": "10 mV/Pa",
        "self_noise_spl": "17 dB(A)",
        "max_spl": "130 dB SPL",
        "z_ohm": "150 ohm",
        "form": "impedance-balanced",
    },
    "choir": {
        "sensitivity_v_per_pa": "15 mV/Pa",
        "self_noise_spl": "16 dB(A)",
        "max_spl": "134 dB SPL",
        "z_ohm": "100 ohm",
        "form": "impedance-balanced",
    },
    "dynamic": {"sensitivity_v_per_pa": "2 mV/Pa", "z_ohm": "200 ohm", "form": "transformer"},
}


def build() -> Project:
    """Speech, choir and band; mains, subwoofer, fills and gallery; powered monitors for the band."""
    venue = Venue(
        "Larkfield Meeting House",
        author="P. Adeyemi",
        note="An invented house of worship. Every figure is a guess from a template: type your own over them.",
    )
    _inputs(venue)
    _mixes(venue)
    _monitors(venue)
    _loudspeakers(venue)
    return venue.project


def _inputs(venue: Venue) -> None:
    add, chain = venue.add, venue.chain
    for row, (key, name, level, crest, count, microphone, gain, fader) in enumerate(VOICES):
        spectrum = "speech" if key in ("lectern", "celebrant", "choir", "singers") else "pink"
        add(
            "sound_source",
            key,
            name,
            0,
            row,
            count=count,
            level_spl=level,
            crest_db=crest,
            spectrum=spectrum,
            area="platform",
        )
        add("microphone", f"{key}_mic", f"{name} microphone", 1, row, count=count, **MICROPHONES[microphone])
        add(
            "preamplifier",
            f"{key}_pre",
            f"{name} preamp",
            2,
            row,
            count=count,
            rack=f"Stage box, inputs {1 + 4 * row} up",
            gain_db=gain,
            pad=(0, "locked"),
        )
        add(
            "mixer_channel",
            f"{key}_ch",
            f"{name} channel",
            3,
            row,
            count=count,
            rack=MIXER,
            fader_db=(fader, "operator"),
            trim_db=-6 if key == "drums" else 0,
            low_cut=(0 if key in ("piano", "drums") else 1, "locked"),
        )
        chain(key, f"{key}_mic", f"{key}_pre", f"{key}_ch")
    lines = (
        (
            "bass",
            "Bass guitar",
            {"nominal_v": "-12 dBu", "max_output_v": "+12 dBu", "crest_db": "16 dB"},
            4,
            -10,
        ),
        (
            "player",
            "Player",
            {"nominal_v": "-10 dBV", "max_output_v": "2 V", "crest_db": "14 dB", "form": "unbalanced"},
            2,
            -10,
        ),
    )
    for row, (key, name, figures, trim, fader) in enumerate(lines, start=len(VOICES)):
        given = {"form": "transformer", "z_out_ohm": "150 ohm", "lower_by_db": [], **figures}
        add("line_source", key, name, 0, row, **given)
        add(
            "mixer_channel",
            f"{key}_ch",
            f"{name} channel",
            3,
            row,
            rack=MIXER,
            trim_db=trim,
            fader_db=(fader, "operator"),
        )
        venue.link(key, f"{key}_ch", wiring="one leg" if key == "player" else "balanced")


def _mixes(venue: Venue) -> None:
    venue.add(
        "mix_bus", "main", "Main mix", 4, 0, rack=MIXER, fader_db=(-2.5, "operator"), mute=(0, "operator")
    )
    venue.add(
        "mix_bus", "band", "Monitor mix", 4, 7, rack=MIXER, fader_db=(-12, "operator"), mute=(0, "operator")
    )
    for key in ("lectern", "celebrant", "choir", "singers", "piano", "drums", "bass", "player"):
        venue.link(f"{key}_ch", "main")
    for key in ("singers", "piano", "bass"):
        venue.link(f"{key}_ch", "band", "before_fader")


def _monitors(venue: Venue) -> None:
    venue.add(
        "equaliser",
        "band_eq",
        "Monitor equaliser",
        5,
        7,
        rack=f"{AMPLIFIERS}, unit 2",
        bypass=(0, "locked"),
        level_db=(-4, "locked"),
    )
    venue.add(
        "powered_loudspeaker", "wedge", "Monitor wedge", 8, 7, area="platform", level_db=(-7.5, "locked")
    )
    venue.add(
        "seat", "leader", "Band leader", 9, 7, role="other", target_spl_db="88 dB SPL", ambient="40 dB(A)"
    )
    venue.chain("band", "band_eq", "wedge")
    venue.link("wedge", "leader", m=1.6)


def _loudspeakers(venue: Venue) -> None:
    add, link, chain = venue.add, venue.link, venue.chain
    small, large = ["250 W @ 8 ohm", "400 W @ 4 ohm"], ["700 W @ 8 ohm", "1100 W @ 4 ohm"]
    zones = (
        # key, name, trim, crossover, amplifier ratings, attenuator, sensitivity, Q, boxes, cable
        ("mains", "Mains", -6, {"high_pass_1_hz": "90 Hz"}, large, -6, "99 dB 1 W/1 m", "14", 2, "35 m"),
        (
            "sub",
            "Subwoofer",
            4,
            {"high_pass_2_hz": "35 Hz", "low_pass_2_hz": "90 Hz"},
            large,
            -8,
            "98 dB 1 W/1 m",
            "2",
            1,
            "30 m",
        ),
        (
            "fills",
            "Front fills",
            -9,
            {"high_pass_3_hz": "140 Hz"},
            small,
            -14,
            "92 dB 1 W/1 m",
            "6",
            2,
            "25 m",
        ),
        ("gallery", "Gallery", -7, {"high_pass_4_hz": "110 Hz"}, small, -10, "94 dB 1 W/1 m", "8", 2, "40 m"),
    )
    settings: dict[str, object] = {}
    for place, (_, _, trim, crossover, *_) in enumerate(zones, start=1):
        settings |= {
            f"trim_{place}_db": trim,
            f"limiter_{place}": (1, "locked"),
            **crossover,
            f"limit_rms_{place}_dbfs": (-9, "locked"),
            f"limit_peak_{place}_dbfs": (-3, "locked"),
        }
    add(
        "processor",
        "processor",
        "House processor",
        5,
        0,
        rack=f"{AMPLIFIERS}, unit 4",
        outputs_fitted=4,
        **settings,
    )
    chain("main", "processor")
    for place, (key, name, _, _, ratings, attenuator, sensitivity, q, boxes, length) in enumerate(zones):
        add(
            "power_amplifier",
            f"{key}_amp",
            f"{name} amplifier",
            6,
            place,
            rack=f"{AMPLIFIERS}, unit {6 + 2 * place}",
            rated_power_w=ratings,
            gain_db="32 dB",
            attenuator_db=(attenuator, "locked"),
        )
        add("speaker_line", f"{key}_line", f"{name} line", 7, place, length_m=length, area_mm2="4 mm²")
        add(
            "loudspeaker",
            key,
            name,
            8,
            place,
            sensitivity_spl=sensitivity,
            directivity_q=q,
            boxes=boxes,
            continuous_w="300 W",
            adds="coherent" if key == "mains" else "power",
            area="hall",
        )
        link("processor", f"{key}_amp", "out" if place == 0 else f"out_{place + 1}")
        chain(f"{key}_amp", f"{key}_line", key)
    room = {"ambient": "NC 30", "field_kind": "room", "volume_m3": "2600 m³", "rt60_s": "1.4 s"}
    seats: tuple[tuple[str, str, str, str, dict[str, tuple[float, float]]], ...] = (
        (
            "middle",
            "Middle of the hall",
            "reference",
            "82 dB SPL",
            {"mains": (13, 0), "sub": (12, 0), "fills": (11, 6), "gallery": (14, 12)},
        ),
        ("front", "Front pew", "nearest", "82 dB SPL", {"mains": (7, 8), "sub": (4.5, 0), "fills": (2.8, 0)}),
        (
            "upstairs",
            "Gallery seat",
            "other",
            "82 dB SPL",
            {"mains": (20, 6), "sub": (19, 0), "gallery": (4.5, 0)},
        ),
    )
    for row, (key, name, role, target, heard) in enumerate(seats):
        add("seat", key, name, 9, row, role=role, target_spl_db=target, **room)
        for loudspeaker, (distance, off_axis) in heard.items():
            link(loudspeaker, key, m=distance, off_axis=off_axis or None)
