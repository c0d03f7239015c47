"""Test signals, measured back by other means than they were made with."""

from __future__ import annotations

import numpy as np
import pytest
import soundfile
from scipy import signal

from engine.bands import BAND_EDGE_HZ
from engine.signals import SignalError, TestSignal, make_signal, write_signal
from engine.spectra import band_shares


def level_dbfs(samples) -> float:
    """rms re a full-scale sine (AES17: 0 dBFS is its rms)."""
    return float(20.0 * np.log10(np.sqrt(np.mean(samples**2)) * np.sqrt(2.0)))


@pytest.mark.parametrize("kind", ["sine", "pink", "speech"])
@pytest.mark.parametrize("bits", [16, 24, 32])
@pytest.mark.parametrize("rate_hz", [44100, 96000])
def test_what_is_written_stands_at_its_level(tmp_path, kind, bits, rate_hz):
    """Level within 0.02 dB in every format."""
    path = tmp_path / "t.wav"
    write_signal(path, TestSignal(kind, -20.0, 4.0, rate_hz=rate_hz, bits=bits))
    samples, rate = soundfile.read(path)
    assert rate == rate_hz
    assert soundfile.info(path).subtype == {16: "PCM_16", 24: "PCM_24", 32: "FLOAT"}[bits]
    assert level_dbfs(samples) == pytest.approx(-20.0, abs=0.02)


@pytest.mark.parametrize("crest_db", [6.0, 9.0, 12.0, 14.0])
@pytest.mark.parametrize("kind", ["pink", "speech"])
def test_noise_has_the_stated_crest_factor(kind, crest_db):
    samples = make_signal(TestSignal(kind, -20.0, 10.0, crest_db=crest_db))
    crest = 20.0 * np.log10(np.abs(samples).max() / np.sqrt(np.mean(samples**2)))
    assert crest == pytest.approx(crest_db, abs=0.05)


def test_sine_crest_is_3_01_db():
    samples = make_signal(TestSignal("sine", -6.0, 1.0))
    assert 20.0 * np.log10(np.abs(samples).max()) - level_dbfs(samples) == pytest.approx(0.0, abs=0.01)


def bands_by_scipy(samples, rate_hz: int):
    """Band powers by scipy's Welch estimate with another segment length and window than the engine's."""
    frequency, density = signal.welch(samples, rate_hz, window="blackmanharris", nperseg=32768)
    running = np.concatenate(([0.0], np.cumsum(density)))
    edges = np.concatenate((frequency - frequency[1] / 2, [frequency[-1] + frequency[1] / 2]))
    powers = np.diff(np.interp(BAND_EDGE_HZ, edges, running))
    return powers / powers.sum()


def test_pink_noise_has_equal_power_in_every_band():
    """Bands within 0.3 dB of equal shares per log-width, from 50 Hz up where a minute of noise is steady enough."""
    found = bands_by_scipy(make_signal(TestSignal("pink", -20.0, 60.0, crest_db=12.0)), 48000)
    width = np.log(BAND_EDGE_HZ[1:] / BAND_EDGE_HZ[:-1])
    expected = width / width.sum()
    off = 10.0 * np.log10(found / expected)
    assert np.abs(off[4:]).max() < 0.3


def test_speech_noise_has_the_shape_of_ansi_s3_5():
    """ANSI S3.5-1997 table 3, normal vocal effort: bands within 0.3 dB where they hold power."""
    found = bands_by_scipy(make_signal(TestSignal("speech", -20.0, 60.0)), 48000)
    expected = band_shares("speech")
    loud = expected > 1e-3
    off = 10.0 * np.log10(found[loud] / expected[loud])
    assert np.abs(off).max() < 0.3


def test_nothing_stands_outside_the_audible_band():
    samples = make_signal(TestSignal("pink", -20.0, 20.0, rate_hz=96000, crest_db=14.0))
    frequency, density = signal.welch(samples, 96000, nperseg=16384)
    inside = density[(frequency > 100) & (frequency < 15000)].sum()
    assert density[frequency > 22000].sum() / inside < 1e-4


def test_the_same_seed_makes_the_same_signal():
    wanted = TestSignal("pink", -20.0, 1.0, seed=7)
    assert np.array_equal(make_signal(wanted), make_signal(wanted))


@pytest.mark.parametrize(
    ("wanted", "says"),
    [
        (TestSignal("square", -20.0, 1.0), "sine, pink, speech"),
        (TestSignal("sine", 1.0, 1.0), "lower the level by 1.0 dB"),
        (TestSignal("pink", -6.0, 1.0, crest_db=12.0), "lower the level"),
        (TestSignal("sine", -20.0, 1.0, rate_hz=8000), "44100"),
        (TestSignal("sine", -20.0, 1.0, bits=12), "16, 24 or 32"),
        (TestSignal("sine", -20.0, 1.0, frequency_hz=30000.0), "half the sample rate"),
        (TestSignal("sine", -20.0, 0.0), "0.1 s"),
        (TestSignal("pink", -20.0, 1.0, crest_db=2.0), "from 6"),
    ],
)
def test_what_cannot_be_made_is_said(wanted, says):
    with pytest.raises(SignalError, match=says):
        make_signal(wanted)
