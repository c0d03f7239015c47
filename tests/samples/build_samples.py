"""Write the three invented venues into sample_projects, and their computed results beside the tests.

Run it after a change of a venue, a template or the engine, and read what has changed before committing it:

    python -m tests.samples.build_samples
"""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

from app.tabular import record
from engine.compile import build_plan
from engine.limits import set_limiters
from engine.outcome import Outcome, evaluate
from engine.project import Project
from engine.store import write

from . import house_of_worship, meeting_room, theatre

HERE = Path(__file__).parent
SAMPLE_PROJECTS = HERE.parents[1] / "sample_projects"
VENUES: dict[str, Callable[[], Project]] = {
    "meeting_room": meeting_room.build,
    "house_of_worship": house_of_worship.build,
    "theatre": theatre.build,
}


def frozen(outcome: Outcome) -> dict[str, Any]:
    """The results of a venue to nine decimals, so that machines agree; findings but notes by code, not by wording."""
    found = _rounded(record(outcome))
    found["findings"] = sorted(
        [each["severity"], each["code"], each["stage"]]
        for each in found["findings"]
        if each["severity"] != "note"
    )
    for seat in found["seats"]:
        seat["budget"] = {f"{line['stage']}: {line['origin']}": line["hiss"] for line in seat["budget"]}
    return dict(found)


def _rounded(value: Any) -> Any:
    if isinstance(value, float):
        return round(value, 9)
    if isinstance(value, dict):
        return {key: _rounded(each) for key, each in value.items()}
    return [_rounded(each) for each in value] if isinstance(value, list) else value


def with_limiters_set(project: Project) -> Project:
    """The venue with every limiter at the threshold its loudspeakers need."""
    return project.with_changes(set_limiters(build_plan(project), locked_too=True))


def main() -> None:
    """Write every venue and its results."""
    for name, build in VENUES.items():
        project = with_limiters_set(build())
        write(SAMPLE_PROJECTS / f"{name}.gainwright", project)
        text = json.dumps(frozen(evaluate(project)), ensure_ascii=False, indent=0, sort_keys=True)
        (HERE / f"{name}.json").write_text(text + "\n", encoding="utf-8")
        print(f"{name}: {len(project.stages)} stages, {len(project.links)} links")


if __name__ == "__main__":
    main()
