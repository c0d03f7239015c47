"""Loudspeakers: sensitivity by its reference, watts, several boxes, compression."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import SILENT, line, make, row, solved

VOLTS_2_83 = "2.8284271 V"


def spl(level: str = VOLTS_2_83, **fields):
    return solved(line(level), make("loudspeaker", **fields)).node("loudspeaker", "out").level


def test_one_watt_against_2_83_volts():
    """S33: 97 dB 1 W/1 m into 4 ohm is 100.01 dB at 2.83 V; 99 dB 2.83 V/1 m is 99 (IEC 60268-5 practice; C21)."""
    assert spl(sensitivity_spl="97 dB 1 W/1 m", z_ohm="4 ohm") == pytest.approx(100.01, abs=0.005)
    assert spl(sensitivity_spl="99 dB 2.83 V/1 m", z_ohm="4 ohm") == pytest.approx(99.0, abs=0.005)


def test_an_unsaid_reference_is_an_interval():
    out = solved(line(VOLTS_2_83), make("loudspeaker", sensitivity_spl="97 dB", z_ohm="4 ohm")).node(
        "loudspeaker", "out"
    )
    assert out.high["level"] - out.low["level"] == pytest.approx(3.01, abs=0.005)


@pytest.mark.parametrize(
    ("fields", "gain_db", "z"),
    [
        ({"boxes": 4}, 12.04, 2.0),
        ({"boxes": 4, "adds": "power"}, 6.02, 2.0),
        ({"boxes": 2, "wiring": "series"}, 0.0, 16.0),
        ({"boxes": 2, "wiring": "series", "adds": "power"}, -3.01, 16.0),
    ],
)
def test_several_boxes(fields, gain_db, z):
    """N in parallel: 20 log N coherent, 10 log N as power, load Z/N; in series each gets 1/N of the voltage, load N Z."""
    stage = make("loudspeaker", z_ohm="8 ohm", **fields)
    assert spl(z_ohm="8 ohm", **fields) - spl(z_ohm="8 ohm") == pytest.approx(gain_db, abs=0.005)
    assert float(stage.load_ohm(stage.values())) == pytest.approx(z)


def test_why_it_is_87_to_90_at_the_mix_position():
    """S22: 98 dB 1 W/1 m, 500 W sine into 8 ohm, 20 m: 98.97 dB sine; 12 dB crest 90.0 average (63 W); compressed by 3 dB 87.0."""
    amp = make(
        "power_amplifier", rated_power_w=["500 W @ 8 ohm"], gain_db="30 dB", damping_factor=None, noise=SILENT
    )
    clip_in = 38.24 - 30.0
    average = clip_in - (12.0 - 3.0103)
    for fields, expected in (({}, 89.98), ({"compression_db": "3 dB"}, 86.98)):
        speaker = make("loudspeaker", sensitivity_spl="98 dB 1 W/1 m", **fields)
        out = solved(line(f"{average} dBu"), amp, speaker)
        assert out.node("loudspeaker", "out").level - 26.02 == pytest.approx(
            expected, abs=0.05
        )  # no air here
        assert out.loudspeakers[0].average_w == pytest.approx(63.0, rel=0.02)
        assert out.loudspeakers[0].peak_w == pytest.approx(1000.0, rel=0.02)


def test_compression_spares_the_hiss():
    """Hiss is judged while nothing plays, with a cool coil."""
    amp = make("power_amplifier", noise="-60 dBu unweighted", damping_factor=None)
    cool, hot = (
        solved(line("0 dBu"), amp, make("loudspeaker", **fields)).node("loudspeaker", "out")
        for fields in ({}, {"compression_db": "3 dB"})
    )
    assert hot.level - cool.level == pytest.approx(-3.0, abs=1e-9)
    assert hot.noise == pytest.approx(cool.noise, abs=1e-9)


def test_ratings_count_all_boxes():
    """Continuous 300 W, four in parallel 1200 W; peak four times that where not given (6 dB crest; AES2 practice)."""
    stage = make("loudspeaker", continuous_w="300 W", boxes=4)
    assert stage.rated_w(stage.values(), "continuous") == 1200.0
    assert stage.rated_w(stage.values(), "peak") == 4800.0
    assert stage.rated_w(stage.values(), "programme") is None


def test_peak_below_continuous_is_refused():
    stage = make("loudspeaker", continuous_w="300 W", peak_w="200 W")
    assert "is below its continuous power" in next(stage.check(stage.values(), row(stage).axis()))
