"""Rows while they are being laid out: who feeds whom, before they are put in ranks.

Rows are added parents first, so a row's index is higher than those of all it hears.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum

SILENCE = 0


class Sort(Enum):
    """How a row hears its parents."""

    SINGLE = "single"  # one parent, times the row's gain
    JOIN = "join"  # several parents, weighted
    PAIR = "pair"  # the covariance of two rows, one parent
    PAIR_JOIN = "pair join"  # the covariance of a join with another row


@dataclass
class DraftRow:
    """One row. `heard` lists (row, members alike); `group` names the members it stands for, None for a single one."""

    sort: Sort
    heard: list[tuple[int, int]]
    group: str | None = None
    rule: str = "origin"
    twin: bool = False  # a pair row of two members alike: carries the power gain, not the amplitude gain
    pair_of: int = SILENCE
    extra: list[tuple[int, float]] = field(default_factory=list)  # covariance rows of a join, with weights


@dataclass(frozen=True)
class NetPair:
    """A covariance row of two nodes of one net, which both hear the thermal noise of the same resistances."""

    row: int
    one: int
    other: int
    unlike: bool


@dataclass
class Draft:
    """The list of rows, silence first, and the covariance rows found so far."""

    rows: list[DraftRow] = field(default_factory=lambda: [DraftRow(Sort.SINGLE, [])])
    group_size: dict[str, int] = field(default_factory=dict)
    net_of: dict[int, int] = field(default_factory=dict)  # the net a row is a node of
    net_pairs: list[NetPair] = field(default_factory=list)
    _pairs: dict[tuple[int, int, bool], int] = field(default_factory=dict)
    _splits: list[int] | None = None

    def add_single(self, parent: int, group: str | None) -> int:
        """A row with one parent; its index."""
        self.rows.append(DraftRow(Sort.SINGLE, [(parent, 1)], group))
        return len(self.rows) - 1

    def add_join(self, heard: list[tuple[int, int]], group: str | None, rule: str) -> int:
        """A row that adds several; its index. `rule` is "origin", "coherent" or "power"."""
        self.rows.append(DraftRow(Sort.JOIN, heard, group, rule))
        return len(self.rows) - 1

    # -- what is heard twice -------------------------------------------------------------------------------
    def find_shared(self) -> None:
        """Give every join the covariance rows that make what it hears twice add as voltage."""
        self._splits = self._split_bits()
        for index in [i for i, row in enumerate(self.rows) if row.sort is Sort.JOIN and row.rule != "power"]:
            join = self.rows[index]
            later = self._bits_behind(join)
            for place, (row, members) in enumerate(join.heard):
                if members > 1:
                    self._put(join, self._pair(row, row, unlike=True), members * (members - 1.0))
                if not self._splits[row] & later[place]:
                    continue
                for other, other_members in join.heard[place + 1 :]:
                    self._put_two(join, (row, members), (other, other_members))

    def _bits_behind(self, join: DraftRow) -> list[int]:
        """For each row a join hears, the bits of all that it hears behind it in the list."""
        assert self._splits is not None
        found, bits = [0], 0
        for row, _ in reversed(join.heard[1:]):
            bits |= self._splits[row]
            found.append(bits)
        return found[::-1]

    def _put_two(self, join: DraftRow, one: tuple[int, int], two: tuple[int, int]) -> None:
        (row, members), (other, other_members) = one, two
        group = self.rows[row].group
        if members > 1 and other_members > 1 and group is not None and group == self.rows[other].group:
            self._put(join, self._pair(row, other, unlike=False), 2.0 * members)
            self._put(join, self._pair(row, other, unlike=True), 2.0 * members * (members - 1.0))
        else:
            self._put(join, self._pair(row, other, unlike=False), 2.0 * members * other_members)

    @staticmethod
    def _put(join: DraftRow, pair: int, weight: float) -> None:
        if pair != SILENCE and weight:
            join.extra.append((pair, weight))

    def _pair(self, one: int, two: int, *, unlike: bool) -> int:
        """The row that carries the covariance of two rows; silence where they have nothing in common.

        `unlike` asks for two different members of one group. The later row is taken apart: what it adds of its
        own is independent of the other, so only its parents' covariance counts, times its amplitude gain. But two nodes
        of one net share the thermal noise of its resistances: such pairs are listed, and their rows add it.
        """
        if one == two and not unlike:
            return one
        late, early = max(one, two), min(one, two)
        if not unlike and not self._have_common(late, early):
            return SILENCE
        key = (late, early, unlike)
        if key not in self._pairs:
            self._pairs[key] = (
                self._twin(late) if late == early else self._taken_apart(late, early, unlike=unlike)
            )
            nets = [self.net_of.get(row) for row in (late, early)]
            if self._pairs[key] != SILENCE and None not in nets and nets[0] == nets[1]:
                self.net_pairs.append(NetPair(self._pairs[key], late, early, unlike))
        return self._pairs[key]

    def _twin(self, row: int) -> int:
        """Covariance of two members alike of one row."""
        draft = self.rows[row]
        if draft.sort is Sort.JOIN:
            terms = [
                (self._between(one, two, draft.group, unlike=True), 1.0)
                for one, _ in draft.heard
                for two, _ in draft.heard
            ]
            return self._add_pair_join(terms)
        parent = draft.heard[0][0] if draft.heard else SILENCE
        return self._add_pair(self._between(parent, parent, draft.group, unlike=True), row, twin=True)

    def _between(self, one: int, two: int, group: str | None, *, unlike: bool) -> int:
        """The covariance of parents as members of `group` hear them: outside it there is only one of each."""
        both_inside = group is not None and self.rows[one].group == group and self.rows[two].group == group
        return self._pair(one, two, unlike=unlike and both_inside)

    def _taken_apart(self, late: int, early: int, *, unlike: bool) -> int:
        draft = self.rows[late]
        if draft.sort is not Sort.JOIN:
            parent = draft.heard[0][0] if draft.heard else SILENCE
            if parent == SILENCE:
                return SILENCE
            stays = unlike and self.rows[parent].group == draft.group
            return self._add_pair(self._pair(parent, early, unlike=stays), late, twin=False)
        terms: list[tuple[int, float]] = []
        for parent, members in draft.heard:
            inside = self.rows[parent].group
            if members > 1 and inside is not None and inside == self.rows[early].group:
                terms.append((self._pair(parent, early, unlike=False), 1.0))
                terms.append((self._pair(parent, early, unlike=True), members - 1.0))
            else:
                stays = unlike and inside == draft.group
                terms.append((self._pair(parent, early, unlike=stays), float(members)))
        return self._add_pair_join(terms)

    def _add_pair(self, parent: int, of: int, *, twin: bool) -> int:
        if parent == SILENCE:
            return SILENCE
        self.rows.append(DraftRow(Sort.PAIR, [(parent, 1)], twin=twin, pair_of=of))
        return len(self.rows) - 1

    def _add_pair_join(self, terms: list[tuple[int, float]]) -> int:
        kept = [(row, weight) for row, weight in terms if row != SILENCE and weight]
        if not kept:
            return SILENCE
        self.rows.append(DraftRow(Sort.PAIR_JOIN, [], extra=kept))
        return len(self.rows) - 1

    # -- who has a common origin ---------------------------------------------------------------------------
    def _split_bits(self) -> list[int]:
        """For each row, the rows feeding several others (or a group) that it hears, itself among them, as bits.

        Where one row is on the way to another and both are heard by a third, the first feeds several: its own bit tells.
        """
        children = [0] * len(self.rows)
        for row in self.rows:
            for parent, _ in row.heard:
                entering = row.group is not None and self.rows[parent].group != row.group
                children[parent] += 2 if entering else 1
        bits: list[int] = []
        splits = 0
        for index, row in enumerate(self.rows):
            own = 0
            if index != SILENCE and children[index] > 1:
                own = 1 << splits
                splits += 1
            for parent, _ in row.heard:
                own |= bits[parent]
            bits.append(own)
        return bits

    def _have_common(self, one: int, two: int) -> bool:
        assert self._splits is not None
        return bool(self._splits[one] & self._splits[two])
