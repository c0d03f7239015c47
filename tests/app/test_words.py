"""Numbers as people read them: true minus (U+2212), narrow no-break space (U+202F), nothing invented."""

from __future__ import annotations

import math

import pytest

from app import words

THIN = "\u202f"


@pytest.mark.parametrize(
    ("value", "unit", "said"),
    [
        (4.0, "dBu", f"+4.0{THIN}dBu"),
        (-18.04, "dBFS", f"−18.0{THIN}dBFS"),
        (84.25, "dB SPL", f"84.2{THIN}dB SPL"),
        (-0.04, "dBu", f"0.0{THIN}dBu"),
        (None, "dBu", "–"),
        (-math.inf, "dBu", "–"),
    ],
)
def test_level(value, unit, said):
    assert words.level(value, unit) == said


def test_a_muted_level_says_so():
    assert words.level(None, "dBu", muted=True) == "muted"


@pytest.mark.parametrize(
    ("volts", "said"),
    [
        (0.7745967, "774.6 mV"),
        (15.962, "15.96 V"),
        (1.9e-6, "1.900 µV"),
        (0.99999, "1.000 V"),
        (123.44, "123.4 V"),
        (0.0, "0 V"),
        (None, "–"),
    ],
)
def test_volts(volts, said):
    assert words.volts(volts) == said.replace(" ", THIN)


def test_volts_of_dbu():
    """0 dBu = √0.6 V = 0.7746 V and +4 dBu = 1.228 V (IEC 60268-17 uses 0.775 V; the exact root is common practice)."""
    assert words.volts_of_dbu(0.0) == pytest.approx(0.774597, abs=1e-6)
    assert words.volts_of_dbu(4.0) == pytest.approx(1.22765, abs=1e-5)
    assert words.volts_of_dbu(None) is None


@pytest.mark.parametrize(
    ("call", "said"),
    [
        (words.gain(-8.0), "−8.0 dB"),
        (words.gain(40.0), "+40.0 dB"),
        (words.gain(-math.inf), "off"),
        (words.margin(6.21), "6.2 dB"),
        (words.watts(245.2), "245 W"),
        (words.watts(1.9), "1.90 W"),
        (words.watts(1000.0), "1000 W"),
        (words.watts(12_340.0), "12.3 kW"),
        (words.watts(0.0032), "3.2 mW"),
        (words.hertz(2500.0), "2.5 kHz"),
        (words.hertz(400.0), "400 Hz"),
        (words.share(0.612), "61 %"),
        (words.share(0.001), "under 1 %"),
        (words.quantity(20_000.0, "Ω"), "20.0 kΩ"),
        (words.quantity(150.0, "Ω"), "150 Ω"),
    ],
)
def test_other_amounts(call, said):
    assert call == said.replace(" ", THIN).replace(f"under{THIN}", "under ")


def test_plain_text_for_programs():
    assert words.plain(words.level(-18.0, "dBFS")) == "-18.0 dBFS"
