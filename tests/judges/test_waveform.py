"""A waveform pushed through a chain sample by sample, by numpy and scipy, against the engine's static figures."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import signal

from engine.outcome import Outcome, evaluate
from engine.units import dbu_from_v, v_from_dbu
from tests.scenarios.build import bare, line, project, solved

Wave = NDArray[np.float64]

#: So that white noise up to half of it is 20 Hz … 20 kHz within 0.005 dB.
RATE_HZ = 40_000
SECONDS = 25
SINE_CREST_DB = 10.0 * np.log10(2.0)


def rms_dbu(wave: Wave) -> float:
    return float(dbu_from_v(np.sqrt(np.mean(wave**2))))


def peak_dbu(wave: Wave) -> float:
    """The waveform's peak, sine-scaled: as the rms of the sine that has it."""
    return float(dbu_from_v(np.max(np.abs(wave)) / np.sqrt(2.0)))


def pink(level_dbu: float, seed: int = 1) -> Wave:
    """Pink noise 20 Hz to 20 kHz of an exact level."""
    random = np.random.default_rng(seed)
    size = RATE_HZ * SECONDS
    hertz = np.fft.rfftfreq(size, 1.0 / RATE_HZ)
    spectrum = np.fft.rfft(random.standard_normal(size))
    shape = np.where(hertz >= 20.0, 1.0 / np.sqrt(np.maximum(hertz, 20.0)), 0.0)
    wave = np.fft.irfft(spectrum * shape, size)
    return np.asarray(wave * v_from_dbu(level_dbu) / np.sqrt(np.mean(wave**2)))


def crest_db(wave: Wave) -> float:
    return peak_dbu(wave) - rms_dbu(wave) + SINE_CREST_DB


def amplified(wave: Wave, gain_db: float) -> Wave:
    return np.asarray(wave * 10.0 ** (gain_db / 20.0))


def clipped(wave: Wave, clip_dbu: float) -> Wave:
    """A stage that cannot pass more than the peak of a sine of `clip_dbu`."""
    most = v_from_dbu(clip_dbu) * np.sqrt(2.0)
    return np.clip(wave, -most, most)


def hissing(wave: Wave, noise_dbu: float, seed: int = 2) -> Wave:
    random = np.random.default_rng(seed)
    return np.asarray(wave + random.standard_normal(wave.size) * v_from_dbu(noise_dbu))


WAVE = pink(4.0)
CREST_DB = crest_db(WAVE)


def channel(**settings: float) -> Outcome:
    """The programme into a mixer channel and a bus, with noise behind the channel's equaliser and behind the bus fader."""
    return solved(
        line(level="+4 dBu", crest=f"{CREST_DB:.9f} dB"),
        bare("mixer_channel", "channel", max_v="+22 dBu", noise="-70 dBu unweighted", **settings),
        bare("mix_bus", "bus", max_output_v="+24 dBu", residual="-66 dBu unweighted", fader_db=-10.0),
    )


def test_the_waveform_is_what_the_source_says():
    """The drawn waveform has the level and crest factor that the engine's source is given."""
    source = channel().node("source", "out")
    assert source.level == pytest.approx(rms_dbu(WAVE), abs=1e-6)
    assert source.peak == pytest.approx(peak_dbu(WAVE), abs=1e-6)
    assert 11.0 < CREST_DB < 16.0


@pytest.mark.parametrize(("trim", "fader"), [(0.0, 0.0), (6.0, -3.0), (-12.0, 8.0)])
def test_level_and_peak_through_gains(trim, fader):
    """Rms and peak of the samples behind trim, fader and bus fader: the figures of the nodes, to 1e-6 dB."""
    outcome = channel(trim_db=trim, fader_db=fader)
    wave = amplified(WAVE, trim + fader)
    assert outcome.node("channel", "out").level == pytest.approx(rms_dbu(wave), abs=1e-6)
    assert outcome.node("channel", "out").peak == pytest.approx(peak_dbu(wave), abs=1e-6)
    wave = amplified(wave, -10.0)
    assert outcome.node("bus", "out").level == pytest.approx(rms_dbu(wave), abs=1e-6)
    assert outcome.node("bus", "out").peak == pytest.approx(peak_dbu(wave), abs=1e-6)


def test_noise_ahead_of_a_fader_and_behind_it():
    """White noise added sample by sample where the stages add theirs: the floor at the end within 0.02 dB."""
    outcome = channel(fader_db=5.0)
    silence = np.zeros(WAVE.size)
    wave = amplified(hissing(silence, -70.0), 5.0 - 10.0)
    wave = hissing(wave, -66.0, seed=3)
    assert outcome.node("bus", "out").noise == pytest.approx(rms_dbu(wave), abs=0.02)


def test_a_peak_margin_of_nothing_is_where_the_first_sample_clips():
    """With the peak margin just above 0 no sample is clipped, just below 0 one is."""
    margin = channel().narrowest.margin_db
    for short_db, is_clipped in ((1e-6, False), (-1e-6, True)):
        trim = margin - short_db
        wave = amplified(WAVE, trim)
        assert bool(np.any(wave != clipped(wave, 22.0))) is is_clipped
    assert channel(trim_db=round(margin, 3)).narrowest.margin_db == pytest.approx(
        margin - round(margin, 3), abs=1e-6
    )


def dynamics(**settings: object) -> Outcome:
    return solved(
        line(level="+4 dBu", crest=f"{CREST_DB:.9f} dB"),
        bare("dynamics", "dynamics", noise=None, max_v="+40 dBu", **settings),
    )


def test_a_peak_limiter():
    """Samples held at the threshold's peak: the peak is the threshold, the rms hardly moves (within 0.1 dB)."""
    outcome = dynamics(mode="limiter", detector="peak", threshold_dbu=10.0)
    wave = clipped(WAVE, 10.0)
    assert np.any(wave != WAVE)
    assert outcome.node("dynamics", "out").peak == pytest.approx(peak_dbu(wave), abs=1e-6)
    assert outcome.node("dynamics", "out").level == pytest.approx(rms_dbu(wave), abs=0.1)


def test_an_rms_limiter():
    """A gain that holds the rms at the threshold takes the peaks down by as much."""
    outcome = dynamics(mode="limiter", detector="rms", threshold_dbu=-2.0)
    wave = amplified(WAVE, -2.0 - rms_dbu(WAVE))
    assert outcome.node("dynamics", "out").level == pytest.approx(rms_dbu(wave), abs=1e-6)
    assert outcome.node("dynamics", "out").peak == pytest.approx(peak_dbu(wave), abs=1e-6)


def test_a_compressor():
    """A gain of (threshold − level)(1 − 1/ratio) by the waveform's own rms."""
    outcome = dynamics(mode="compressor", detector="rms", threshold_dbu=-6.0, ratio=4.0, make_up_db=3.0)
    wave = amplified(WAVE, (-6.0 - rms_dbu(WAVE)) * (1.0 - 1.0 / 4.0) + 3.0)
    assert outcome.node("dynamics", "out").level == pytest.approx(rms_dbu(wave), abs=1e-6)
    assert outcome.node("dynamics", "out").peak == pytest.approx(peak_dbu(wave), abs=1e-6)


@pytest.mark.parametrize("corner_hz", [80.0, 1000.0])
def test_a_high_pass(corner_hz):
    """scipy.signal's Butterworth of third order run over the samples: the level behind it within 0.1 dB."""
    outcome = channel(low_cut=1.0)
    stage = outcome.project.stage["channel"].with_fields(low_cut_hz={"text": f"{corner_hz:g} Hz"})
    outcome = evaluate(outcome.project.with_changes({"channel": (outcome.project.stage["channel"], stage)}))
    sections = signal.butter(3, corner_hz, "highpass", fs=RATE_HZ, output="sos")
    wave = signal.sosfilt(sections, WAVE)[RATE_HZ:]
    assert outcome.node("channel", "out").level == pytest.approx(rms_dbu(wave), abs=0.1)


def test_unlike_programmes_add_as_power_and_one_programme_as_voltage():
    """Two different noises into a sum raise the rms by 3.01 dB, the same noise twice by 6.02 dB: as drawn, within 0.05 dB."""
    other = pink(4.0, seed=9)
    assert rms_dbu(WAVE + other) - rms_dbu(WAVE) == pytest.approx(3.01, abs=0.05)
    bus = bare("mix_bus", "bus")
    unlike = evaluate(project([line("one"), line("two"), bus], ["one > bus", "two > bus"]))
    ways = [bare("mixer_channel", name) for name in ("up", "down")]
    alike = evaluate(project([line("one"), *ways, bus], ["one > up", "one > down", "up > bus", "down > bus"]))
    assert unlike.node("bus", "in").level == pytest.approx(rms_dbu(WAVE + other), abs=0.05)
    assert alike.node("bus", "in").level == pytest.approx(rms_dbu(WAVE + WAVE), abs=1e-6)
