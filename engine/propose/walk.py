"""The exact dynamic programme: the best walk of shifts through a tree of regions and moves.

Two passes of the same messages. `widest` finds the walk whose smallest margin is largest; `cheapest` the one with the least
noise + rate * cost among those that keep a margin. A message is one array over the shifts a region may have, in steps of
STEP_DB; a move offers each of its positions at once. Regions of one possible shift cut the tree, for what lies on
either side of them does not depend on one another.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.rows import Array

from .bounds import NoWalk, Steps, is_pinned
from .cells import STEP_DB, Region, Web


@dataclass(frozen=True)
class Found:
    """A walk: what it comes to, the shift of each region [STEP_DB] and the position of each move."""

    value: float
    shifts: tuple[int, ...]
    picks: tuple[int, ...]


# -- the tree ----------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Branch:
    """A move as seen from the region nearer the root: `near` is that region's place in it, `far` the other regions' places."""

    move: int
    near: int
    far: tuple[int, ...]


def find_cycle(web: Web) -> list[int] | None:
    """The regions of a ring of moves, pinned regions not counted; None for a tree."""
    came: dict[int, tuple[int, int]] = {}
    for root in range(len(web.regions)):
        if root in came or is_pinned(web.regions[root]):
            continue
        came[root] = (-1, -1)
        ahead = [root]
        while ahead:
            at = ahead.pop()
            for index, move in enumerate(web.moves):
                if at not in move.regions or index == came[at][1]:
                    continue
                for other in dict.fromkeys(move.regions):
                    if other == at or is_pinned(web.regions[other]):
                        continue
                    if other in came:
                        return _ring(came, at, other)
                    came[other] = (at, index)
                    ahead.append(other)
    return None


def _ring(came: dict[int, tuple[int, int]], one: int, other: int) -> list[int]:
    def trail(at: int) -> list[int]:
        found = [at]
        while came[found[-1]][0] >= 0:
            found.append(came[found[-1]][0])
        return found

    first, second = trail(one), trail(other)
    met = next(region for region in first if region in second)
    return [*first[: first.index(met) + 1], *second[: second.index(met)]]


class Walk:
    """Messages over one web that is a tree."""

    def __init__(self, web: Web) -> None:
        self.web = web
        self.roots: list[int] = []
        self.below: dict[int, list[Branch]] = {}
        self.loose: list[Branch] = []  # moves between pinned regions alone
        beside: dict[int, list[int]] = {}
        for index, move in enumerate(web.moves):
            for region in dict.fromkeys(move.regions):
                beside.setdefault(region, []).append(index)
        taken: set[int] = set()
        seen: set[int] = set()
        self.order: list[int] = []
        for root in range(len(web.regions)):
            if root in seen or is_pinned(web.regions[root]):
                continue
            self.roots.append(root)
            seen.add(root)
            ahead = [root]
            while ahead:
                at = ahead.pop()
                self.order.append(at)
                for index in beside.get(at, ()):
                    if index in taken:
                        continue
                    taken.add(index)
                    branch = self._branch(index, at)
                    self.below.setdefault(at, []).append(branch)
                    for place in branch.far:
                        other = web.moves[index].regions[place]
                        if not is_pinned(web.regions[other]):
                            seen.add(other)
                            ahead.append(other)
        self.loose = [
            self._branch(index, move.regions[0]) for index, move in enumerate(web.moves) if index not in taken
        ]
        self._thin_out()
        self._kept: dict[int, tuple[Steps, list[Steps], Array | None]] = {}

    def _thin_out(self) -> None:
        """Keep the shifts that real steps can make: each region's own list, and where a shift stands in it.

        Sets of shifts are whole numbers, one bit a shift, so that a position moves a set by one bit shift.
        """
        regions = self.web.regions
        bits = [(1 << (region.high - region.low + 1)) - 1 for region in regions]
        for region in reversed(self.order):
            for branch in self.below.get(region, ()):
                bits[region] &= self._moved_bits(bits, branch, region, branch.near)
        for region in self.order:
            for branch in self.below.get(region, ()):
                for place in branch.far:
                    other = self.web.moves[branch.move].regions[place]
                    bits[other] &= self._moved_bits(bits, branch, other, place)
        if not all(bits):
            raise NoWalk
        self.shifts: list[Steps] = []
        self.index: list[Steps] = []
        for span, held in zip(regions, bits, strict=True):
            size = span.high - span.low + 1
            raw = np.frombuffer(held.to_bytes((size + 7) // 8, "little"), dtype=np.uint8)
            kept = np.flatnonzero(np.unpackbits(raw, bitorder="little")[:size])
            index = np.full(size + 1, kept.size)
            index[kept] = np.arange(kept.size)
            self.shifts.append(kept + span.low)
            self.index.append(index)

    def _moved_bits(self, bits: list[int], branch: Branch, region: int, at: int) -> int:
        """The shifts of one region of a move that some position makes of those of the others."""
        move, regions = self.web.moves[branch.move], self.web.regions
        others = [(place, index) for place, index in enumerate(move.regions) if place != at]
        full = (1 << (regions[region].high - regions[region].low + 1)) - 1
        found = 0
        steps = {
            place: (move.offsets[at] - move.offsets[place] + (regions[index].low - regions[region].low)).tolist()
            for place, index in others
        }  # fmt: skip
        for position in range(len(move.picks)):
            reached = full
            for place, index in others:
                step = steps[place][position]
                reached &= bits[index] << step if step >= 0 else bits[index] >> -step
            found |= reached
        return found

    def _places(self, region: int, shifts: Steps) -> Steps:
        """Where shifts stand in a region's list; one past its end where it has none such."""
        low, size = self.web.regions[region].low, self.index[region].size - 1
        at = shifts - low
        np.putmask(at, (at < 0) | (at >= size), size)
        return np.asarray(self.index[region][at])

    def _branch(self, index: int, at: int) -> Branch:
        regions = self.web.moves[index].regions
        near = regions.index(at)
        return Branch(index, near, tuple(place for place in range(len(regions)) if place != near))

    # -- the two passes --------------------------------------------------------------------------------------
    def widest(self, cap_db: float) -> Found:
        """The walk with the widest smallest margin [dB]; margins above `cap_db` count as equal. Raises `NoWalk`."""

        def own(region: Region, shifts: Steps) -> Array:
            return np.asarray(np.minimum(region.margin - shifts * STEP_DB, cap_db))

        def of(branch: Branch, reference: Steps) -> Array:
            move = self.web.moves[branch.move]
            return np.minimum(move.margin[:, None] - reference * STEP_DB, cap_db)

        return self._solve(own, of, np.minimum, np.argmax, -np.inf)

    def cheapest(self, rate: float, noise_unit: float = 1.0) -> Found:
        """The walk with the least noise / `noise_unit` + `rate` * cost. Raises `NoWalk`."""

        def own(region: Region, shifts: Steps) -> Array:
            found = region.noise / noise_unit * _falls(shifts)
            if rate:
                found = found + rate * dues(region, shifts)
            return np.asarray(found)

        def of(branch: Branch, reference: Steps) -> Array:
            move = self.web.moves[branch.move]
            paid = rate * move.cost[:, None]
            if not move.noise.any():
                return np.asarray(paid)
            return np.asarray(self._noise(branch) / noise_unit + paid)

        return self._solve(own, of, np.add, np.argmin, np.inf)

    def _solve(
        self, own: Callable[[Region, Steps], Array], of: Callable[[Branch, Steps], Array], join: np.ufunc,
        pick: Callable[..., NDArray[np.intp]], worst: float,
    ) -> Found:  # fmt: skip
        web = self.web
        values: dict[int, Array] = {}
        arguments: dict[int, NDArray[np.intp]] = {}
        for region in reversed(self.order):
            shifts = self.shifts[region]
            value = own(web.regions[region], shifts)
            for branch in self.below.get(region, ()):
                message, arguments[branch.move] = self._message(branch, shifts, values, of, join, pick, worst)
                value = join(value, message)
            values[region] = value
        total = join.identity if join is np.add else np.inf
        shift_of = [region.low for region in web.regions]
        for pinned in web.regions:
            if is_pinned(pinned):
                total = join(total, own(pinned, np.array([pinned.low]))[0])
        picks = [0] * len(web.moves)
        for branch in self.loose:
            near = web.moves[branch.move].regions[branch.near]
            message, argument = self._message(branch, self.shifts[near], values, of, join, pick, worst)
            total = join(total, message[0])
            picks[branch.move] = int(argument[0])
        for root in self.roots:
            best = int(pick(values[root]))
            total = join(total, values[root][best])
            shift_of[root] = int(self.shifts[root][best])
        if not np.isfinite(total) and total == worst:
            raise NoWalk
        for region in self.order:
            for branch in self.below.get(region, ()):
                move = web.moves[branch.move]
                picked = int(
                    arguments[branch.move][self.index[region][shift_of[region] - web.regions[region].low]]
                )
                picks[branch.move] = picked
                reference = shift_of[region] - move.offsets[branch.near, picked]
                for place in branch.far:
                    other = move.regions[place]
                    if not is_pinned(web.regions[other]):
                        shift_of[other] = int(reference + move.offsets[place, picked])
        return Found(float(total), tuple(shift_of), tuple(picks))

    def _message(
        self, branch: Branch, shifts: Steps, values: dict[int, Array], of: Callable[[Branch, Steps], Array], join: np.ufunc,
        pick: Callable[..., NDArray[np.intp]], worst: float,
    ) -> tuple[Array, NDArray[np.intp]]:  # fmt: skip
        """What a move and all behind it make of each shift of the near region, and by which position."""
        move = self.web.moves[branch.move]
        if branch.move not in self._kept:
            reference = shifts[None, :] - move.offsets[branch.near][:, None]
            places = [
                self._places(move.regions[place], reference + move.offsets[place][:, None])
                for place in branch.far
            ]
            self._kept[branch.move] = (reference, places, None)
        reference, places, _ = self._kept[branch.move]
        found = np.broadcast_to(of(branch, reference), reference.shape)
        nothing = np.zeros(1) if join is np.add else np.full(1, np.inf)
        for place, at in zip(branch.far, places, strict=True):
            other = move.regions[place]
            behind = nothing if is_pinned(self.web.regions[other]) else values[other]
            found = join(found, np.append(behind, worst)[at])
        argument = pick(found, axis=0)
        return np.take_along_axis(found, argument[None, :], axis=0)[0], argument

    def _noise(self, branch: Branch) -> Array:
        """A move's own noise at each position and shift of its near region."""
        reference, places, noise = self._kept[branch.move]
        if noise is None:
            noise = self.web.moves[branch.move].noise[:, None] * _falls(reference)
            self._kept[branch.move] = (reference, places, noise)
        return noise


def _falls(shifts: Steps) -> Array:
    """What noise over programme becomes after a shift: 10**(-s/10)."""
    return np.asarray(10.0 ** (shifts * (-STEP_DB / 10.0)))


def dues(region: Region, shifts: Steps) -> Array:
    """What a region's shifts cost: dB outside its working ranges."""
    found = np.zeros(shifts.shape)
    for due in region.dues:
        outside = np.maximum(due.low_db - shifts * STEP_DB, shifts * STEP_DB - due.high_db)
        found += due.per_db * np.maximum(outside, 0.0)
    return found


def noise_of(web: Web, found: Found) -> float:
    """Noise over programme at the ends after a walk."""
    own = sum(region.noise * 10.0 ** (-shift * STEP_DB / 10.0)
              for region, shift in zip(web.regions, found.shifts, strict=True))  # fmt: skip
    moved: float = sum(
        float(move.noise[pick]) * 10.0 ** (-(found.shifts[move.regions[0]]) * STEP_DB / 10.0)
        for move, pick in zip(web.moves, found.picks, strict=True)
    )
    return float(own) + moved


def cost_of(web: Web, found: Found) -> float:
    """What a walk costs a hand."""
    own = sum(float(dues(region, np.array([shift]))[0])
              for region, shift in zip(web.regions, found.shifts, strict=True))  # fmt: skip
    return own + sum(float(move.cost[pick]) for move, pick in zip(web.moves, found.picks, strict=True))


def lever_positions(web: Web, found: Found) -> dict[int, int]:
    """The position each lever takes."""
    return {
        lever: place
        for move, pick in zip(web.moves, found.picks, strict=True)
        for lever, place in zip(move.levers, move.picks[pick], strict=True)
    }
