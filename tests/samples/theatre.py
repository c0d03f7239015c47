"""The Copper Lantern: a theatre of six hundred seats with forty-two inputs, invented."""

from __future__ import annotations

from engine.project import Project

from .venue import Venue

# fmt: off: one line per thing reads as a table
DESK = "Mixing desk"
AMPLIFIERS = ("Amplifier rack left", "Amplifier rack right")
PROCESSORS = "Processor rack"

Heard = dict[str, tuple[float, float]]  # loudspeaker: distance [m], off-axis loss [dB]
Seat = tuple[str, str, str, str, Heard]

CONDENSER = {
    "self_noise_spl": "16 dB(A)",
    "max_spl": "134 dB SPL",
    "z_ohm": "150 ohm",
    "form": "impedance-balanced",
}
CLIP_ON = {
    "sensitivity_v_per_pa": "6 mV/Pa",
    **CONDENSER,
    "self_noise_spl": "24 dB(A)",
    "max_spl": "140 dB SPL",
}
SMALL = {"sensitivity_v_per_pa": "12 mV/Pa", **CONDENSER}
DYNAMIC = {"sensitivity_v_per_pa": "2 mV/Pa", "z_ohm": "200 ohm", "form": "transformer"}

#: key, name, how many, level at the microphone, crest factor, microphone, preamplifier gain, channel fader, group.
MICROPHONES = (
    ("floats", "Stage edge", 4, "68 dB SPL", "16 dB", SMALL, 44, -20, "voices"),
    ("strings", "Strings", 6, "84 dB SPL", "16 dB", CLIP_ON, 36, -10, "band"),
    ("winds", "Woodwind", 4, "86 dB SPL", "16 dB", SMALL, 30, -14, "band"),
    ("brass", "Brass", 3, "100 dB SPL", "18 dB", DYNAMIC, 39, -20, "band"),
    ("drums", "Drums", 5, "106 dB SPL", "20 dB", DYNAMIC, 31, -20, "band"),
)
LINES = (
    # key, name, how many, nominal, maximum, crest factor, trim, fader, group
    ("radio", "Radio microphones", 14, "-9 dBu", "+18 dBu", "16 dB", -4, -12, "voices"),
    ("keys", "Keyboards", 4, "-8 dBu", "+14 dBu", "16 dB", -2, -14, "band"),
    ("playback", "Playback", 2, "-4 dBu", "+20 dBu", "15 dB", -4, -12, "band"),
)

#: key, name, rack, ratings, attenuator, sensitivity, impedance, Q, boxes, continuous power, cable.
LOUDSPEAKERS = (
    (
        "left",
        "Main left",
        0,
        ["900 W @ 8 ohm", "1500 W @ 4 ohm"],
        -8,
        "101 dB 1 W/1 m",
        "8 ohm",
        "16",
        2,
        "400 W",
        "38 m",
    ),
    (
        "right",
        "Main right",
        1,
        ["900 W @ 8 ohm", "1500 W @ 4 ohm"],
        -8,
        "101 dB 1 W/1 m",
        "8 ohm",
        "16",
        2,
        "400 W",
        "42 m",
    ),
    (
        "sub",
        "Subwoofers",
        0,
        ["1200 W @ 8 ohm", "2000 W @ 4 ohm"],
        -9,
        "99 dB 1 W/1 m",
        "8 ohm",
        "2",
        2,
        "600 W",
        "30 m",
    ),
    (
        "fill",
        "Front fills",
        1,
        ["250 W @ 8 ohm", "400 W @ 4 ohm"],
        -20,
        "90 dB 1 W/1 m",
        "16 ohm",
        "5",
        4,
        "80 W",
        "45 m",
    ),
    (
        "delay",
        "Balcony delays",
        1,
        ["250 W @ 8 ohm", "400 W @ 4 ohm"],
        -18,
        "93 dB 1 W/1 m",
        "16 ohm",
        "6",
        4,
        "100 W",
        "60 m",
    ),
    ("pit", "Pit monitor", 0, ["250 W @ 8 ohm"], -20, "95 dB 1 W/1 m", "8 ohm", "8", 1, "200 W", "25 m"),
    (
        "wings",
        "Wing foldback",
        0,
        ["250 W @ 8 ohm", "400 W @ 4 ohm"],
        -8,
        "95 dB 1 W/1 m",
        "8 ohm",
        "8",
        2,
        "200 W",
        "32 m",
    ),
)

#: key, name, role, target, and each loudspeaker's distance and off-axis loss.
SEATS: tuple[Seat, ...] = (
    (
        "row_m",
        "Row M centre",
        "reference",
        "88 dB SPL",
        {"left": (15, 3), "right": (15, 3), "sub": (15, 0), "fill": (12, 8), "delay": (9, 12)},
    ),
    (
        "row_b",
        "Row B centre",
        "nearest",
        "88 dB SPL",
        {"left": (8, 9), "right": (8, 9), "sub": (6, 0), "fill": (2.6, 2)},
    ),
    (
        "row_d",
        "Row D left",
        "other",
        "89 dB SPL",
        {"left": (8, 2), "right": (13, 9), "sub": (7, 0), "fill": (4.5, 3)},
    ),
    (
        "under",
        "Row T under balcony",
        "other",
        "87 dB SPL",
        {"left": (24, 3), "right": (24, 3), "sub": (24, 0), "delay": (3.5, 0)},
    ),
    ("balcony", "Balcony front", "other", "88 dB SPL", {"left": (20, 1), "right": (20, 1), "sub": (20, 0)}),
    ("conductor", "Conductor", "other", "82 dB SPL", {"pit": (1.5, 0)}),
    ("wing_left", "Wing, stage left", "other", "84 dB SPL", {"wings": (3.5, 0)}),
)


def build() -> Project:
    """Forty-two inputs in two groups; mains, subwoofers, fills and delays by two processors; pit and wing monitors."""
    venue = Venue(
        "The Copper Lantern Theatre",
        author="S. Okonkwo-Reyes",
        note="An invented theatre. Every figure is a guess from a template: type your own over them.",
        revision=3,
    )
    _microphones(venue)
    _lines(venue)
    _mixes(venue)
    _processors(venue)
    _loudspeakers(venue)
    _seats(venue)
    return venue.project


def _microphones(venue: Venue) -> None:
    for row, (key, name, count, level, crest, figures, gain, fader, group) in enumerate(MICROPHONES):
        spectrum = "speech" if group == "voices" else "pink"
        venue.add(
            "sound_source", key, name, 0, row, count=count, level_spl=level, crest_db=crest, spectrum=spectrum
        )
        venue.add("microphone", f"{key}_mic", f"{name} microphone", 1, row, count=count, **figures)
        venue.add("line_cable", f"{key}_cable", f"{name} multicore", 2, row, count=count, length_m="45 m")
        venue.add(
            "preamplifier",
            f"{key}_pre",
            f"{name} preamp",
            3,
            row,
            count=count,
            rack=f"{DESK}, input cards",
            gain_db=gain,
            pad=(0, "locked"),
        )
        venue.chain(key, f"{key}_mic", f"{key}_cable", f"{key}_pre")
        _channel(venue, key, name, row, count, -1 if key == "drums" else 0, fader, group)
        venue.link(f"{key}_pre", f"{key}_ch")


def _lines(venue: Venue) -> None:
    for row, (key, name, count, nominal, most, crest, trim, fader, group) in enumerate(
        LINES, start=len(MICROPHONES)
    ):
        venue.add(
            "line_source",
            key,
            name,
            0,
            row,
            count=count,
            nominal_v=nominal,
            max_output_v=most,
            crest_db=crest,
            z_out_ohm="150 ohm",
            form="transformer",
            lower_by_db=[],
            noise="105 dB(A) re max",
            spectrum="speech" if group == "voices" else "pink",
        )
        _channel(venue, key, name, row, count, trim, fader, group)
        venue.link(key, f"{key}_ch")


def _channel(
    venue: Venue, key: str, name: str, row: int, count: int, trim: float, fader: float, group: str
) -> None:
    venue.add(
        "mixer_channel",
        f"{key}_ch",
        f"{name} channels",
        4,
        row,
        count=count,
        rack=f"{DESK}, {group} bay",
        trim_db=trim,
        fader_db=(fader, "operator"),
        low_cut=(1 if group == "voices" else 0, "locked"),
    )


def _mixes(venue: Venue) -> None:
    keys = {
        group: [each[0] for each in (*MICROPHONES, *LINES) if each[-1] == group]
        for group in ("voices", "band")
    }
    buses = (
        ("voices", "Voices group", 5, 0, -2),
        ("band", "Band group", 5, 1, -5),
        ("bus_left", "Left mix", 6, 0, 0),
        ("bus_right", "Right mix", 6, 1, 0),
        ("bus_pit", "Pit mix", 6, 5, -10),
        ("bus_wings", "Wing mix", 6, 6, -1.5),
    )
    for key, name, column, row, fader in buses:
        venue.add(
            "mix_bus",
            key,
            name,
            column,
            row,
            rack=f"{DESK}, master bay",
            fader_db=(fader, "operator"),
            mute=(0, "operator"),
        )
    for group, members in keys.items():
        for member in members:
            venue.link(f"{member}_ch", group)
    for group in ("voices", "band"):
        venue.link(group, "bus_left")
        venue.link(group, "bus_right")
        venue.link(group, "bus_wings")
    for member in ("radio", "keys"):
        venue.link(f"{member}_ch", "bus_pit", "before_fader")


def _processors(venue: Venue) -> None:
    def outputs(*trims: float, **crossover: str) -> dict[str, object]:
        settings: dict[str, object] = {"outputs_fitted": len(trims), **crossover}
        for place, trim in enumerate(trims, start=1):
            settings |= {
                f"trim_{place}_db": trim,
                f"limiter_{place}": (1, "locked"),
                f"limit_rms_{place}_dbfs": (-9, "locked"),
                f"limit_peak_{place}_dbfs": (-3, "locked"),
            }
        return settings

    venue.add(
        "processor",
        "proc_left",
        "Processor left",
        7,
        0,
        rack=f"{PROCESSORS}, unit 2",
        **outputs(0, 5, high_pass_1_hz="80 Hz", high_pass_2_hz="32 Hz", low_pass_2_hz="80 Hz"),
    )
    venue.add(
        "processor",
        "proc_right",
        "Processor right",
        7,
        1,
        rack=f"{PROCESSORS}, unit 3",
        **outputs(0, -2, 0, high_pass_1_hz="80 Hz", high_pass_2_hz="150 Hz", high_pass_3_hz="120 Hz"),
    )
    venue.add(
        "equaliser",
        "eq_pit",
        "Pit equaliser",
        7,
        5,
        rack=f"{PROCESSORS}, unit 5",
        bypass=(0, "locked"),
        level_db=(0, "locked"),
    )
    venue.add(
        "equaliser",
        "eq_wings",
        "Wing equaliser",
        7,
        6,
        rack=f"{PROCESSORS}, unit 6",
        bypass=(0, "locked"),
        level_db=(0, "locked"),
    )
    venue.chain("bus_left", "proc_left")
    venue.chain("bus_right", "proc_right")
    venue.chain("bus_pit", "eq_pit")
    venue.chain("bus_wings", "eq_wings")


def _loudspeakers(venue: Venue) -> None:
    feeds = {
        "left": ("proc_left", "out"),
        "sub": ("proc_left", "out_2"),
        "right": ("proc_right", "out"),
        "fill": ("proc_right", "out_2"),
        "delay": ("proc_right", "out_3"),
        "pit": ("eq_pit", "out"),
        "wings": ("eq_wings", "out"),
    }
    for row, (key, name, rack, ratings, attenuator, sensitivity, z_ohm, q, boxes, power, length) in enumerate(
        LOUDSPEAKERS
    ):
        venue.add(
            "power_amplifier",
            f"{key}_amp",
            f"{name} amplifier",
            8,
            row,
            rack=f"{AMPLIFIERS[rack]}, unit {4 + 2 * row}",
            rated_power_w=ratings,
            gain_db="32 dB",
            attenuator_db=(attenuator, "locked"),
        )
        venue.add("speaker_line", f"{key}_line", f"{name} line", 9, row, length_m=length, area_mm2="4 mm²")
        venue.add(
            "loudspeaker",
            key,
            name,
            10,
            row,
            sensitivity_spl=sensitivity,
            z_ohm=z_ohm,
            directivity_q=q,
            boxes=boxes,
            continuous_w=power,
            adds="power" if key in ("fill", "delay", "wings") else "coherent",
        )
        source, output = feeds[key]
        venue.link(source, f"{key}_amp", output)
        venue.chain(f"{key}_amp", f"{key}_line", key)


def _seats(venue: Venue) -> None:
    house = {"ambient": "NC 27", "field_kind": "room", "volume_m3": "3800 m³", "rt60_s": "1.1 s"}
    stage = {"ambient": "40 dB(A)"}
    for row, (key, name, role, target, heard) in enumerate(SEATS):
        place = stage if key in ("conductor", "wing_left") else house
        venue.add("seat", key, name, 11, row, role=role, target_spl_db=target, **place)
        for loudspeaker, (distance, off_axis) in heard.items():
            venue.link(loudspeaker, key, m=distance, off_axis=off_axis or None)
