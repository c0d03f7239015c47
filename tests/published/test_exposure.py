"""Permitted exposure against the tables of NIOSH and OSHA, and the limits for venues."""

from __future__ import annotations

import pytest

from engine.exposure import CRITERIA, HOUR_S, permitted_level_dba, permitted_s
from tests.published.tables import table

BY_NAME = {criterion.name: criterion for criterion in CRITERIA}


@pytest.mark.parametrize(
    ("level", "hours"), sorted(table("niosh_98_126_hours").items(), key=lambda line: float(line[0]))
)
def test_niosh(level, hours):
    """NIOSH publication 98-126: 85 dB(A) for 8 h, halved every 3 dB [confirmed]."""
    found = permitted_s(float(level), BY_NAME["NIOSH 1998"])
    assert found == pytest.approx(hours * HOUR_S, rel=1e-9)


@pytest.mark.parametrize(
    ("level", "hours"), sorted(table("osha_1910_95_table_g16_hours").items(), key=lambda line: float(line[0]))
)
def test_osha(level, hours):
    """29 CFR 1910.95 table G-16: 90 dB(A) for 8 h, halved every 5 dB; printed to a tenth or a quarter of an hour,
    so 92 dB(A) stands as 6 h for 6.06 h and 97 dB(A) as 3 h for 3.03 h [confirmed]."""
    found = permitted_s(float(level), BY_NAME["OSHA 1910.95"])
    assert found == pytest.approx(hours * HOUR_S, rel=0.015)


def test_venue_limits():
    """WHO global standard for safe listening venues (2022): 100 dB LAeq,15 min; DIN 15905-5: 99 dB LAr,30 min [confirmed]."""
    assert permitted_level_dba(15 * 60.0, BY_NAME["WHO venues 2022"]) == pytest.approx(100.0)
    assert permitted_level_dba(30 * 60.0, BY_NAME["DIN 15905-5"]) == pytest.approx(99.0)


def test_level_and_time_are_inverse():
    """Definition: the level permitted for the time permitted at a level is that level."""
    for criterion in CRITERIA:
        assert permitted_level_dba(permitted_s(103.0, criterion), criterion) == pytest.approx(103.0)
