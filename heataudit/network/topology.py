"""Which branches carry flow in which phases, and how they line up in series.

Phases with the same open branches share a pattern. In each pattern, what cannot carry flow is pruned (a node with a
single way, or with ways in only or out only, closes them; repeated), and branches in series fold into chains between
the nodes that any pattern needs. Chains between the same two nodes share a slot of the reduced network from pattern to
pattern, so that all phases are solved in one batch.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from heataudit.network.branches import Branches

Rows = NDArray[np.intp]


class Ends(NamedTuple):
    """Raw nodes that a slot connects, and those whose pressures drive it."""

    start: int
    end: int
    driven_from: int
    driven_to: int


@dataclass(frozen=True)
class Chain:
    """Branches in series from one kept node to another: (branch, +1 along it or -1 against it)."""

    ends: Ends
    items: tuple[tuple[int, int], ...]


@dataclass(frozen=True)
class Pattern:
    """Phases with the same open branches, and the chains that carry their flow; `slots` number the chains."""

    rows: Rows
    chains: tuple[Chain, ...]
    slots: tuple[int, ...]


class Run(NamedTuple):
    """A chain in its slot, and all the phases in which it stands there."""

    chain: Chain
    slot: int
    rows: Rows


@dataclass(frozen=True)
class Topology:
    """Patterns of a batch and the reduced network that they share.

    `kept` are the raw nodes that the reduced network keeps, in the order of its nodes (the tank is not among them).
    `runs` are the chains of all patterns, the same chain once.
    """

    patterns: tuple[Pattern, ...]
    kept: tuple[int, ...]
    slots: tuple[Ends, ...]
    runs: tuple[Run, ...]


def analyse(branches: Branches) -> Topology:
    """Find the patterns of a batch and fold each into chains."""
    feeds = np.array([np.sign(i.flow) for i in branches.injections], np.int8).reshape(-1, branches.phases)
    signature = np.concatenate([branches.open, feeds > 0, feeds < 0])
    packed = np.packbits(signature, axis=0)
    _, first, inverse = np.unique(packed, axis=1, return_index=True, return_inverse=True)
    inverse = inverse.reshape(-1)
    order = np.argsort(inverse, kind="stable")
    groups = np.split(order, np.searchsorted(inverse[order], np.arange(1, len(first))))
    alive = [_prune(branches, branches.open[:, f], feeds[:, f]) for f in first]
    kept = set[int]()
    for living, f in zip(alive, first, strict=True):
        kept |= _junctions(branches, living, feeds[:, f])
    patterns, slots = [], _Slots()
    for living, rows in zip(alive, groups, strict=True):
        chains = _chains(branches, living, kept)
        patterns.append(Pattern(rows, chains, slots.assign(chains)))
    return Topology(tuple(patterns), tuple(sorted(kept - {0})), tuple(slots.ends), _runs(patterns))


def _runs(patterns: list[Pattern]) -> tuple[Run, ...]:
    """Chains of all patterns with all their phases."""
    where: dict[tuple[Chain, int], list[Rows]] = defaultdict(list)
    for pattern in patterns:
        for place in zip(pattern.chains, pattern.slots, strict=True):
            where[place].append(pattern.rows)
    return tuple(Run(chain, slot, np.concatenate(rows)) for (chain, slot), rows in where.items())


class _Slots:
    """Numbers for chains: the n-th chain between two nodes has the same number in every pattern."""

    def __init__(self) -> None:
        self.ends: list[Ends] = []
        self._numbers: dict[Ends, list[int]] = defaultdict(list)

    def assign(self, chains: tuple[Chain, ...]) -> tuple[int, ...]:
        used: dict[Ends, int] = defaultdict(int)
        numbers = []
        for chain in chains:
            ends = chain.ends
            taken = self._numbers[ends]
            if used[ends] == len(taken):
                taken.append(len(self.ends))
                self.ends.append(ends)
            numbers.append(taken[used[ends]])
            used[ends] += 1
        return tuple(numbers)


def _prune(branches: Branches, opened: NDArray[np.bool_], feeds: NDArray[np.int8]) -> NDArray[np.bool_]:
    """Branches that can carry flow: of those open, none may end at a node that lacks a way in or a way out."""
    alive = opened.copy()
    one_way = [k for k, item in enumerate(branches.items) if item.one_way]
    forward_only = np.zeros(len(alive), bool)
    forward_only[one_way] = True
    while True:
        ways_in: dict[int, set[object]] = defaultdict(set)
        ways_out: dict[int, set[object]] = defaultdict(set)
        for injection, sign in zip(branches.injections, feeds, strict=True):
            if sign:
                ways = ways_in if sign > 0 else ways_out
                ways[injection.node].add(("feed", injection.component))
        for k in np.flatnonzero(alive).tolist():
            start, end = int(branches.start[k]), int(branches.end[k])
            ways_out[start].add(k)
            ways_in[end].add(k)
            if not forward_only[k]:
                ways_in[start].add(k)
                ways_out[end].add(k)
        dead = [
            k
            for k in np.flatnonzero(alive).tolist()
            for node in (int(branches.start[k]), int(branches.end[k]))
            if node and not _passes(ways_in[node], ways_out[node])
        ]
        if not dead:
            return alive & _is_joined(branches, alive, feeds)
        alive[dead] = False


def _is_joined(branches: Branches, alive: NDArray[np.bool_], feeds: NDArray[np.int8]) -> NDArray[np.bool_]:
    """Branches that hang together with the tank or a pump; nothing drives oil through the others."""
    around: dict[int, set[int]] = defaultdict(set)
    for k in np.flatnonzero(alive):
        around[int(branches.start[k])].add(int(branches.end[k]))
        around[int(branches.end[k])].add(int(branches.start[k]))
    joined = reached(around, 0)
    for injection, on in zip(branches.injections, feeds, strict=True):
        if on:
            joined |= reached(around, injection.node)
    return np.isin(branches.start, list(joined))


def _passes(ways_in: set[object], ways_out: set[object]) -> bool:
    """Whether oil can pass a node: a way in and another way out."""
    return bool(ways_in) and bool(ways_out) and len(ways_in | ways_out) > 1


def _junctions(branches: Branches, alive: NDArray[np.bool_], feeds: NDArray[np.int8]) -> set[int]:
    """Nodes at which branches cannot be folded: more than two ways, a pump, or another component's driving pressure."""
    degree: dict[int, int] = defaultdict(int)
    kept = {i.node for i, on in zip(branches.injections, feeds, strict=True) if on}
    for k in np.flatnonzero(alive):
        item = branches.items[k]
        degree[item.start] += 1
        degree[item.end] += 1
        if not branches.foldable[k]:
            kept |= {item.start, item.end, *item.driving_nodes}
    return kept | {node for node, count in degree.items() if count != 2}


def _chains(branches: Branches, alive: NDArray[np.bool_], kept: set[int]) -> tuple[Chain, ...]:
    """Fold the living branches of one pattern into chains between kept nodes."""
    around: dict[int, list[int]] = defaultdict(list)
    for number in np.flatnonzero(alive & branches.foldable).tolist():
        around[int(branches.start[number])].append(number)
        around[int(branches.end[number])].append(number)
    ends = {0} | kept
    used: set[int] = set()
    chains: list[Chain] = []
    for node in sorted(ends):
        for first in around[node]:
            if first in used:
                continue
            items: list[tuple[int, int]] = []
            here, k = node, first
            while True:
                used.add(k)
                forward = int(branches.start[k]) == here
                items.append((k, 1 if forward else -1))
                here = int(branches.end[k] if forward else branches.start[k])
                if here in ends:
                    break
                k = next(other for other in around[here] if other != k)
            chain = _oriented(branches, node, here, tuple(items))
            if chain is not None:
                chains.append(chain)
    for number in np.flatnonzero(alive & ~branches.foldable).tolist():
        item = branches.items[number]
        chains.append(Chain(Ends(item.start, item.end, *item.driving_nodes), ((number, 1),)))
    return tuple(chains)


def _oriented(branches: Branches, start: int, end: int, items: tuple[tuple[int, int], ...]) -> Chain | None:
    """The chain in the direction in which its one-way branches pass; None where they face each other."""
    signs = {sign for k, sign in items if branches.items[k].one_way}
    if len(signs) == 2:
        return None
    if signs == {-1}:
        start, end, items = end, start, tuple((k, -sign) for k, sign in reversed(items))
    return Chain(Ends(start, end, start, end), items)


def reached(around: Mapping[int, set[int]], start: int) -> set[int]:
    """Nodes that can be reached from one node over neighbours."""
    seen, waiting = {start}, [start]
    while waiting:
        for node in around.get(waiting.pop(), set()) - seen:
            seen.add(node)
            waiting.append(node)
    return seen
