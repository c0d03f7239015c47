"""Copper against IEC 60228 and the American wire gauge."""

from __future__ import annotations

import numpy as np
import pytest

from engine.figures import parse
from engine.sections.conductors import COPPER_OHM_MM2_PER_M, loop_ohm, ohm_per_m
from tests.published.tables import table

IEC_60228 = table("iec_60228_plain_copper_ohm_per_km_20c")
CLASSES = {"class_1_2": "IEC 60228 class 1/2", "class_5_6": "IEC 60228 class 5/6"}


@pytest.mark.parametrize("which", CLASSES)
def test_copper_by_cross_section(which):
    """IEC 60228: largest resistance of plain copper at 20 °C by nominal cross-section [confirmed]."""
    for area_mm2, ohm_per_km in IEC_60228[which].items():
        assert 1000.0 * ohm_per_m(float(area_mm2), CLASSES[which]) == pytest.approx(ohm_per_km, rel=1e-9)


def test_copper_by_resistivity_stays_under_the_standard():
    """0.0172 ohm·mm²/m is copper by its nominal area; IEC 60228 allows up to 8 % more for solid or stranded wire."""
    for area_mm2, ohm_per_km in IEC_60228["class_1_2"].items():
        plain = 1000.0 * COPPER_OHM_MM2_PER_M / float(area_mm2)
        assert 0.92 * ohm_per_km <= plain <= ohm_per_km


@pytest.mark.parametrize(("gauge", "ohm_per_km"), [(12, 5.211), (14, 8.286)])
def test_american_wire_gauge(gauge, ohm_per_km):
    """ASTM B258: d = 0.127 mm · 92^((36 − n)/39) [formula confirmed]; resistances of 12 and 14 AWG [memory], at
    the 0.017241 ohm·mm²/m of the international annealed copper standard (IEC 60028), 0.3 % over 0.0172."""
    diameter_mm = 0.127 * 92.0 ** ((36 - gauge) / 39.0)
    area_mm2 = parse(f"{gauge} AWG", "area").amount
    assert area_mm2 == pytest.approx(np.pi / 4.0 * diameter_mm**2, rel=1e-6)
    assert 17.241 / area_mm2 == pytest.approx(ohm_per_km, rel=0.001)
    assert 1000.0 * ohm_per_m(area_mm2, "0.0172 ohm mm²/m") == pytest.approx(ohm_per_km, rel=0.004)


def test_a_line_goes_there_and_back():
    """Definition: 60 m of 2.5 mm² are 120 m of conductor, 0.826 ohm at 0.0172 ohm·mm²/m."""
    assert loop_ohm(60.0, 2.5) == pytest.approx(0.8256, abs=5e-5)
