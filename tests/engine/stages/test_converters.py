"""A/D and D/A converters, digital links."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import NO_LOAD, NO_OHM, end, line, make, solved


@pytest.mark.parametrize(
    ("text", "expected"),
    [("EBU R 68", -18.0), ("SMPTE RP 155", -24.0), ("+24 dBu", -24.0), ("0 dBFS = +18 dBu", -18.0)],
)
def test_alignment_levels(text, expected):
    """0 dBu into full scale: EBU R 68 (+18 dBu) −18 dBFS, SMPTE RP 155 (+24 dBu) −24 dBFS: 6 dB apart."""
    node = solved(line("0 dBu"), make("ad_converter", full_scale_v=text, z_in_ohm=NO_LOAD)).node(
        "ad_converter", "out"
    )
    assert node.level == pytest.approx(expected, abs=0.005)
    assert node.full_scale_dbu == pytest.approx(-expected, abs=0.005)


def test_dynamic_range_to_noise():
    """C12: 110 dB under +24 dBu is −86 dBu; S/N at 0 dBu is 110 − 24 = 86 dB."""
    out = solved(
        line("0 dBu", noise="-250 dBu unweighted"),
        make("ad_converter", range_db="110 dB unweighted", z_in_ohm=NO_LOAD),
    )
    assert out.node("ad_converter", "out").noise == pytest.approx(-110.0, abs=1e-3)
    assert out.node("ad_converter", "out").snr == pytest.approx(86.0, abs=1e-3)


def test_it_clips_at_full_scale():
    node = solved(line("+20 dBu"), make("ad_converter", z_in_ohm=NO_LOAD)).node("ad_converter", "in")
    assert (node.clip, node.headroom) == pytest.approx((24.0, 4.0), abs=1e-6)


def test_there_and_back_is_unity():
    out = solved(
        line("-3 dBu"), make("ad_converter", z_in_ohm=NO_LOAD), make("da_converter", z_out_ohm=NO_OHM), end()
    )
    assert out.node("da_converter", "out").level == pytest.approx(-3.0, abs=1e-6)
    assert out.node("da_converter", "out").clip == pytest.approx(24.0, abs=1e-6)


def test_the_range_switch_lowers_the_converters_noise_too():
    fields = {"range_db": "110 dB unweighted", "lower_by_db": ["6 dB", "12 dB"], "z_out_ohm": NO_OHM}
    out = solved(
        make("digital_source", level_dbfs="-20 dBFS"), make("da_converter", output_range=2.0, **fields), end()
    )
    node = out.node("da_converter", "out")
    assert (node.level, node.noise, node.clip) == pytest.approx((-8.0, -98.0, 12.0), abs=1e-3)


@pytest.mark.parametrize(("bits", "expected"), [("16", -98.09), ("24", -146.26)])
def test_word_length(bits, expected):
    """6.02 N + 1.76 dB under a full-scale sine (Bennett 1948); TPDF dither adds 4.77 dB."""
    for dither, more in (("none", 0.0), ("TPDF", 4.77)):
        out = solved(make("digital_source"), make("digital_link", bits=bits, dither=dither))
        assert out.node("digital_link", "out").noise == pytest.approx(expected + more, abs=0.01)


def test_fixed_point_clips_and_floating_point_does_not():
    for sample_format, left in (("fixed-point", -2.0), ("floating-point", 10.0)):
        stage = make("digital_link", sample_format=sample_format, gain_db=12.0)
        node = solved(make("digital_source", level_dbfs="-10 dBFS"), stage).node("digital_link", "out")
        assert node.level == pytest.approx(2.0, abs=1e-9)
        assert node.headroom == pytest.approx(
            left, abs=1e-9
        )  # floating: the source's own full scale, carried along
