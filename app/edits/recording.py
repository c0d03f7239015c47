"""A recording as the programme of a source: its crest factor, its spectrum, and its level where the source is digital."""

from __future__ import annotations

import numpy as np

from engine.figures import Figure
from engine.project import Changes, Project
from engine.signals import Programme

FLOOR_DB = -120.0


def takes_recording(project: Project, key: str) -> bool:
    """Whether a stage is a source whose programme can be a recording's."""
    stage = project.stage.get(key)
    return stage is not None and "own_bands_db" in stage.figure_specs()


def use_recording(project: Project, key: str, programme: Programme, name: str) -> Changes:
    """Put a recording's crest factor and bands in place of a source's. Raises ValueError where it holds no sound.

    A digital source takes the recording's rms level too; other sources keep the level a person has given them.
    """
    if not np.isfinite(programme.rms_dbfs):
        raise ValueError(f"{name} is silent: choose a recording with something in it")
    stage = project.stage[key]
    with np.errstate(divide="ignore"):
        bands = np.maximum(10.0 * np.log10(programme.band_shares), FLOOR_DB)
    measured = {"origin": "measured", "note": name}
    fields: dict[str, object] = {
        "spectrum": "own bands",
        "own_bands_db": tuple(Figure(text=f"{level:.2f} dB", **measured) for level in bands),
        "crest_db": Figure(text=f"{programme.crest_db:.2f} dB", **measured),
    }
    if "level_dbfs" in stage.figure_specs():
        fields["level_dbfs"] = Figure(text=f"{programme.rms_dbfs:.2f} dBFS", **measured)
    return {key: (stage, stage.with_fields(**fields))}
