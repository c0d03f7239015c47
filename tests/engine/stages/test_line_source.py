"""Line sources: nominal and largest output, S/N by its reference, level switch."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import end, line, make, row, solved


def test_minus_10_dbv_is_minus_7_78_dbu():
    """Definition of dBV and dBu (IEC 60268-2); 2 V is +8.24 dBu (S03)."""
    node = solved(make("line_source", nominal_v="-10 dBV", max_output_v="2.0 V"), end()).node(
        "line_source", "out"
    )
    assert node.level == pytest.approx(-7.78, abs=0.005)
    assert node.clip == pytest.approx(8.24, abs=0.005)


@pytest.mark.parametrize(
    ("noise", "expected"),
    [
        ("90 dB unweighted re max", 8.239 - 90.0),
        ("90 dB unweighted re nominal", -7.782 - 90.0),
        ("90 dB unweighted re +4 dBu", 4.0 - 90.0),
        ("-86 dBu unweighted", -86.0),
        ("-86 dBu(A)", -86.0 + 2.05),
    ],
)
def test_residual_from_each_reference(noise, expected):
    """C13: residual = reference − S/N; C04: A-weighted to unweighted +2.05 dB."""
    source = make("line_source", nominal_v="-10 dBV", max_output_v="2.0 V", noise=noise)
    assert solved(source, end()).node("line_source", "out").noise == pytest.approx(expected, abs=0.02)


def test_an_unsaid_reference_is_an_interval():
    """R03: 90 dB without a reference lies between nominal and maximum, 16.02 dB apart here."""
    node = solved(line(nominal_v="-10 dBV", max_output_v="2.0 V", noise="90 dB unweighted"), end()).node(
        "source", "out"
    )
    assert node.high["noise"] - node.low["noise"] == pytest.approx(16.02, abs=0.01)


def test_the_level_switch_moves_level_clip_and_noise_together():
    full, low = (
        solved(make("line_source", lower_by_db=["12 dB", "40 dB"], level_switch=place), end()).node(
            "line_source", "out"
        )
        for place in (0.0, 2.0)
    )
    for name in ("level", "clip", "noise"):
        assert getattr(low, name) - getattr(full, name) == pytest.approx(-40.0)


def test_without_a_noise_figure_it_has_its_impedances_thermal_noise():
    """600 ohm: −124.90 dBu (4kTRB)."""
    node = solved(line(noise=None, z_out_ohm="600 ohm"), end()).node("source", "out")
    assert node.noise == pytest.approx(-124.90, abs=0.01)


def test_nominal_above_maximum_is_refused():
    stage = make("line_source", nominal_v="+4 dBu", max_output_v="0.5 V")
    assert "nominal output of +4 dBu above its maximum of 0.5 V" in next(
        stage.check(stage.values(), row(stage).axis())
    )
