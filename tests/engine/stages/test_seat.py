"""Seats: distance, air, room, several loudspeakers."""

from __future__ import annotations

import numpy as np
import pytest

from engine.outcome import evaluate
from engine.project import Link, Project
from tests.engine.stages.alone import line, make, solved, tone

SPEAKER = {"sensitivity_spl": "98 dB 2.83 V/1 m", "z_ohm": "8 ohm"}


def level(distance: str, **fields) -> float:
    out = tone(
        250.0, line("2.8284271 V"), make("loudspeaker", **SPEAKER), make("seat", **fields), seat=distance
    )
    return float(out.seats[0].level)


def test_inverse_square():
    """S23: 20 log(20/6) = 10.46 dB between mix position and front row."""
    assert level("1 m") == pytest.approx(98.0, abs=0.01)
    assert level("6 m") - level("20 m") == pytest.approx(10.46, abs=0.03)


def test_air_takes_the_top_off():
    """ISO 9613-1 at 20 °C and 50 %: 100 m cost about 15.9 dB more at 10 kHz than at 100 Hz (formula, 0.159 dB/m)."""
    out = solved(line("1 V", spectrum="white"), make("loudspeaker", **SPEAKER), make("seat"), seat="101 m")
    shares = out.seats[0].level_bands / np.diff(
        [20, *[1000 * 10 ** ((n - 16.5) / 10) for n in range(30)], 20000]
    )
    assert 10.0 * np.log10(shares[7] / shares[27]) == pytest.approx(15.9, abs=0.4)


def test_off_axis_loss_is_the_links():
    stages = (
        line("2.8284271 V"), make("loudspeaker", **SPEAKER).with_fields(column=1), make("seat").with_fields(column=2)
    )  # fmt: skip
    links = (
        Link(id="a", source="source", target="loudspeaker"),
        Link(
            id="b",
            source="loudspeaker",
            target="seat",
            distance_m={"text": "1 m"},
            off_axis_db={"text": "6 dB"},
        ),
    )
    assert evaluate(Project(stages=stages, links=links)).seats[0].level == pytest.approx(92.0, abs=0.01)


def test_reverberant_field():
    """Hopkins–Stryker: at the critical distance 0.141 √(Q R) direct and reverberant sound are equal: +3.01 dB; far away only the room."""
    room = {"field_kind": "room", "room_constant_m2": "250 m²"}
    critical = float(np.sqrt(10.0 * 250.0 / (16.0 * np.pi)))
    assert level(f"{critical:.6f} m", **room) - level(f"{critical:.6f} m") == pytest.approx(3.01, abs=0.01)
    assert level("60 m", **room) - level("90 m", **room) == pytest.approx(0.05, abs=0.04)


def test_room_constant_from_volume_and_reverberation_time():
    """Sabine: 0.161 V / T: 1000 m³ and 1 s are 161 m²."""
    by_time = level("8 m", field_kind="room", volume_m3="1000 m³", rt60_s="1 s")
    assert by_time == pytest.approx(level("8 m", field_kind="room", room_constant_m2="161 m²"), abs=1e-9)


@pytest.mark.parametrize(("adds", "expected"), [("power", 3.01), ("coherent", 6.02)])
def test_two_loudspeakers(adds, expected):
    boxes = [
        make("powered_loudspeaker", name, noise_spl="30 dB(A)").with_fields(column=1) for name in ("a", "b")
    ]
    stages = (line("0 dBu"), *boxes, make("seat", adds=adds).with_fields(column=2))
    links = [Link(id=f"s{b.id}", source="source", target=b.id) for b in boxes]
    links += [Link(id=f"t{b.id}", source=b.id, target="seat", distance_m={"text": "1 m"}) for b in boxes]
    both = evaluate(Project(stages=stages, links=tuple(links))).seats[0]
    one = evaluate(Project(stages=stages, links=(links[0], links[2]))).seats[0]
    assert both.level - one.level == pytest.approx(expected, abs=0.005)
    assert both.hiss - one.hiss == pytest.approx(
        3.01, abs=0.02
    )  # each box's own hiss is an origin of its own


def test_a_room_needs_its_figures():
    seat = make("seat", field_kind="room", volume_m3=None, rt60_s=None)
    assert "give its volume and reverberation time" in next(seat.check(seat.values(), None))
