"""Microphones: sensitivity, loading, self-noise, what they take."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import NO_LOAD, end, make, solved

EXACT_94 = 93.979  # 1 Pa in dB SPL; sheets round it to 94


def talker(level: str = "72 dB SPL", **fields):
    return make("sound_source", level_spl=level, **fields)


def test_presenter_at_72_db():
    """S05: −54.5 dBV/Pa at 72 dB SPL is −74.28 dBu, −35 dBV/Pa −54.78 dBu (with 94 dB for 1 Pa; here 93.98)."""
    for sensitivity, expected in (("-54.5 dBV/Pa", -74.28), ("-35 dBV/Pa", -54.78)):
        node = solved(talker(), make("microphone", sensitivity_v_per_pa=sensitivity), end()).node(
            "microphone", "out"
        )
        assert node.level == pytest.approx(expected + 94.0 - EXACT_94, abs=0.01)


def test_old_sheets_refer_to_a_microbar():
    """C01: −74 dB re 1 V/µbar is −54 dBV/Pa."""
    old, new = (
        solved(talker(), make("microphone", sensitivity_v_per_pa=text), end()).node("microphone", "out").level
        for text in ("-74 dB re 1 V/µbar", "-54 dBV/Pa")
    )
    assert old == pytest.approx(new, abs=1e-9)


def test_self_noise_at_the_output():
    """S05: 18 dB(A) at −35 dBV/Pa is −108.78 dBu(A) (C03; 94 dB for 1 Pa)."""
    mic = make("microphone", sensitivity_v_per_pa="-35 dBV/Pa", self_noise_spl="18 dB(A)")
    assert solved(talker(), mic, end()).node("microphone", "out").noise_a == pytest.approx(-108.78, abs=0.03)


def test_without_self_noise_it_has_the_thermal_noise_of_its_impedance():
    """200 ohm, 20 Hz to 20 kHz, 20 °C: −129.67 dBu (4kTRB, SI 2019 constant)."""
    out = solved(talker(), make("microphone", z_ohm="200 ohm"), make("feed", z_in_ohm=NO_LOAD, ein_v=None))
    assert out.node("microphone", "out").noise == pytest.approx(-129.67, abs=0.01)


def test_into_1_5_kohm_a_200_ohm_microphone_loses_1_09_db():
    """S39: 20 log(1500 / 1700); its thermal noise falls as much, and the input adds none."""
    free = solved(talker(), make("microphone"), end()).node("microphone", "out")
    held = solved(talker(), make("microphone"), make("feed", z_in_ohm="1.5 k", ein_v=None)).node(
        "microphone", "out"
    )
    assert held.level - free.level == pytest.approx(-1.09, abs=0.005)
    assert held.noise - free.noise == pytest.approx(-1.09, abs=0.005)


def test_condenser_on_a_loud_source():
    """S06: 20 mV/Pa at 128 dB SPL gives 1.002 V = +2.24 dBu; at its own limit of 138 dB +12.2 dBu."""
    mic = make("microphone", sensitivity_v_per_pa="20 mV/Pa", max_spl="138 dB SPL")
    out = solved(talker("128 dB SPL"), mic, end())
    assert out.node("microphone", "out").level == pytest.approx(2.24, abs=0.03)
    assert out.node("microphone", "out").clip == pytest.approx(12.24, abs=0.03)
    assert out.node("microphone", "in").headroom == pytest.approx(10.0, abs=1e-9)


def test_its_pad_raises_what_it_takes_and_leaves_its_noise():
    out = {
        pad: solved(
            talker(),
            make("microphone", max_spl="130 dB SPL", pad_db="10 dB", self_noise_spl="15 dB(A)", pad=pad),
            end(),
        )
        for pad in (0.0, 1.0)
    }
    nodes = {pad: each.node("microphone", "out") for pad, each in out.items()}
    assert nodes[1.0].level - nodes[0.0].level == pytest.approx(-10.0)
    assert nodes[1.0].noise == pytest.approx(nodes[0.0].noise)
    assert out[1.0].node("microphone", "in").clip == pytest.approx(140.0)
