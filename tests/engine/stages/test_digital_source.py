"""Digital sources: full scale is a sine (AES17)."""

from __future__ import annotations

import pytest

from tests.engine.stages.alone import make, row, solved


def test_level_peak_and_full_scale():
    """−20 dBFS with 15 dB crest: sine-scaled peak −8.01 dBFS, 8.01 dB under full scale."""
    node = solved(make("digital_source", level_dbfs="-20 dBFS", crest_db="15 dB")).node(
        "digital_source", "out"
    )
    assert (node.level, node.clip) == pytest.approx((-20.0, 0.0), abs=1e-9)
    assert node.peak_margin == pytest.approx(8.01, abs=0.005)


def test_above_full_scale_is_refused():
    stage = make("digital_source", level_dbfs="3 dBFS")
    assert "nothing digital goes above 0 dBFS" in next(stage.check(stage.values(), row(stage).axis()))
