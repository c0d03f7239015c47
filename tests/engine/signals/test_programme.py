"""Recordings read back: analytic signals, synthetic true peaks, damaged and empty files."""

from __future__ import annotations

import numpy as np
import pytest
import soundfile

from engine.signals import SignalError, TestSignal, read_programme, write_signal

RATE = 48000


def recording(tmp_path, samples, rate: int = RATE, name: str = "r.wav", subtype: str = "FLOAT"):
    path = tmp_path / name
    soundfile.write(path, samples, rate, subtype=subtype)
    return path


def test_a_full_scale_sine_reads_0_dbfs(tmp_path):
    """AES17: 0 dBFS is the rms of a full-scale sine; its crest factor is 3.01 dB."""
    t = np.arange(5 * RATE) / RATE
    found = read_programme(recording(tmp_path, np.sin(2 * np.pi * 997.0 * t)))
    assert found.rms_dbfs == pytest.approx(0.0, abs=0.002)
    assert found.sample_peak_dbfs == pytest.approx(0.0, abs=0.002)
    assert found.crest_db == pytest.approx(3.01, abs=0.01)
    assert int(np.argmax(found.band_shares)) == 17


def test_a_square_wave_reads_3_db_over(tmp_path):
    """A full-scale square wave is +3.01 dBFS with a crest factor of 0 dB (AES17 convention)."""
    samples = np.where(np.arange(RATE * 2) // 24 % 2, 1.0, -1.0)
    found = read_programme(recording(tmp_path, samples))
    assert found.rms_dbfs == pytest.approx(3.01, abs=0.005)
    assert found.crest_db == pytest.approx(0.0, abs=0.01)


@pytest.mark.parametrize(
    ("divisor", "degrees", "amplitude", "true_peak_db"),
    # Sines at fs/4, fs/6, fs/8 with phases that hide their peaks between samples, in the manner of EBU Tech 3341
    # (cases 15 to 19, from memory; its tolerance is +0.2 / -0.4 dB).
    [
        (4, 0.0, 0.5, -6.02),
        (4, 45.0, 0.5, -6.02),
        (6, 60.0, 0.5, -6.02),
        (8, 67.5, 0.5, -6.02),
        (4, 45.0, 1.41, 2.98),
    ],
)
def test_true_peaks_between_samples_are_found(tmp_path, divisor, degrees, amplitude, true_peak_db):
    n = np.arange(RATE)
    fade = np.minimum(1.0, np.minimum(n, n[::-1]) / 2400.0)
    samples = amplitude * fade * np.sin(2 * np.pi * n / divisor + np.radians(degrees))
    found = read_programme(recording(tmp_path, samples))
    assert -0.4 <= found.true_peak_dbfs - true_peak_db <= 0.2
    assert found.true_peak_dbfs >= found.sample_peak_dbfs


def test_what_was_made_is_read(tmp_path):
    path = tmp_path / "pink.wav"
    write_signal(path, TestSignal("pink", -20.0, 30.0, crest_db=12.0))
    found = read_programme(path)
    assert found.rms_dbfs == pytest.approx(-20.0, abs=0.02)
    assert found.crest_db == pytest.approx(12.0, abs=0.05)
    assert found.band_shares.sum() == pytest.approx(1.0, abs=1e-9)


def test_the_result_does_not_depend_on_the_blocks(tmp_path):
    """Independent of block size to 1e-9."""
    random = np.random.default_rng(3)
    path = recording(tmp_path, 0.1 * random.normal(size=(RATE * 3 + 123, 2)))
    one, two = read_programme(path), read_programme(path, block=997)
    assert one.rms_dbfs == pytest.approx(two.rms_dbfs, abs=1e-9)
    assert one.true_peak_dbfs == pytest.approx(two.true_peak_dbfs, abs=1e-9)
    np.testing.assert_allclose(one.band_shares, two.band_shares, atol=1e-9)
    np.testing.assert_allclose(one.frame_rms_dbfs, two.frame_rms_dbfs, atol=1e-9)


def test_loud_moments_are_counted_against_a_ceiling(tmp_path):
    samples = np.full(RATE * 3, 0.01)
    samples[RATE : RATE + RATE // 2] = 0.9
    samples[RATE * 2 : RATE * 2 + RATE // 5] = 0.9
    found = read_programme(recording(tmp_path, samples))
    runs, seconds = found.over(-6.0)
    assert (runs, seconds) == (2, pytest.approx(0.7, abs=1e-6))
    assert found.percentiles_dbfs[50] < found.percentiles_dbfs[99]


def test_silence_is_silence(tmp_path):
    found = read_programme(recording(tmp_path, np.zeros(RATE)))
    assert found.rms_dbfs == -np.inf
    assert found.band_shares.sum() == 0.0
    assert found.crest_db == 0.0


def test_sixty_four_channels_and_flac(tmp_path):
    t = np.arange(RATE) / RATE
    tone = 0.5 * np.sin(2 * np.pi * 997.0 * t)
    many = read_programme(recording(tmp_path, np.repeat(tone[:, None], 64, axis=1)))
    assert many.channels == 64
    assert many.rms_dbfs == pytest.approx(-6.02, abs=0.01)
    flac = read_programme(recording(tmp_path, tone, name="r.flac", subtype="PCM_24"))
    assert flac.rms_dbfs == pytest.approx(-6.02, abs=0.01)


@pytest.mark.parametrize("content", [b"", b"RIFF\x00\x00\x00\x00WAVE", b"no sound at all" * 100])
def test_a_file_that_is_no_recording_is_said(tmp_path, content):
    path = tmp_path / "broken.wav"
    path.write_bytes(content)
    with pytest.raises(SignalError, match=r"broken\.wav"):
        read_programme(path)


def test_an_empty_recording_and_nonsense_values_are_said(tmp_path):
    with pytest.raises(SignalError, match="no sound"):
        read_programme(recording(tmp_path, np.zeros(0)))
    bad = np.zeros(RATE)
    bad[1000] = np.nan
    with pytest.raises(SignalError, match="no numbers"):
        read_programme(recording(tmp_path, bad))


def test_reading_can_be_stopped(tmp_path):
    path = recording(tmp_path, np.zeros(RATE * 20))
    seen = []

    def stop(share: float) -> bool:
        seen.append(share)
        return len(seen) < 2

    assert read_programme(path, stop, block=RATE) is None
    assert seen == pytest.approx([0.05, 0.1])
