"""The Alder Room: a meeting room for twenty-four, invented."""

from __future__ import annotations

from engine.project import Project

from .venue import Venue

# fmt: off: one line per thing reads as a table
RACK = "Credenza rack"


def build() -> Project:
    """Lectern and table microphones, a radio receiver and a laptop; ceiling loudspeakers and a stream."""
    venue = Venue(
        "Alder Room, Tidewell House",
        author="J. Marlow",
        note="An invented meeting room. Every figure is a guess from a template: type your own over them.",
    )
    add, link, chain = venue.add, venue.link, venue.chain

    add(
        "sound_source",
        "talker",
        "Talker at lectern",
        0,
        0,
        level_spl="68 dB SPL",
        stated_at_m="0.5 m",
        crest_db="15 dB",
    )
    add(
        "sound_source",
        "table",
        "Talkers at table",
        0,
        1,
        count=4,
        level_spl="60 dB SPL",
        stated_at_m="0.6 m",
        crest_db="15 dB",
    )
    add(
        "line_source",
        "radio",
        "Radio receiver",
        0,
        2,
        rack=f"{RACK}, unit 2",
        nominal_v="-8 dBu",
        max_output_v="+18 dBu",
        z_out_ohm="150 ohm",
        crest_db="15 dB",
        noise="102 dB(A) re max",
        spectrum="speech",
        form="push-pull",
        lower_by_db=["20 dB"],
        level_switch=(0, "locked"),
    )
    add(
        "line_source",
        "laptop",
        "Laptop",
        0,
        3,
        nominal_v="-18 dBV",
        max_output_v="1 V",
        z_out_ohm="100 ohm",
        crest_db="14 dB",
        noise="92 dB(A) re max",
        lower_by_db=[],
        form="unbalanced",
    )

    add(
        "microphone",
        "lectern_mic",
        "Lectern microphone",
        1,
        0,
        sensitivity_v_per_pa="12 mV/Pa",
        self_noise_spl="22 dB(A)",
        max_spl="130 dB SPL",
        z_ohm="150 ohm",
        form="impedance-balanced",
    )
    add(
        "microphone",
        "table_mic",
        "Table microphones",
        1,
        1,
        count=4,
        sensitivity_v_per_pa="20 mV/Pa",
        self_noise_spl="20 dB(A)",
        max_spl="126 dB SPL",
        z_ohm="150 ohm",
        form="impedance-balanced",
    )

    mixer = f"{RACK}, unit 4"
    add("preamplifier", "lectern_pre", "Lectern preamp", 2, 0, rack=mixer, gain_db=46, pad=(0, "locked"))
    add(
        "preamplifier", "table_pre", "Table preamps", 2, 1, count=4, rack=mixer, gain_db=49, pad=(0, "locked")
    )
    channel = {"rack": mixer, "low_cut": (1, "locked")}
    add("mixer_channel", "lectern_ch", "Lectern channel", 3, 0, fader_db=(0, "operator"), **channel)
    add("mixer_channel", "table_ch", "Table channels", 3, 1, count=4, fader_db=(-8, "operator"), **channel)
    add("mixer_channel", "radio_ch", "Radio channel", 3, 2, trim_db=5, fader_db=(-5, "operator"), **channel)
    add(
        "mixer_channel",
        "laptop_ch",
        "Laptop channel",
        3,
        3,
        rack=mixer,
        trim_db=12,
        fader_db=(-8, "operator"),
    )
    add("mix_bus", "main", "Room mix", 4, 0, rack=mixer, fader_db=(0, "operator"), mute=(0, "operator"))
    add(
        "mix_bus", "stream", "Stream mix", 4, 4, rack=mixer, fader_db=(-3, "adjustable"), mute=(0, "operator")
    )

    chain("talker", "lectern_mic", "lectern_pre", "lectern_ch", "main")
    chain("table", "table_mic", "table_pre", "table_ch", "main")
    chain("radio", "radio_ch", "main")
    link("laptop", "laptop_ch", wiring="one leg")
    link("laptop_ch", "main")
    for each in ("lectern_ch", "table_ch", "radio_ch", "laptop_ch"):
        link(each, "stream", "after_fader")
    venue.links = [_with_distance(each, {"talker": "0.4 m", "table": "0.6 m"}) for each in venue.links]

    add(
        "processor",
        "processor",
        "Room processor",
        5,
        0,
        rack=f"{RACK}, unit 6",
        outputs_fitted=2,
        input_full_scale_v="+20 dBu",
        output_full_scale_v="+20 dBu",
        input_trim_db=0,
        trim_1_db=-4,
        trim_2_db=-4,
        high_pass_1_hz="100 Hz",
        high_pass_2_hz="100 Hz",
        limiter_1=(1, "locked"),
        limit_rms_1_dbfs=(-10, "locked"),
        limit_peak_1_dbfs=(-4, "locked"),
        limiter_2=(1, "locked"),
        limit_rms_2_dbfs=(-10, "locked"),
        limit_peak_2_dbfs=(-4, "locked"),
    )
    chain("main", "processor")
    add("line_cable", "stream_line", "Line to encoder", 5, 4, length_m="15 m")
    add(
        "pad",
        "stream_pad",
        "Encoder pad",
        6,
        4,
        loss_db="10 dB",
        z_ohm="10 k",
        rack="Encoder shelf",
        inserted=(1, "locked"),
    )
    add(
        "feed",
        "encoder",
        "Stream encoder",
        7,
        4,
        rack="Encoder shelf",
        use="stream",
        nominal_v="-10 dBV",
        max_input_v="+6 dBV",
    )
    chain("stream", "stream_line", "stream_pad", "encoder")

    for place, (half, output) in enumerate((("front", "out"), ("rear", "out_2"))):
        amplifier = add(
            "power_amplifier",
            f"amp_{half}",
            f"Amplifier {half}",
            6,
            place,
            rack=f"{RACK}, unit {8 + place}",
            rated_power_w=["60 W @ 4 ohm"],
            gain_db="26 dB",
            noise="100 dB(A) re rated",
            max_input_v="+20 dBu",
            attenuator_db=(-26, "locked"),
        )
        link("processor", amplifier, output)
        add(
            "speaker_line",
            f"line_{half}",
            f"Line {half}",
            7,
            place,
            length_m=f"{18 + 6 * place} m",
            area_mm2="1.5 mm²",
        )
        add(
            "loudspeaker",
            f"ceiling_{half}",
            f"Ceiling {half}",
            8,
            place,
            sensitivity_spl="89 dB 1 W/1 m",
            z_ohm="16 ohm",
            continuous_w="30 W",
            directivity_q="4",
            boxes=4,
            adds="power",
            area="ceiling",
        )
        chain(amplifier, f"line_{half}", f"ceiling_{half}")

    room = {"ambient": "NC 30", "field_kind": "room", "volume_m3": "190 m³", "rt60_s": "0.6 s"}
    add("seat", "head", "Head of table", 9, 0, role="reference", target_spl_db="68 dB SPL", **room)
    add("seat", "back", "Back row", 9, 1, role="other", target_spl_db="68 dB SPL", **room)
    add("seat", "under", "Seat under rear", 9, 2, role="nearest", target_spl_db="69 dB SPL", **room)
    for seat, front_m, rear_m in (("head", 2.4, 5.5), ("back", 6.0, 2.3), ("under", 5.2, 1.7)):
        link("ceiling_front", seat, m=front_m)
        link("ceiling_rear", seat, m=rear_m)
    return venue.project


def _with_distance(link, distances):
    from engine.figures import Figure

    return (
        link.with_fields(distance_m=Figure(text=distances[link.source])) if link.source in distances else link
    )
