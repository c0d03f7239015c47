"""Power amplifiers: one relation of three figures, attenuator, noise by reference, ratings by load, bridging."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import NO_LOAD, SILENT, end, line, make, row, solved

STIFF = {"damping_factor": None, "z_in_ohm": NO_LOAD, "noise": SILENT}


def amp(**fields):
    return make("power_amplifier", **{**STIFF, **fields})


def test_sensitivity_and_power_make_the_gain():
    """S01: 1.0 V for 500 W in 8 ohm: 63.25 V, 36.02 dB, clips at +2.22 dBu in (C14, C15)."""
    stage = amp(rated_power_w=["500 W @ 8 ohm"], gain_db=None, sensitivity_v="1.0 V", max_input_v=None)
    out = solved(line("-20 dBu"), stage, make("loudspeaker", z_ohm="8 ohm"))
    assert out.node("power_amplifier", "out").level + 20.0 == pytest.approx(36.02, abs=0.005)
    assert out.node("power_amplifier", "in").ceiling - (-20.0) == pytest.approx(
        22.22 - (12.0 - 3.0103), abs=0.005
    )


def test_gain_and_sensitivity_make_the_power():
    stage = amp(rated_power_w=[], gain_db="26 dB", sensitivity_v="1.4 V")
    node = solved(line("0 dBu"), stage, end()).node("power_amplifier", "out")
    assert node.clip == pytest.approx(26.0 + 5.14, abs=0.005)  # 1.4 V is +5.14 dBu


def test_turning_down_leaves_its_own_noise():
    """S01: 0.448 mV of its own (103 dB re rated) stays while the level falls 20 dB."""
    for position in (0.0, -20.0):
        stage = amp(
            rated_power_w=["500 W @ 8 ohm"], noise="103 dB unweighted re rated", attenuator_db=position
        )
        node = solved(line("-20 dBu", noise="-200 dBu unweighted"), stage, end()).node(
            "power_amplifier", "out"
        )
        assert 0.7745967 * 10 ** (node.noise / 20.0) == pytest.approx(0.448e-3, rel=0.002)


@pytest.mark.parametrize(
    ("noise", "volts"),
    [
        ("102 dB(A) re rated", 0.80e-3),
        ("-72 dBu unweighted", 0.195e-3),
        ("88 dB unweighted re 1 W", 0.113e-3),
        ("105 dB unweighted re peak", 0.636e-3),
    ],
)
def test_residual_from_each_reference(noise, volts):
    """S32 (800 W in 8 ohm), and 3.01 dB more where S/N refers to peak power (C16)."""
    node = solved(line("-20 dBu"), amp(rated_power_w=["800 W @ 8 ohm"], noise=noise), end()).node(
        "power_amplifier", "out"
    )
    assert 0.7745967 * 10 ** (node.noise / 20.0) == pytest.approx(volts, rel=0.01)


def test_a_missing_reference_is_a_band_of_29_db():
    """R03: 800 W/8 ohm, S/N with no reference: 29.0 dB between 1 W and rated, 3 dB more for peak."""
    node = solved(
        line("-20 dBu"), amp(rated_power_w=["800 W @ 8 ohm"], noise="102 dB unweighted"), end()
    ).node("power_amplifier", "out")
    assert node.high["noise"] - node.low["noise"] == pytest.approx(29.03 + 3.01, abs=0.02)


@pytest.mark.parametrize(
    ("z", "watts"), [("8 ohm", 500.0), ("4 ohm", 800.0), ("16 ohm", 250.0), ("2 ohm", 1600.0)]
)
def test_clip_by_load(z, watts):
    """Ratings of 500 W at 8 and 800 W at 4 ohm hold at those loads; beyond them voltage is constant (C17)."""
    stage = amp(rated_power_w=["500 W @ 8 ohm", "800 W @ 4 ohm"], damping_factor="200")
    node = solved(line("0 dBu"), stage, make("loudspeaker", z_ohm=z)).node("power_amplifier", "out")
    ohm = float(z.split()[0])
    assert 0.6 * 10 ** (node.clip / 10.0) / ohm == pytest.approx(watts, rel=1e-3)


def test_clip_follows_a_load_that_changes():
    """Rewritten rows find the new load too."""
    from engine.outcome import evaluate

    stage = amp(rated_power_w=["500 W @ 8 ohm", "800 W @ 4 ohm"])
    before = row(line("0 dBu"), stage, make("loudspeaker", z_ohm="8 ohm"))
    speaker = before.stage["loudspeaker"]
    after = before.with_changes({"loudspeaker": (speaker, speaker.with_fields(z_ohm={"text": "4 ohm"}))})
    stepped = evaluate(after, evaluate(before)).node("power_amplifier", "out").clip
    assert stepped == pytest.approx(evaluate(after).node("power_amplifier", "out").clip, abs=1e-12)
    assert 0.6 * 10 ** (stepped / 10.0) / 4.0 == pytest.approx(800.0, rel=1e-6)


def test_bridged():
    """Twice the voltage: gain and clip +6.02 dB, the least load doubles, two channels' noise +3.01 dB."""
    fields = {"rated_power_w": ["500 W @ 8 ohm", "800 W @ 4 ohm"], "noise": "-70 dBu unweighted"}
    single, bridged = (
        solved(line("0 dBu"), amp(mode=mode, **fields), make("loudspeaker", z_ohm=z)).node(
            "power_amplifier", "out"
        )
        for mode, z in (("single", "4 ohm"), ("bridged", "8 ohm"))
    )
    assert bridged.level - single.level == pytest.approx(6.02, abs=0.005)
    assert bridged.clip - single.clip == pytest.approx(6.02, abs=0.005)  # 1600 W in 8 ohm
    assert bridged.noise - single.noise == pytest.approx(3.01, abs=0.005)
    stage = amp(mode="bridged", **fields)
    assert float(stage.least_load_ohm(stage.values())) == 8.0


def test_sensitivity_ranges():
    """Positions 26 dB, 32 dB, 1.4 V of 1000 W in 8 ohm: 26, 32 and 36.11 dB (S34)."""
    fields = {
        "rated_power_w": ["1000 W @ 8 ohm"],
        "gain_db": None,
        "range_gains_db": ["26 dB", "32 dB"],
        "range_sensitivities_v": ["1.4 V"],
    }
    for place, expected in enumerate((26.0, 32.0, 36.11)):
        stage = amp(sensitivity_range=float(place), **fields)
        assert solved(line("-20 dBu"), stage, end()).node(
            "power_amplifier", "out"
        ).level + 20.0 == pytest.approx(expected, abs=0.005)
    assert [text for text, _ in stage.control_choices("sensitivity_range")] == ["26 dB", "32 dB", "1.4 V"]
    assert list(stage.check(stage.values(), row(stage).axis())) == []


def test_input_stage_ahead_of_the_attenuator():
    """R82: a knob at −20 dB does not help an input stage that +24 dBu overdrives."""
    stage = amp(attenuator_db=-20.0, max_input_v="+21 dBu")
    assert solved(line("+24 dBu"), stage, end()).node("power_amplifier", "in").headroom == pytest.approx(
        -3.0, abs=1e-6
    )


def test_output_impedance_from_damping():
    """Damping 20 at 8 ohm is 0.4 ohm: gain holds at 8 ohm, into 4 ohm −0.37 dB (20 log of (4/4.4) / (8/8.4))."""
    stage = make(
        "power_amplifier",
        rated_power_w=["500 W @ 8 ohm"],
        damping_factor="20",
        gain_db="30 dB",
        z_in_ohm=NO_LOAD,
        noise=SILENT,
    )
    for z, expected in (("8 ohm", 30.0), ("4 ohm", 29.597)):
        node = solved(line("0 dBu"), stage, make("loudspeaker", z_ohm=z)).node("power_amplifier", "out")
        assert node.level == pytest.approx(expected, abs=0.005)


def test_figures_that_contradict_are_refused():
    """R87: 500 W in 8 ohm at 1.0 V is 36.02 dB; a sheet that says 32 dB beside them is wrong somewhere; 36 dB is not."""
    fields = {"rated_power_w": ["500 W @ 8 ohm"], "sensitivity_v": "1.0 V"}
    axis = row(line()).axis()
    wrong, right, too_few = amp(gain_db="32 dB", **fields), amp(gain_db="36 dB", **fields), amp(gain_db=None)
    assert "make a gain of 36.02" in next(wrong.check(wrong.values(), axis))
    assert list(right.check(right.values(), axis)) == []
    assert "needs two of rated power" in next(too_few.check(too_few.values(), axis))


def test_a_fixed_amplifier_has_no_attenuator():
    assert [name for name, _, _ in amp(attenuator="none").controls()] == []
