"""What data sheets write, and what comes of it."""

from __future__ import annotations

import math
import string

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from engine.figures import (
    QUANTITIES,
    Figure,
    FigureError,
    echo,
    figure_interval,
    format_amount,
    format_db,
    parse,
)

W = "weighting"
R = "reference"

# text, quantity, amount in base units, reference, weighting, conditions, what is missing
TABLE = [
    ("1.4 V", "voltage", 1.4, None, None, {}, ()),
    ("1,4 V", "voltage", 1.4, None, None, {}, ()),
    ("1.4v", "voltage", 1.4, None, None, {}, ()),
    ("775mV", "voltage", 0.775, None, None, {}, ()),
    ("775 mv", "voltage", 0.775, None, None, {}, ()),
    ("200 uV", "voltage", 2e-4, None, None, {}, ()),
    ("200 µV", "voltage", 2e-4, None, None, {}, ()),
    ("200 μV", "voltage", 2e-4, None, None, {}, ()),
    ("+4 dBu", "voltage", 1.227653, None, None, {}, ()),
    ("4 dbu", "voltage", 1.227653, None, None, {}, ()),
    ("\u22124 dBu", "voltage", 0.4887373, None, None, {}, ()),
    ("-10dBV", "voltage", 0.316228, None, None, {}, ()),
    ("−10\u202fdBV", "voltage", 0.316228, None, None, {}, ()),
    ("+24 dBm", "voltage", 12.27653, None, None, {}, ()),
    ("20 Vpp", "voltage", 7.071068, None, None, {}, ()),
    ("10 Vpk", "voltage", 7.071068, None, None, {}, ()),
    ("250 W @ 8 ohm", "voltage", 44.72136, None, None, {"load_ohm": 8.0}, ()),
    ("x40", "gain", 32.0412, None, None, {}, ()),
    ("×40", "gain", 32.0412, None, None, {}, ()),
    ("40 x", "gain", 32.0412, None, None, {}, ()),
    ("40 V/V", "gain", 32.0412, None, None, {}, ()),
    ("26 dB", "gain", 26.0, None, None, {}, ()),
    ("26dB", "gain", 26.0, None, None, {}, ()),
    ("-6", "gain", -6.0, None, None, {}, ()),
    ("20 dB", "loss", 20.0, None, None, {}, ()),
    ("400 W @ 8 ohm", "power_at_load", 400.0, None, None, {"load_ohm": 8.0}, ()),
    ("400w8", "power_at_load", 400.0, None, None, {"load_ohm": 8.0}, ()),
    ("400 W/8 Ω", "power_at_load", 400.0, None, None, {"load_ohm": 8.0}, ()),
    ("1 kW @ 4 ohm", "power_at_load", 1000.0, None, None, {"load_ohm": 4.0}, ()),
    ("1,2 kW into 4 ohms", "power_at_load", 1200.0, None, None, {"load_ohm": 4.0}, ()),
    ("63.2 V @ 8 ohm", "power_at_load", 499.28, None, None, {"load_ohm": 8.0}, ()),
    ("400 W", "power_at_load", 400.0, None, None, {}, ("load_ohm",)),
    ("-54.5 dBV/Pa", "mic_sensitivity", 1.883649e-3, "1 Pa", None, {}, ()),
    ("2 mV/Pa", "mic_sensitivity", 2e-3, "1 Pa", None, {}, ()),
    ("-72 dB re 1 V/µbar", "mic_sensitivity", 2.511886e-3, "1 µbar", None, {}, ()),
    ("-72 dB (0 dB = 1 V/ubar)", "mic_sensitivity", 2.511886e-3, "1 µbar", None, {}, ()),
    ("-54.5 dB", "mic_sensitivity", 1.883649e-3, None, None, {}, (R,)),
    ("105 dB(A) re rated", "noise", 105.0, "rated", "A", {}, ()),
    ("105 dB (A) re rated power", "noise", 105.0, "rated", "A", {}, ()),
    ("105 dBA below rated output", "noise", 105.0, "rated", "A", {}, ()),
    ("88 dB re 1 W unweighted", "noise", 88.0, "1 W", "flat", {}, ()),
    ("S/N 100 dB re +4 dBu, 20-20k", "noise", 100.0, "stated", "flat", {"reference_v": 1.227653}, ()),
    ("102 dB(A) re 800 W/8 ohm", "noise", 102.0, "stated", "A", {"reference_v": 80.0}, ()),
    ("80 dB", "noise", 80.0, None, None, {}, (R, W)),
    ("-86 dBu", "noise", 3.88218e-5, "level", None, {}, (W,)),
    ("-86 dBu(A)", "noise", 3.88218e-5, "level", "A", {}, ()),
    ("-72 dBu 20-20k", "noise", 1.94570e-4, "level", "flat", {}, ()),
    ("0.2 mV unweighted", "noise", 2e-4, "level", "flat", {}, ()),
    ("110 dB re max unweighted", "noise", 110.0, "max", "flat", {}, ()),
    ("90 dB re nominal (A)", "noise", 90.0, "nominal", "A", {}, ()),
    ("-127 dBu", "ein", 3.45999e-7, None, None, {}, (W, "source_ohm")),
    ("-128 dBu(A) 150 ohm", "ein", 3.08372e-7, None, "A", {"source_ohm": 150.0}, ()),
    ("-129 dBu @ 200 ohm 20-20k", "ein", 2.74837e-7, None, "flat", {"source_ohm": 200.0}, ()),
    ("-127 dBu, 150 ohm, unweighted", "ein", 3.45999e-7, None, "flat", {"source_ohm": 150.0}, ()),
    ("-128 dBu unweighted 150 ohm at 40 dB gain", "ein", 3.08372e-7, None, "flat", {"source_ohm": 150.0, "gain_db": 40.0}, ()),
    ("-130 dBu(A) shorted", "ein", 2.44949e-7, None, "A", {"source_ohm": 0.0}, ()),
    ("110 dB(A)", "dynamic_range", 110.0, None, "A", {}, ()),
    ("110 dB", "dynamic_range", 110.0, None, None, {}, (W,)),
    ("+24 dBu", "full_scale", 12.27653, None, None, {}, ()),
    ("0 dBFS = +24 dBu", "full_scale", 12.27653, None, None, {}, ()),
    ("-18 dBFS = 0 dBu", "full_scale", 6.152839, None, None, {}, ()),
    ("-20 dBFS @ +4 dBu", "full_scale", 12.27653, None, None, {}, ()),
    ("+4 dBu = -20 dBFS", "full_scale", 12.27653, None, None, {}, ()),
    ("EBU R 68", "full_scale", 6.152839, "EBU R 68", None, {}, ()),
    ("SMPTE RP 155", "full_scale", 12.27653, "SMPTE RP 155", None, {}, ()),
    ("-20 dBFS", "dbfs", -20.0, None, None, {}, ()),
    ("20 k", "impedance", 20e3, None, None, {}, ()),
    ("10 kΩ", "impedance", 10e3, None, None, {}, ()),
    ("1k8", "impedance", 1800.0, None, None, {}, ()),
    ("2M2", "impedance", 2.2e6, None, None, {}, ()),
    ("600", "impedance", 600.0, None, None, {}, ()),
    ("4:1", "compression_ratio", 4.0, None, None, {}, ()),
    ("inf:1", "compression_ratio", math.inf, None, None, {}, ()),
    ("12:1", "ratio", 12.0, None, None, {}, ()),
    ("1:10", "ratio", 0.1, None, None, {}, ()),
    ("+19 dBu @ 20 Hz", "voltage_at_frequency", 6.903604, None, None, {"frequency_hz": 20.0}, ()),
    ("98 dB 1W/1m", "loudspeaker_sensitivity", 98.0, "1 W", None, {}, ()),
    ("97 dB/W/m", "loudspeaker_sensitivity", 97.0, "1 W", None, {}, ()),
    ("99 dB @ 2.83 V/1 m", "loudspeaker_sensitivity", 99.0, "2.83 V", None, {}, ()),
    ("99 dB SPL 2,83 V/1 m", "loudspeaker_sensitivity", 99.0, "2.83 V", None, {}, ()),
    ("97 dB", "loudspeaker_sensitivity", 97.0, None, None, {}, (R,)),
    ("14 AWG", "area", 2.08091, None, None, {}, ()),
    ("AWG 12", "area", 3.30877, None, None, {}, ()),
    ("2.5 mm2", "area", 2.5, None, None, {}, ()),
    ("2,5 mm²", "area", 2.5, None, None, {}, ()),
    ("19.5 ohm/km loop", "resistance_per_length", 0.0195, "loop", None, {}, ()),
    ("8 ohm/km", "resistance_per_length", 0.008, None, None, {}, (R,)),
    ("100 pF/m", "capacitance_per_length", 1e-10, None, None, {}, ()),
    ("30 pF/ft", "capacitance_per_length", 9.84252e-11, None, None, {}, ()),
    ("NC-25", "ambient", 25.0, "NC", None, {}, ()),
    ("NR 30", "ambient", 30.0, "NR", None, {}, ()),
    ("32 dB(A)", "ambient", 32.0, "A", "A", {}, ()),
    ("32 dBA", "ambient", 32.0, "A", "A", {}, ()),
    ("18 dB(A)", "self_noise", 18.0, None, "A", {}, ()),
    ("S/N 76 dB(A)", "self_noise", 18.0, None, "A", {}, ()),
    ("94 dB SPL", "spl", 94.0, None, None, {}, ()),
    ("1 Pa", "spl", 93.9794, None, "flat", {}, ()),
    ("DI 9 dB", "directivity", 7.943282, None, None, {}, ()),
    ("Q 8", "directivity", 8.0, None, None, {}, ()),
    ("5'6\"", "length", 1.6764, None, None, {}, ()),
    ("40 ft", "length", 12.192, None, None, {}, ()),
    ("68 F", "temperature", 20.0, None, None, {}, ()),
    ("12 dB", "crest_factor", 12.0, None, None, {}, ()),
    ("4:1", "crest_factor", 12.0412, None, None, {}, ()),
    ("1 kHz", "frequency", 1000.0, None, None, {}, ()),
    ("10 W @ 70.7 V", "tap", 10.0, None, None, {"line_v": 70.7}, ()),
    ("1.5 h", "time", 5400.0, None, None, {}, ()),
    ("50 %", "percent", 50.0, None, None, {}, ()),
]  # fmt: skip

# text, quantity, a part of the reason
REFUSED = [
    ("", "voltage", "empty"),
    ("   ", "gain", "empty"),
    ("4", "voltage", "no unit"),
    ("5 MV", "voltage", "does not fit"),
    ("nan V", "voltage", "no number"),
    ("NaN", "gain", "no number"),
    ("inf dB", "gain", "no number"),
    ("1e999 V", "voltage", "finite"),
    ("hello", "gain", "no number"),
    ("0 V", "voltage", "above 0"),
    ("-1.4 V", "voltage", "above 0"),
    ("x0", "gain", "above 0"),
    ("x-4", "gain", "above 0"),
    ("-20 dB", "loss", "at least 0"),
    ("500 dB", "gain", "at most 200"),
    ("0 W @ 8 ohm", "power_at_load", "above 0"),
    ("400 W @ 0 ohm", "power_at_load", "above 0"),
    ("400 dBu", "power_at_load", "does not fit"),
    ("-3 m", "length", "above 0"),
    ("0 m", "length", "above 0"),
    ("3 furlongs", "length", "does not fit"),
    ("0 ohm", "impedance", "above 0"),
    ("8 V", "impedance", "does not fit"),
    ("105 dB(A) re lunch", "noise", "unknown"),
    ("110 V", "dynamic_range", "does not fit"),
    ("-5 dB", "dynamic_range", "at least 0"),
    ("0.5:1", "compression_ratio", "at least 1"),
    ("12:0", "ratio", "above 0"),
    ("-5 Hz", "frequency", "above 0"),
    ("1.2.3 V", "voltage", "no unit"),
    ("1,000.5 V", "voltage", "no unit"),
    ("DI 9", "directivity", "without dB"),
    ("250 dB", "spl", "at most 200"),
    ("+4 dBu or so", "voltage", "says nothing"),
    ("about 4 dBu", "voltage", "begins with"),
    ("x" * 300, "gain", "characters long"),
    ("-300 °C", "temperature", "at least -60"),
    ("98 dB 5 W", "loudspeaker_sensitivity", "says nothing"),
]


@pytest.mark.parametrize(("text", "quantity", "amount", "reference", "weighting", "at", "missing"), TABLE)
def test_reads_what_sheets_write(text, quantity, amount, reference, weighting, at, missing):
    found = parse(text, quantity)
    assert found.amount == pytest.approx(amount, rel=2e-6)
    assert (found.reference, found.weighting, found.missing) == (reference, weighting, missing)
    assert dict(found.at) == pytest.approx(at, rel=2e-6)


@pytest.mark.parametrize(("text", "quantity", "reason"), REFUSED)
def test_refuses_with_a_reason_and_an_example(text, quantity, reason):
    with pytest.raises(FigureError) as refused:
        parse(text, quantity)
    assert reason in str(refused.value)
    assert QUANTITIES[quantity].example in str(refused.value)


@pytest.mark.parametrize(
    ("text", "quantity", "low", "high"),
    [
        ("98 ±2 dB", "spl", 96.0, 100.0),
        ("150 ohm ±5 %", "impedance", 142.5, 157.5),
        ("150 ±20 ohm", "impedance", 130.0, 170.0),
        ("50...200 ohm", "impedance", 50.0, 200.0),
        ("50 to 200 ohm", "impedance", 50.0, 200.0),
        ("0.3..2 V", "voltage", 0.3, 2.0),
        ("1 V ±1 dB", "voltage", 0.891251, 1.122018),
    ],
)
def test_a_typed_interval_is_kept(text, quantity, low, high):
    found = parse(text, quantity)
    assert (found.low, found.high) == pytest.approx((low, high), rel=1e-5)


@pytest.mark.parametrize(
    ("text", "tolerance", "quantity", "low", "high"),
    [
        ("150 ohm", "5 %", "impedance", 142.5, 157.5),
        ("98 dB", "±1 dB", "spl", 97.0, 99.0),
        ("1 V", "±1 dB", "voltage", 0.891251, 1.122018),
        ("150 ohm", "±20 ohm", "impedance", 130.0, 170.0),
        ("105 dB(A) re rated", "2 dB", "noise", 103.0, 107.0),
        ("12 m", None, "length", 12.0, 12.0),
    ],
)
def test_tolerance_widens_the_interval(text, tolerance, quantity, low, high):
    found = figure_interval(Figure(text=text, tolerance=tolerance), quantity)
    assert (found[0], found[2]) == pytest.approx((low, high), rel=1e-5)


def test_a_tolerance_that_cannot_be_read_is_refused():
    with pytest.raises(ValueError, match="±1 dB"):
        Figure(text="1 V", tolerance="a bit")


@pytest.mark.parametrize(
    ("text", "quantity", "says"),
    [
        ("1.4 V", "voltage", "+5.14\u202fdBu"),
        ("+4 dBu", "voltage", "1.228\u202fV"),
        ("x40", "gain", "32.04\u202fdB"),
        ("400 W @ 8 ohm", "power_at_load", "56.57\u202fV"),
        ("-54.5 dBV/Pa", "mic_sensitivity", "1.884\u202fmV/Pa"),
        ("2 mV/Pa", "mic_sensitivity", "−53.98\u202fdBV/Pa"),
        ("14 AWG", "area", "2.081\u202fmm²"),
        ("-86 dBu(A)", "noise", "38.82\u202fµV, flat −84.0\u202fdBu"),
        ("80 dB", "noise", "re what?, A or flat?"),
    ],
)
def test_the_converted_value_stands_beside(text, quantity, says):
    assert echo(parse(text, quantity)) == says


def test_unusual_values_are_remarked_on_not_refused():
    assert parse("300 mV/Pa", "mic_sensitivity").notes
    assert not parse("10 mV/Pa", "mic_sensitivity").notes


@pytest.mark.parametrize(
    ("value", "unit", "says"),
    [
        (-8.0, "dB", "−8.0\u202fdB"),
        (4.0, "dBu", "+4.0\u202fdBu"),
        (-math.inf, "dB", "−∞\u202fdB"),
        (-0.04, "dBu", "0.0\u202fdBu"),
    ],
)
def test_levels_are_said_with_a_true_minus(value, unit, says):
    assert format_db(value, unit) == says


LETTERS = string.digits + string.ascii_letters + " .,+-−±µΩ()/@:%°²×∞'\"…\u202f"


@settings(max_examples=1500, deadline=None)
@given(st.text(alphabet=LETTERS, max_size=40) | st.text(max_size=30), st.sampled_from(sorted(QUANTITIES)))
def test_nothing_but_a_figure_error_is_ever_raised(text, quantity):
    try:
        found = parse(text, quantity)
    except FigureError:
        return
    echo(found)


SAMPLES = sorted({(text, quantity) for text, quantity, *_ in TABLE})


@settings(max_examples=1500, deadline=None)
@given(st.sampled_from(SAMPLES), st.data())
def test_a_spoilt_figure_is_read_or_refused(sample, data):
    """One character of a good figure replaced, dropped or doubled."""
    text, quantity = sample
    place = data.draw(st.integers(0, len(text) - 1))
    spoilt = text[:place] + data.draw(st.sampled_from(["", text[place] * 2, *LETTERS])) + text[place + 1 :]
    try:
        found = parse(spoilt, quantity)
    except FigureError:
        return
    echo(found)


@settings(max_examples=300, deadline=None)
@given(st.sampled_from(sorted(QUANTITIES)), st.floats(1.001, 150.0))
def test_what_is_said_is_read_back(quantity, amount):
    """To the four digits that are said: 1e-3 relative."""
    if not QUANTITIES[quantity].low < amount < QUANTITIES[quantity].high:
        return
    said = format_amount(amount, quantity)
    assert parse(said, quantity).amount == pytest.approx(amount, rel=1e-3)
