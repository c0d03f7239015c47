"""Removing stages with their links; where one stood in a path, its neighbours are joined again if they fit."""

from __future__ import annotations

from collections.abc import Collection

from engine.project import Changes, Link, Project
from engine.topology import LinkError

from .draft import Draft


def delete(project: Project, ids: Collection[str]) -> Changes:
    """Take stages and links away. A link that was itself asked to go is not bridged."""
    draft = Draft(project)
    lift_out(draft, ids)
    for key in ids:
        draft.stages.pop(key, None)
    return draft.changes()


def lift_out(draft: Draft, ids: Collection[str]) -> None:
    """Take links away, and those of stages; join what fed a stage to what it fed, where it had one feed."""
    gone = {key for key in ids if key in draft.stages}
    bridges = [
        (feed, link)
        for link in draft.links.values()
        if link.source in gone and link.target not in gone and link.id not in ids
        if (feed := _feed_ahead(draft, link.source, gone, ids)) is not None
    ]
    for link in list(draft.links.values()):
        if link.id in ids or link.source in gone or link.target in gone:
            del draft.links[link.id]
    for feed, link in bridges:
        bridge = link.model_copy(update={"source": feed.source, "output": feed.output})
        if _may_be(draft, bridge, gone):
            draft.put(bridge)


def _feed_ahead(draft: Draft, key: str, gone: Collection[str], ids: Collection[str]) -> Link | None:
    """The one link from outside that feeds a stage through others that go too."""
    while True:
        feeds = draft.into(key)
        if len(feeds) != 1 or feeds[0].id in ids:
            return None
        if feeds[0].source not in gone:
            return feeds[0]
        key = feeds[0].source


def _may_be(draft: Draft, bridge: Link, gone: Collection[str]) -> bool:
    trial = Draft(draft.project)
    trial.stages = {key: stage for key, stage in draft.stages.items() if key not in gone}
    trial.links = {**draft.links, bridge.id: bridge}
    try:
        trial.changes()
    except LinkError:
        return False
    return True
