"""Level units, alignment levels and loads against their definitions."""

from __future__ import annotations

import numpy as np
import pytest

from engine import units
from engine.figures import parse


def test_dbu():
    """0 dBu is the voltage of 1 mW in 600 ohm, 0.774597 V (IEC 60268-2 / common practice) [confirmed]."""
    assert units.v_from_dbu(0.0) == pytest.approx(np.sqrt(1e-3 * 600.0), rel=1e-12)
    assert units.v_from_dbu(0.0) == pytest.approx(0.774597, abs=5e-7)


@pytest.mark.parametrize(("dbu", "volts"), [(4.0, 1.2277), (24.0, 12.277), (0.0, 0.7746), (22.218, 10.0)])
def test_usual_levels_in_volts(dbu, volts):
    """+4 dBu = 1.2277 V, +24 dBu = 12.277 V (definition) [confirmed]."""
    assert units.v_from_dbu(dbu) == pytest.approx(volts, rel=1e-4)
    assert parse(f"{dbu} dBu", "voltage").amount == pytest.approx(volts, rel=1e-4)
    assert units.dbu_from_v(volts) == pytest.approx(dbu, abs=1e-3)


def test_consumer_and_professional_line_level():
    """−10 dBV = −7.78 dBu, 11.78 dB under +4 dBu (definition) [confirmed]."""
    consumer = units.dbu_from_v(units.v_from_dbv(-10.0))
    assert consumer == pytest.approx(-7.78, abs=0.005)
    assert 4.0 - consumer == pytest.approx(11.78, abs=0.005)
    assert parse("-10 dBV", "voltage").amount == pytest.approx(units.v_from_dbu(consumer), rel=1e-9)


def test_sound_pressure():
    """ISO 1683: 20 µPa is 0 dB, so 1 Pa is 93.98 dB SPL, "94" on data sheets."""
    assert units.spl_from_pa2(1.0) == pytest.approx(93.979, abs=5e-4)
    assert units.pa2_from_spl(94.0) == pytest.approx(1.0, rel=0.005)


def test_sine_crest():
    """A sine's peak stands 3.01 dB over its rms (definition) [confirmed]."""
    assert pytest.approx(3.0103, abs=5e-5) == units.SINE_CREST_DB


@pytest.mark.parametrize(
    ("text", "full_scale_dbu"),
    [
        ("-18 dBFS = 0 dBu", 18.0),
        ("-20 dBFS = +4 dBu", 24.0),
    ],
    ids=["EBU R 68", "SMPTE RP 155"],
)
def test_alignment_levels(text, full_scale_dbu):
    """EBU R 68: −18 dBFS at 0 dBu, full scale +18 dBu. SMPTE RP 155: −20 dBFS at +4 dBu, full scale +24 dBu [confirmed].

    0 dBFS is the rms of a full-scale sine (AES17) [confirmed]; the two recommendations are 6 dB apart.
    """
    assert units.dbu_from_v(parse(text, "full_scale").amount) == pytest.approx(full_scale_dbu, abs=1e-9)


@pytest.mark.parametrize(
    ("impedance_ohm", "more_db"), [(4.0, 3.0103), (8.0, 0.0), (16.0, -3.0103), (2.0, 6.0206)]
)
def test_one_watt_against_2_83_volts(impedance_ohm, more_db):
    """2.83 V gives 10 log(8/Z) dB more than 1 W (IEC 60268-5 practice): 4 ohm +3.01 dB [confirmed]."""
    one_watt_v = np.sqrt(1.0 * impedance_ohm)
    assert units.db_from_ratio(np.sqrt(8.0) / one_watt_v) == pytest.approx(more_db, abs=5e-5)
