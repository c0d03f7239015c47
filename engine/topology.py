"""Which links may be: typed errors for cycles, unlike domains, double links, wrong ports; and who feeds whom."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from engine.sections.base import Domain
from engine.stages import Port, Stage

if TYPE_CHECKING:
    from .project import Link


class LinkError(ValueError):
    """A link that cannot be. The message says what is wrong and what would be right."""


class PortError(LinkError):
    """An end that is not there, or is taken."""


class DomainError(LinkError):
    """A link between unlike domains."""


class DoubleLinkError(LinkError):
    """The same two ports linked twice."""


class CycleError(LinkError):
    """A link that would feed a stage from its own output."""


class CountError(LinkError):
    """N alike and M alike that do not match."""


class GridError(LinkError):
    """A link that does not lead to a higher column."""


JOINED_BY = {
    (Domain.ACOUSTIC, Domain.ANALOGUE): "a microphone",
    (Domain.ACOUSTIC, Domain.DIGITAL): "a microphone and an A/D converter",
    (Domain.ANALOGUE, Domain.DIGITAL): "an A/D converter",
    (Domain.DIGITAL, Domain.ANALOGUE): "a D/A converter",
    (Domain.ANALOGUE, Domain.ACOUSTIC): "a loudspeaker",
    (Domain.DIGITAL, Domain.ACOUSTIC): "a D/A converter and a powered loudspeaker",
}


def check_links(stages: Mapping[str, Stage], links: Iterable[Link]) -> None:
    """Raise the `LinkError` of the first link that cannot be."""
    ends: set[tuple[str, str, str, str]] = set()
    taken: dict[tuple[str, str], str] = {}
    feeds: dict[str, list[str]] = defaultdict(list)
    for link in links:
        source, target = _end(stages, link.source, link), _end(stages, link.target, link)
        output, port = _port(source, link.output, is_output=True), _port(target, link.input, is_output=False)
        if output.domain != port.domain:
            join = JOINED_BY[output.domain, port.domain]
            raise DomainError(
                f"{source.name} sends {_an(output.domain)} signal and {target.name} takes {_an(port.domain)} one: "
                f"put {join} between them"
            )
        quad = (link.source, link.output, link.target, link.input)
        if quad in ends:
            raise DoubleLinkError(
                f"{source.name} already feeds this input of {target.name}: one link is enough"
            )
        ends.add(quad)
        if not port.many:
            if (link.target, link.input) in taken:
                other = taken[link.target, link.input]
                raise PortError(
                    f"{target.name} already has {other} at this input: use a mix bus or combiner to add signals"
                )
            taken[link.target, link.input] = source.name
        if 1 not in (source.count, target.count) and source.count != target.count:
            raise CountError(
                f"{source.name} stands for {source.count} and {target.name} for {target.count}: make the counts equal, or one of them 1"
            )
        if source.count > 1 and target.count == 1 and not port.many:
            raise CountError(
                f"{source.count} outputs of {source.name} cannot share one input of {target.name}: use a mix bus or combiner"
            )
        feeds[link.source].append(link.target)
    _refuse_cycles(stages, feeds)
    for link in links:
        source, target = stages[link.source], stages[link.target]
        if source.column >= target.column:
            raise GridError(
                f"{target.name} stands in column {target.column}: it must stand right of {source.name} in column {source.column}"
            )


def _an(domain: Domain) -> str:
    return f"a {domain}" if domain is Domain.DIGITAL else f"an {domain}"


def _end(stages: Mapping[str, Stage], key: str, link: Link) -> Stage:
    if key not in stages:
        raise PortError(f"link {link.id!r} names stage {key!r}, which is not in the project")
    return stages[key]


def _port(stage: Stage, name: str, *, is_output: bool) -> Port:
    ports = stage.outputs() if is_output else stage.inputs()
    for port in ports:
        if port.name == name:
            return port
    side = "output" if is_output else "input"
    have = ", ".join(port.name for port in ports) or "none"
    raise PortError(f"{stage.name} has no {side} {name!r}: its {side}s are {have}")


def _refuse_cycles(stages: Mapping[str, Stage], feeds: Mapping[str, list[str]]) -> None:
    done: set[str] = set()
    for start in feeds:
        trail: list[tuple[str, int]] = [(start, 0)]
        on_trail = {start}
        while trail:
            node, place = trail.pop()
            below = feeds.get(node, ())
            if node in done or place >= len(below):
                done.add(node)
                on_trail.discard(node)
                continue
            trail.append((node, place + 1))
            after = below[place]
            if after in on_trail:
                raise CycleError(
                    f"{stages[node].name} would feed {stages[after].name}, which feeds it already: a signal path has no loops"
                )
            if after not in done:
                trail.append((after, 0))
                on_trail.add(after)


@dataclass(frozen=True)
class Topology:
    """Who feeds whom: links by stage and port, and stages in signal order."""

    into: Mapping[str, tuple[Link, ...]]
    out_of: Mapping[str, tuple[Link, ...]]
    order: tuple[str, ...]

    @classmethod
    def of(cls, stages: Mapping[str, Stage], links: Iterable[Link]) -> Topology:
        into: dict[str, list[Link]] = defaultdict(list)
        out_of: dict[str, list[Link]] = defaultdict(list)
        for link in links:
            into[link.target].append(link)
            out_of[link.source].append(link)
        order = tuple(sorted(stages, key=lambda key: (stages[key].column, stages[key].row, key)))
        return cls(
            {key: tuple(into[key]) for key in stages}, {key: tuple(out_of[key]) for key in stages}, order
        )

    def sources_of(self, key: str) -> set[str]:
        """Every stage ahead of this one."""
        return self._reach(key, lambda at: [link.source for link in self.into[at]])

    def fed_by(self, key: str) -> set[str]:
        """Every stage behind this one."""
        return self._reach(key, lambda at: [link.target for link in self.out_of[at]])

    @staticmethod
    def _reach(key: str, step: object) -> set[str]:
        found: set[str] = set()
        ahead = list(step(key))  # type: ignore[operator]
        while ahead:
            at = ahead.pop()
            if at not in found:
                found.add(at)
                ahead.extend(step(at))  # type: ignore[operator]
        return found
