"""Channel strips: order of controls, taps, mute, what clips where."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from tests.engine.stages.alone import NO_LOAD, NO_OHM, SILENT, end, line, make, solved

STRIP = {"z_in_ohm": NO_LOAD, "z_out_ohm": NO_OHM}


def test_trim_and_fader_move_the_level_db_for_db():
    out = solved(line("0 dBu"), make("mixer_channel", trim_db=6.0, fader_db=-10.0, **STRIP), end())
    assert out.node("mixer_channel", "out").level == pytest.approx(-4.0, abs=1e-6)


def test_noise_ahead_of_the_fader_moves_with_it():
    for fader in (0.0, -20.0):
        out = solved(
            line("0 dBu"), make("mixer_channel", fader_db=fader, noise="-95 dBu unweighted", **STRIP), end()
        )
        assert out.node("mixer_channel", "out").noise == pytest.approx(-95.0 + fader, abs=1e-6)


def test_each_tap_stands_where_it_says():
    """Taps behind trim, equaliser, fader and mute: 6 dB of trim, −3 dB at the fader, then muted."""
    strip = make(
        "mixer_channel", trim_db=6.0, fader_db=-3.0, mid_db=12.0, mid_q="1", mute=1.0, noise=SILENT, **STRIP
    )
    ends = {tap.name: end(tap.name) for tap in strip.outputs() if tap.tap}
    links = [Link(id="s", source="source", target="mixer_channel")]
    links += [Link(id=f"to {tap}", source="mixer_channel", output=tap, target=tap) for tap in ends]
    stages = (
        line("0 dBu"),
        strip.with_fields(column=1),
        *(stage.with_fields(column=2) for stage in ends.values()),
    )
    outcome = evaluate(Project(stages=stages, links=tuple(links)), tone_hz=1000.0)
    levels = {tap: outcome.node(tap, "in").level for tap in ends}
    assert levels["before_equaliser"] == pytest.approx(6.0, abs=1e-6)
    assert levels["before_fader"] == pytest.approx(18.0, abs=1e-6)
    assert levels["after_fader"] == pytest.approx(15.0, abs=1e-6)
    assert levels["after_mute"] is None
    assert outcome.node("after_mute", "in").muted


def test_fader_off_is_silence_and_its_clip_points_stay():
    out = solved(line("0 dBu"), make("mixer_channel", fader_db=None, **STRIP), end())
    node = out.node("mixer_channel", "out")
    assert node.muted
    assert node.clip == pytest.approx(22.0, abs=1e-6)


def test_low_cut_is_third_order():
    """18 dB per octave: an octave below its corner −18.1 dB, −3.01 dB at it (Butterworth)."""
    from tests.engine.stages.alone import tone

    for frequency, expected in ((80.0, -3.01), (40.0, -18.13)):
        out = tone(
            frequency, line("0 dBu"), make("mixer_channel", low_cut=1.0, low_cut_hz="80 Hz", **STRIP), end()
        )
        assert out.node("mixer_channel", "out").level == pytest.approx(expected, abs=0.01)


def test_a_digital_strip_neither_clips_nor_hisses():
    out = solved(
        make("digital_source"),
        make("mixer_channel", signal="digital", fader_db=10.0),
        make("feed", signal="digital"),
    )
    node = out.node("mixer_channel", "out")
    assert node.level == pytest.approx(-10.0, abs=1e-9)
    assert node.unit == "dBFS"
    assert node.noise is None
    assert node.clip == pytest.approx(10.0)  # only the source's own full scale, carried along
