"""Where the diagram puts things, asserted on geometry alone."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import combinations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.diagram.geometry import Geometry, Look, Request, build
from app.diagram.labels import Box, Wish, place_labels
from app.diagram.scale import Range, Scale, fit_range, spl_shift, ticks
from engine.outcome import Outcome, evaluate
from engine.sections.base import Domain
from tests.app.diagram.chains import chain, long_chain


@dataclass(frozen=True)
class Even:
    """Columns at a fixed pitch, blocks four fifths of it."""

    pitch: float = 100.0
    left: float = 64.0

    def x_in(self, column: float) -> float:
        return self.left + self.pitch * (column + 0.1)

    def x_out(self, column: float) -> float:
        return self.left + self.pitch * (column + 0.9)


def wide(text: str, strong: bool) -> float:
    """A text's width where every sign is 7 px: wider than the shipped face."""
    return 7.0 * len(text)


def geometry(
    outcome: Outcome, look: Look | None = None, pitch: float = 100.0, width: float = 1366.0, **more
) -> Geometry:
    path = outcome.path_through(outcome.project.topology.order[0])
    column_of = {key: outcome.project.stage[key].column for key in path}
    return build(
        Request(outcome.trace(path), column_of, Even(pitch), width, 420.0, wide, look or Look(), **more)
    )


@pytest.fixture(scope="module")
def solved() -> Outcome:
    return evaluate(chain())


def test_every_node_stands_at_its_own_block_edge(solved):
    """Input at the left edge, output at the right one, to a millionth of a pixel."""
    found = geometry(solved)
    for place in found.places:
        column = solved.project.stage[place.node.stage].column
        edge = 0.1 if place.node.direction == "in" else 0.9
        assert place.x == pytest.approx(64.0 + 100.0 * (column + edge), abs=1e-6)


def test_levels_stand_where_the_scale_says(solved):
    found = geometry(solved)
    per_db = (found.plot.bottom - found.plot.top) / (found.scale.range.high - found.scale.range.low)
    amplifier = next(
        p for p in found.places if p.node.stage.startswith("power") and p.node.direction == "out"
    )
    for number in ("level", "peak", "clip", "noise"):
        expected = found.plot.bottom - (getattr(amplifier.node, number) - found.scale.range.low) * per_db
        assert found.y_of(amplifier, number) == pytest.approx(expected, abs=1e-6)


def test_traces_break_at_every_change_of_domain(solved):
    """From microphone input to its output there is no line, nor from loudspeaker input to its output."""
    found = geometry(solved)
    crossings = {
        (one.x, two.x)
        for one, two in zip(found.places, found.places[1:], strict=False)
        if one.node.domain != two.node.domain
    }
    assert len(crossings) == 2
    for spans in found.spans.values():
        assert not {(x1, x2) for x1, _, x2, _ in spans} & crossings


def test_sound_stands_on_the_right_axis_by_whole_tens(solved):
    found = geometry(solved)
    seat = found.places[-1]
    assert found.shift_db % 10.0 == 0.0
    assert found.scale.level(found.y_of(seat, "level")) == pytest.approx(
        seat.node.level - found.shift_db, abs=1e-6
    )
    assert found.right_title == "dB SPL"
    by_text = {tick.text: tick.y for tick in found.right_ticks}
    assert found.scale.level(by_text["60"]) == pytest.approx(60.0 - found.shift_db, abs=1e-6)


def test_digital_nodes_stand_at_the_dbu_of_their_converter():
    kinds = (
        "line_source",
        "ad_converter",
        "digital_link",
        "da_converter",
        "power_amplifier",
        "loudspeaker",
        "seat",
    )
    outcome = evaluate(chain(kinds))
    found = geometry(outcome)
    place = next(p for p in found.places if p.node.domain is Domain.DIGITAL)
    assert place.node.unit == "dBFS"
    full_scale = next(
        s for s in outcome.plan.section_list("ad_converter-1") if s[0].full_scale_v is not None
    )[0].full_scale_v  # fmt: skip
    dbu_at_full_scale = 20.0 * __import__("math").log10(float(full_scale) / 0.6**0.5)
    assert place.on_axis("level") == pytest.approx(place.node.level + dbu_at_full_scale, abs=1e-6)


def test_the_view_to_the_clip_point_is_flat_at_zero(solved):
    found = geometry(solved, Look(view="to clip"))
    zero = found.scale.y(0.0)
    assert found.spans["clip"]
    for _x1, y1, _x2, y2 in found.spans["clip"]:
        assert (y1, y2) == pytest.approx((zero, zero), abs=1e-6)
    place = next(p for p in found.places if p.node.headroom is not None)
    assert place.on_axis("level") == pytest.approx(-place.node.headroom, abs=1e-9)
    assert found.right_title == ""


def test_scales_given_are_kept_while_a_hand_moves(solved):
    first = geometry(solved)
    stage = solved.project.stage["preamplifier-2"]
    louder = evaluate(
        solved.project.with_changes({stage.id: (stage, stage.with_control("gain_db", 60.0))}), solved
    )
    kept = geometry(louder, Look(range=first.scale.range, shift_db=first.shift_db))
    assert kept.scale.range == first.scale.range
    assert kept.ticks == first.ticks


@pytest.mark.parametrize("unit", ["dBu", "dBV", "V"])
@pytest.mark.parametrize("every", [False, True])
def test_at_sixty_nodes_no_two_labels_touch(unit, every):
    """On 1366 px, 60 nodes, in all three units."""
    outcome = evaluate(long_chain())
    path = outcome.path_through(outcome.project.topology.order[0])
    assert len(outcome.trace(path)) >= 60
    pitch = (1366.0 - 64.0 - 72.0) / len(path)
    found = geometry(outcome, Look(unit=unit, every_label=every, selected=frozenset([path[5]])), pitch=pitch)
    assert found.labels
    assert not [pair for pair in combinations(found.labels, 2) if pair[0].box.touches(pair[1].box)]


@settings(max_examples=60, deadline=None)
@given(st.lists(st.tuples(st.floats(0, 900), st.floats(0, 400), st.integers(0, 60)), max_size=60))
def test_labels_never_touch_and_never_leave_the_plot(points):
    plot = Box(0.0, 0.0, 900.0, 400.0)
    wishes = [Wish(x, y, "+12.3", "level", rank, above=rank % 2 == 0) for x, y, rank in points]
    labels = place_labels(wishes, plot, 13.0, wide)
    assert all(label.box.inside(plot) for label in labels)
    assert not any(one.box.touches(two.box) for one, two in combinations(labels, 2))


def test_the_selected_stage_is_labelled_before_the_rest(solved):
    found = geometry(solved, Look(selected=frozenset(["mix_bus-4"]), narrowest="power_amplifier-6"))
    node = solved.node("mix_bus-4", "out")
    assert any(label.strong and label.text.endswith(f"{abs(node.level):.1f}") for label in found.labels)


def test_a_held_trace_is_drawn_beside(solved):
    stage = solved.project.stage["preamplifier-2"]
    moved = evaluate(
        solved.project.with_changes({stage.id: (stage, stage.with_control("gain_db", 20.0))}), solved
    )
    path = solved.path_through(stage.id)
    found = geometry(moved, held=solved.trace(path))
    assert len(found.held["level"]) == len(found.spans["level"])
    assert found.held["level"] != found.spans["level"]


def test_the_room_stands_over_the_hiss_by_the_hiss_margin(solved):
    found = geometry(solved, seat=solved.seats[0])
    bars = {name: span for span, name in found.bars}
    margin_px = bars["noise"][1] - bars["room"][1]
    assert margin_px / found.scale.db_px == pytest.approx(solved.seats[0].hiss_margin, abs=1e-6)


def test_an_ambiguous_figure_shows_as_a_whisker(solved):
    stage = solved.project.stage["preamplifier-2"]
    name, spec = next((n, s) for n, s in stage.figure_specs().items() if s.quantity == "ein")
    unsaid = {"text": "-128 dBu 150 ohm"}
    open_figure = stage.with_fields(**{name: [unsaid] if spec.many else unsaid})
    outcome = evaluate(solved.project.with_changes({stage.id: (stage, open_figure)}), solved)
    found = geometry(outcome)
    whisker = next(w for w in found.whiskers if w.series == "noise")
    # A-weighted or not: 2.05 dB between the ends where the preamplifier's own noise leads, less where it does not.
    assert 0.5 < (whisker.bottom - whisker.top) / found.scale.db_px <= 2.06


def test_an_empty_path_says_what_to_do():
    found = build(Request([], {}, Even(), 800.0, 300.0, wide))
    assert "stage" in found.empty


@given(st.lists(st.floats(-200.0, 150.0), min_size=1))
def test_a_fitted_range_holds_its_levels_in_whole_tens(levels):
    found = fit_range(levels)
    assert found.low % 10.0 == 0.0
    assert found.high % 10.0 == 0.0
    assert found.low < min(levels)
    assert max(levels) < found.high
    assert found.high - found.low >= 40.0


def test_dbv_ticks_stand_two_decibels_off_dbu_ones():
    """0 dBV = +2.22 dBu (0 dBu = sqrt(0.6) V, IEC 60268-2)."""
    scale = Scale(Range(-60.0, 40.0), 0.0, 500.0)
    zero = next(level for level, text in ticks(scale, "dBV") if text == "0")
    assert zero == pytest.approx(2.2185, abs=1e-4)
    one_volt = next(level for level, text in ticks(scale, "V") if text.startswith("1\u202fV"))
    assert one_volt == pytest.approx(2.2185, abs=1e-4)


def test_the_axes_differ_by_whole_tens():
    assert spl_shift(84.2, 3.1) == 80.0
    assert spl_shift(None, 3.0) == 90.0


def test_geometry_is_pure(solved):
    assert geometry(solved) == geometry(solved)
    assert replace(geometry(solved), empty="x") != geometry(solved)
