"""Speaker lines: loss by cross-section."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import line, make, numbers, solved


def ohms(stage) -> float:
    return float(stage.resistance_ohm(numbers(stage)))


@pytest.mark.parametrize(
    ("area", "ohm", "z", "loss"),
    [
        ("2.5 mm²", 0.826, "4 ohm", -1.63),
        ("2.5 mm²", 0.826, "8 ohm", -0.85),
        ("6 mm²", 0.344, "4 ohm", -0.72),
        ("6 mm²", 0.344, "8 ohm", -0.37),
    ],
)
def test_60_m_to_the_delays(area, ohm, z, loss):
    """S21: copper of 0.0172 ohm mm²/m, there and back."""
    stage = make("speaker_line", length_m="60 m", area_mm2=area)
    assert ohms(stage) == pytest.approx(ohm, abs=0.001)
    out = solved(line("+30 dBu"), stage, make("loudspeaker", z_ohm=z))
    assert out.node("speaker_line", "out").level - 30.0 == pytest.approx(loss, abs=0.005)


def test_awg_and_iec_60228():
    """12 AWG 5.211 ohm/km (ASTM B258, from memory), 2.5 mm² flexible 7.98 ohm/km (IEC 60228)."""
    gauge = make("speaker_line", length_m="1000 m", area_mm2="12 AWG")
    assert ohms(gauge) / 2.0 == pytest.approx(5.211, rel=0.005)
    flexible = make("speaker_line", length_m="1000 m", area_mm2="2.5 mm²", copper="IEC 60228 class 5/6")
    assert ohms(flexible) / 2.0 == pytest.approx(7.98, abs=1e-9)


def test_a_measured_loop_stands_in():
    stage = make("speaker_line", loop_ohm="0.5 ohm")
    assert ohms(stage) == 0.5
