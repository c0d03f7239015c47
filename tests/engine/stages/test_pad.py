"""Pads: loss, impedance, their own thermal noise."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import NO_LOAD, end, line, make, solved


@pytest.mark.parametrize("shape", ["U", "H"])
def test_its_loss_between_its_own_impedances(shape):
    """U: from a stiff source into an open input. H: from and into 600 ohm, against the 6.02 dB of a bare match (handbook T pad)."""
    pad = make("pad", loss_db="20 dB", z_ohm="600 ohm", shape=shape)
    if shape == "U":
        assert solved(line("0 dBu"), pad, end()).node("pad", "out").level == pytest.approx(-20.0, abs=1e-4)
    else:
        source = line("0 dBu", z_out_ohm="600 ohm")
        load = make("feed", z_in_ohm="600 ohm", ein_v=None)
        assert solved(source, pad, load).node("pad", "out").level == pytest.approx(-26.02, abs=0.005)


def test_a_consumer_input_behind_a_console():
    """S03: +4 dBu through 12 dB is −8 dBu, near −10 dBV; +24 dBu through it still meets +8.24 dBu: 3.8 dB too much."""
    for loss, left in (("12 dB", -3.76), ("16 dB", 0.24)):
        player = make("feed", z_in_ohm=NO_LOAD, max_input_v="2 V", ein_v=None)
        node = solved(line("+24 dBu"), make("pad", loss_db=loss), player).node("feed", "in")
        assert node.headroom == pytest.approx(left, abs=0.005)


def test_two_equal_pads_are_one():
    one = solved(
        line("0 dBu"),
        make("pad", "a", loss_db="20 dB", z_ohm="600 ohm", shape="H"),
        make("feed", z_in_ohm="600 ohm", ein_v=None),
    )
    two = solved(
        line("0 dBu"), make("pad", "a", loss_db="10 dB", z_ohm="600 ohm", shape="H"),
        make("pad", "b", loss_db="10 dB", z_ohm="600 ohm", shape="H"), make("feed", z_in_ohm="600 ohm", ein_v=None),
    )  # fmt: skip
    for name in ("level",):
        assert getattr(two.node("feed", "in"), name) == pytest.approx(
            getattr(one.node("feed", "in"), name), abs=1e-9
        )


def test_behind_a_stiff_source_its_noise_is_that_of_its_output_resistance():
    """A U pad of 20 dB and 600 ohm: 540 in parallel with 60 ohm is 54 ohm: −135.36 dBu (4kTRB; Nyquist)."""
    node = solved(line("0 dBu", noise="-250 dBu unweighted"), make("pad"), end()).node("pad", "out")
    assert node.noise == pytest.approx(-135.36, abs=0.01)


def test_out_of_the_line_it_does_nothing():
    node = solved(line("0 dBu"), make("pad", inserted=0.0), end()).node("pad", "out")
    assert node.level == pytest.approx(0.0, abs=1e-6)
