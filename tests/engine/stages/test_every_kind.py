"""What every kind must do: its template solves, and a batch of settings equals single solves."""

from __future__ import annotations

import numpy as np
import pytest

from engine.compile import build_plan
from engine.outcome import evaluate
from engine.project import Link, Project
from engine.sections.base import Domain
from engine.solve import solve
from engine.stages import KINDS, Stage, Values, template
from engine.stages.panel import marking
from tests.engine.stages.alone import source_for

#: Options that make a kind longest, beside its template.
VARIANTS = {
    "processor": {"outputs_fitted": 3},
    "constant_voltage_line": {"groups": 3, "layout": "along the line"},
    "splitter": {"build": "active"},
    "combiner": {"build": "active"},
    "mixer_channel": {"signal": "digital"},
    "mix_bus": {"signal": "digital"},
    "equaliser": {"signal": "digital"},
    "dynamics": {"mode": "limiter", "detector": "peak"},
    "seat": {"field_kind": "room"},
    "power_amplifier": {"mode": "bridged"},
    "digital_link": {"sample_format": "floating-point"},
    "direct_box": {"build": "active"},
    "loudspeaker": {"boxes": 4, "wiring": "series", "compression_db": {"text": "2 dB"}},
}
CASES: list[tuple[str, dict]] = [(kind, {}) for kind in KINDS] + list(VARIANTS.items())


def fed(stage: Stage) -> Project:
    """The stage behind a source for its first input."""
    if not stage.inputs():
        return Project(stages=(stage,))
    source = source_for(stage.inputs()[0].domain)
    link = Link(
        id="l", source="source", target=stage.id, input=stage.inputs()[0].name, distance_m={"text": "4 m"}
    )
    return Project(stages=(source, stage.with_fields(column=1)), links=(link,))


def drawn(stage: Stage, place: int) -> dict[str, float]:
    """Settings and figures of one draw: controls low, middle and high, figures a little off."""
    found = {}
    for name, _, _ in stage.controls():
        steps = stage.control_range(name).positions
        found[name] = float(steps[[0, len(steps) // 2, -1][place]])
    for name, spec, _ in stage.figures():
        factor = 1.0 if spec.quantity == "count" else (1.0, 0.98, 1.03)[place]
        found[name] = float(np.asarray(stage.values()[name])) * factor
    return found


@pytest.mark.parametrize(("kind", "options"), CASES)
def test_the_template_solves_to_finite_numbers(kind, options):
    """Every level of every node is a number, and nothing is left unsaid by a template."""
    stage = template(kind, "it", **options)
    outcome = evaluate(fed(stage))
    assert np.all(np.isfinite(outcome.solution.spectra))
    assert np.all(outcome.solution.spectra >= 0.0)
    assert list(stage.unsaid()) == []
    assert list(stage.check(stage.values(), outcome.plan.axis)) == []
    assert len([n for n in outcome.nodes if n.stage == "it"]) >= 1
    assert stage.summary()


@pytest.mark.parametrize(("kind", "options"), CASES)
def test_a_batch_of_settings_equals_single_solves(kind, options):
    """Rows of a batch agree with each setting solved alone to 1e-12."""
    stage = template(kind, "it", **options)
    project = fed(stage)
    draws = [drawn(stage, place) for place in range(3)]
    stacked = {name: np.array([[d[name]] for d in draws]) for name in draws[0]}
    wide = build_plan(project, overrides={"it": stage.values().replaced(stacked)}, batch=3)
    together = solve(wide.graph, wide.rows, wide.axis)
    for place, draw in enumerate(draws):
        alone_values: Values = stage.values().replaced(draw)
        single = build_plan(project, overrides={"it": alone_values})
        # A switch that is out in a single solve may leave a section without dynamics: compare levels only.
        alone = solve(single.graph, single.rows, single.axis)
        np.testing.assert_allclose(
            together.spectra[:, :, place], alone.spectra[:, :, 0], rtol=1e-12, atol=1e-300
        )
        np.testing.assert_allclose(wide.rows.clip_in[:, place], single.rows.clip_in[:, 0], rtol=1e-12)
        np.testing.assert_allclose(wide.rows.clip_out[:, place], single.rows.clip_out[:, 0], rtol=1e-12)


@pytest.mark.parametrize("kind", KINDS)
def test_everything_declared_is_explained(kind):
    """Title, family, help of the kind; label and help of every figure and control; typical figures are guesses."""
    maker = KINDS[kind]
    assert maker.title
    assert maker.family in {"Sources", "Inputs", "Mixing", "Processing", "Lines", "Outputs", "Places"}
    assert len(maker.help) > 20
    explained = [(spec.label, spec.help) for spec in maker.figure_specs().values()]
    explained += [(spec.label, spec.help) for spec in maker.control_specs().values()]
    assert all(label and len(text) > 8 for label, text in explained), explained
    stage = template(kind, "it")
    assert all(given.origin == "guess" for _, _, given in stage.figures())
    for name, spec, setting in stage.controls():
        assert marking(spec, stage.control_range(name), setting)


def test_orders_on_the_shelf_are_unique():
    orders = [maker.order for maker in KINDS.values()]
    assert len(set(orders)) == len(orders)


@pytest.mark.parametrize("kind", KINDS)
def test_a_stage_survives_its_own_file_form(kind):
    """Dumped and read back a stage is the same, its unknown fields kept."""
    stage = template(kind, "it", sticker="blue")
    again = KINDS[kind].model_validate(stage.model_dump(mode="json"))
    assert again == stage
    assert again.model_dump()["sticker"] == "blue"


def test_domains_join_only_through_converting_kinds():
    """Acoustic to volts is a microphone's work, volts to acoustic a loudspeaker's, and so on."""
    turns = {}
    for kind in KINDS:
        stage = template(kind, "it")
        if stage.inputs() and stage.outputs() and stage.inputs()[0].domain is not stage.outputs()[0].domain:
            turns[kind] = (stage.inputs()[0].domain, stage.outputs()[0].domain)
    assert turns == {
        "microphone": (Domain.ACOUSTIC, Domain.ANALOGUE),
        "ad_converter": (Domain.ANALOGUE, Domain.DIGITAL),
        "da_converter": (Domain.DIGITAL, Domain.ANALOGUE),
        "loudspeaker": (Domain.ANALOGUE, Domain.ACOUSTIC),
        "powered_loudspeaker": (Domain.ANALOGUE, Domain.ACOUSTIC),
    }


@pytest.mark.parametrize(
    ("kind", "largest"),
    [("equaliser", "max_v"), ("dynamics", "max_v"), ("mixer_channel", "max_v"), ("mix_bus", "max_output_v")],
)
def test_a_nominal_level_above_the_largest_is_refused(kind, largest):
    """R87: it would make an S/N above the dynamic range."""
    stage = template(kind, "it", nominal_v={"text": "+24 dBu"}, **{largest: {"text": "+18 dBu"}})
    assert "S/N would be above its dynamic range" in next(stage.check(stage.values(), None))
