"""Level standards, loads, wiring and converters between devices: S03, S04, S14, S28, S36, S39, S43."""

from __future__ import annotations

import pytest

from engine.outcome import evaluate
from engine.units import dbv_from_v, v_from_dbu
from tests.scenarios.build import DB, NO_OHM, SHARE, TENTH, bare, line, moved, project, seat, solved


def test_s03_consumer_player_into_a_professional_input():
    """S03: −10 dBV is −7.78 dBu; +11.8 dB of trim makes it +4 dBu, and its 2 V maximum leaves 4.0 dB under +24 dBu."""
    outcome = solved(
        line("player", "-10 dBV", most="2 V", crest="19.03 dB"),
        bare("mixer_channel", "console", max_v="+24 dBu", trim_db=0.0),
    )
    assert outcome.node("console", "in").level == pytest.approx(-7.78, abs=DB)
    trimmed = moved(outcome, "console", trim_db=11.78)
    console = trimmed.node("console", "out")
    assert console.level == pytest.approx(4.0, abs=DB)
    # The player's peaks reach its own 2 V, +8.24 dBu.
    assert trimmed.node("player", "out").peak == pytest.approx(8.24, abs=DB)
    assert console.peak == pytest.approx(20.02, abs=DB)
    assert console.peak_margin == pytest.approx(4.0, abs=TENTH)


@pytest.mark.parametrize(
    ("pad", "level", "left_db"), [("11.78 dB", -7.78, -3.98), ("12 dB", -8.0, -3.76), ("16 dB", -12.0, 0.24)]
)
def test_s03_a_pad_that_matches_nominal_clips_early(pad, level, left_db):
    """S03: out again, a 12 dB pad matches nominal but clips the consumer input 3.8 dB early; 16 dB does not."""
    outcome = solved(
        line("console", "+4 dBu", most="+24 dBu", crest="23.01 dB"),
        bare("pad", "pad", loss_db=pad),
        bare("feed", "player", nominal_v="-10 dBV", max_input_v="2 V"),
    )
    assert outcome.node("player", "in").level == pytest.approx(level, abs=DB)
    assert outcome.node("player", "in").peak_margin == pytest.approx(left_db, abs=DB)


def one_leg(form: str):
    """S04: a +4 dBu output of some form into an unbalanced input of −10 dBV nominal, 2 V most."""
    return solved(
        line("console", "+4 dBu", most="+24 dBu", crest="23.01 dB", form=form),
        bare("feed", "recorder", nominal_v="-10 dBV", max_input_v="2 V"),
        recorder="one leg",
    )


def test_s04_push_pull_output_on_one_leg():
    """S04: −2.02 dBu, 0.614 V, −4.24 dBV, still 5.76 dB hot; peaks of 18.0 dBu stand 9.7 dB over the 2 V input."""
    recorder = one_leg("push-pull").node("recorder", "in")
    assert recorder.level == pytest.approx(-2.02, abs=DB)
    volts = v_from_dbu(recorder.level)
    assert volts == pytest.approx(0.614, rel=SHARE)
    assert dbv_from_v(volts) == pytest.approx(-4.24, abs=DB)
    assert dbv_from_v(volts) + 10.0 == pytest.approx(5.76, abs=DB)
    assert recorder.peak == pytest.approx(17.98, abs=DB)
    assert recorder.peak_margin == pytest.approx(-9.74, abs=DB)


@pytest.mark.parametrize(
    ("form", "level", "peak_left_db"), [("cross-coupled", 4.0, -6.02), ("transformer", 4.0, 0.0)]
)
def test_s04_other_outputs_behave_differently(form, level, peak_left_db):
    """S04: a cross-coupled output keeps its level and clips 6 dB sooner; a transformer output keeps both."""
    outcome = solved(
        line("console", "+4 dBu", most="+24 dBu", crest="23.01 dB", form=form),
        bare("feed", "recorder", max_input_v="+40 dBu"),
        recorder="one leg",
    )
    recorder = outcome.node("recorder", "in")
    assert recorder.level == pytest.approx(level, abs=DB)
    assert recorder.ceiling - recorder.level == pytest.approx(peak_left_db, abs=DB)
    assert outcome.narrowest.stage == "console"
    assert outcome.narrowest.margin_db == pytest.approx(peak_left_db, abs=DB)


@pytest.mark.parametrize(
    ("z_out", "z_in", "count", "loss_db"),
    [
        ("75 ohm", "10 k", 1, 0.06), ("150 ohm", "10 k", 1, 0.13), ("75 ohm", "10 k", 4, 0.26), ("600 ohm", "10 k", 1, 0.51),
        ("600 ohm", "10 k", 4, 1.87), ("75 ohm", "600 ohm", 1, 1.02), ("75 ohm", "600 ohm", 2, 1.94), ("600 ohm", "600 ohm", 1, 6.02),
        ("600 ohm", "600 ohm", 2, 9.54),
    ],
)  # fmt: skip
@pytest.mark.parametrize("drawn", ["one by one", "alike"])
def test_s14_how_many_inputs_can_one_output_feed(z_out, z_in, count, loss_db, drawn):
    """S14: loss = 20 log(Z_L/(Z_L + Z_S)), −0.06 to −9.54 dB; the largest clean level falls as much."""
    out = line("out", "+4 dBu", most="+24 dBu", z_out_ohm=z_out)
    if drawn == "alike":
        ends = [bare("feed", "end0", z_in_ohm=z_in, count=count)]
    else:
        ends = [bare("feed", f"end{k}", z_in_ohm=z_in) for k in range(count)]
    outcome = evaluate(project([out, *ends], [f"out > {end.id}" for end in ends]))
    assert outcome.node("out", "out").level == pytest.approx(4.0 - loss_db, abs=DB)
    assert outcome.node("end0", "in").level == pytest.approx(4.0 - loss_db, abs=DB)
    assert outcome.node("out", "out").clip == pytest.approx(24.0 - loss_db, abs=DB)


def test_s28_the_sermon_is_buried():
    """S28: music at 92 and speech at 67 dB in the room; with music at −18 dBFS speech lands at −43, and wants +25 dB."""
    stages, links = [], []
    for name, level in (("music", "92 dB SPL"), ("speech", "67 dB SPL")):
        stages += [
            bare("sound_source", name, level_spl=level),
            bare("microphone", f"{name} microphone", sensitivity_v_per_pa="10 mV/Pa"),
            bare("preamplifier", f"{name} preamplifier", gain_db=40.0),
            bare("ad_converter", f"{name} converter", full_scale_v="+22.02 dBu"),
            bare("mixer_channel", f"{name} group", signal="digital"),
            bare("feed", f"{name} feed", signal="digital"),
        ]
        links += [f"{a.id} > {b.id}" for a, b in zip(stages[-6:-1], stages[-5:], strict=True)]
    outcome = evaluate(project(stages, links))
    assert outcome.node("music feed", "in").level == pytest.approx(-21.82, abs=DB)
    outcome = moved(moved(outcome, "music group", trim_db=3.82), "speech group", trim_db=3.82)
    assert outcome.node("music feed", "in").level == pytest.approx(-18.0, abs=DB)
    assert outcome.node("speech feed", "in").level == pytest.approx(-43.0, abs=DB)
    outcome = moved(outcome, "speech group", fader_db=10.0, trim_db=18.82)
    assert outcome.node("speech feed", "in").level == pytest.approx(-18.0, abs=DB)
    # Peaks of speech are to be watched at +25 dB.
    assert outcome.node("speech feed", "in").peak_margin == pytest.approx(18.0 - (18.0 - 3.01), abs=DB)


def guest_desk(dbfs: str, trim_db: float):
    """S36: a house where +4 dBu at the drive point is 96 dB at the mix, and a guest desk with 0 dBFS = +18 dBu."""
    return solved(
        bare("digital_source", "desk", level_dbfs=dbfs),
        bare("da_converter", "converter", full_scale_v="0 dBFS = +18 dBu"),
        bare("mixer_channel", "house", trim_db=trim_db, max_v="+24 dBu"),
        bare(
            "powered_loudspeaker",
            "box",
            sensitivity_v="+4 dBu",
            max_spl="96 dB SPL",
            max_input_v=None,
            noise_spl=None,
        ),
        seat("mix"),
        distance="1 m",
    )


def test_s36_where_is_my_zero():
    """S36: −20 dBFS is −2 dBu and 90 dB at the mix; +6 dB at the house trim makes it 96, or −14 dBFS at the guest's."""
    plain = guest_desk("-20 dBFS", 0.0)
    assert plain.node("converter", "out").level == pytest.approx(-2.0, abs=DB)
    assert plain.seats[0].level == pytest.approx(90.0, abs=DB)
    assert guest_desk("-20 dBFS", 6.0).seats[0].level == pytest.approx(96.0, abs=DB)
    assert guest_desk("-14 dBFS", 0.0).seats[0].level == pytest.approx(96.0, abs=DB)
    # The guest cannot send more than +18 dBu: ahead of the trim an input of +20 is safe, behind it that is +24.
    assert plain.node("converter", "out").clip == pytest.approx(18.0, abs=DB)
    assert guest_desk("-20 dBFS", 6.0).node("house", "out").clip == pytest.approx(24.0, abs=DB)


@pytest.mark.parametrize(("loads", "loss_db"), [(1, 1.09), (2, 2.05), (3, 2.92)])
def test_s39_a_passive_split(loads, loss_db):
    """S39: 200 ohm microphone, 1.5 kohm inputs: 1, 2, 3 of them cost 1.09, 2.05, 2.92 dB; the second −0.97 dB."""
    stages = [
        line("microphone", "-50 dBu", z_out_ohm="200 ohm"),
        bare("splitter", "split", ways=3, build="parallel"),
        *(bare("preamplifier", f"input {n}", z_in_ohm="1.5 k") for n in range(1, loads + 1)),
    ]
    links = ["microphone > split"] + [
        f"split.{'out' if n == 1 else f'out_{n}'} > input {n}" for n in range(1, loads + 1)
    ]
    outcome = evaluate(project(stages, links))
    for n in range(1, loads + 1):
        assert outcome.node(f"input {n}", "in").level == pytest.approx(-50.0 - loss_db, abs=DB)


@pytest.mark.parametrize(("crest", "spare_db"), [("20 dB", 3.01), ("23.01 dB", 0.0)])
def test_s43_twenty_db_of_peak_room(crest, spare_db):
    """S43: +4 dBu with a true crest of 20 dB under +24 dBu: 3.01 dB spare, or none if 20 dB was a sine-scaled meter's."""
    outcome = solved(
        line("out", "+4 dBu", most="+24 dBu", crest=crest), bare("feed", "in", max_input_v="+24 dBu")
    )
    out = outcome.node("out", "out")
    assert out.headroom == pytest.approx(20.0, abs=DB)
    assert out.peak_margin == pytest.approx(spare_db, abs=DB)
    assert out.clip - out.peak_margin == pytest.approx(out.peak, abs=DB)


def test_no_ohm_is_out_of_the_way():
    """The scenarios' stand-in for no output impedance costs nothing into 2 ohm."""
    outcome = solved(line("out", "0 dBu", z_out_ohm=NO_OHM), bare("feed", "in", z_in_ohm="2 ohm"))
    assert outcome.node("in", "in").level == pytest.approx(0.0, abs=1e-4)
