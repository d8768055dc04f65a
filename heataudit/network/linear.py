"""Sparse linear systems of one pattern and many sets of values, factorised together.

All phases of a machine share the places where their node equations have entries. The elimination is therefore planned
once, on the pattern alone, and every arithmetic step runs over the whole batch. No pivoting: node equations of a
hydraulic network are dominated by their diagonal.
"""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

LEAST_PIVOT = 1e-14
"""Pivot [-] at the least, as a share of the diagonal before elimination: about what rounding leaves of it."""


class BatchedLU:
    """LU factorisation of one sparsity pattern over a batch of matrices (Doolittle, minimum degree order).

    Parameters
    ----------
    size
        Number of unknowns [-].
    entries
        Places (row, column) [-] that may be non-zero. The diagonal and the fill are added here.
    """

    def __init__(self, size: int, entries: Iterable[tuple[int, int]]) -> None:
        """Plan the elimination."""
        pattern = set(entries) | {(i, i) for i in range(size)}
        self.size = size
        self.order = _minimum_degree(size, pattern)
        self.slot: dict[tuple[int, int], int] = {place: k for k, place in enumerate(sorted(pattern))}
        self._plan: list[tuple[int, list[tuple[int, list[tuple[int, int]]]]]] = []
        self._lower: list[list[tuple[int, int]]] = []
        self._upper: list[list[tuple[int, int]]] = []
        self._eliminate(pattern)

    def _eliminate(self, pattern: set[tuple[int, int]]) -> None:
        """Record the elimination steps and add the places that fill in."""
        left = set(range(self.size))
        for k in self.order:
            left.discard(k)
            below = [i for i in sorted(left) if (i, k) in pattern]
            right = [j for j in sorted(left) if (k, j) in pattern]
            steps = []
            for i in below:
                for j in right:
                    if (i, j) not in pattern:
                        pattern.add((i, j))
                        self.slot[(i, j)] = len(self.slot)
                steps.append((self.slot[(i, k)], [(self.slot[(i, j)], self.slot[(k, j)]) for j in right]))
            self._plan.append((self.slot[(k, k)], steps))
            self._lower.append([(i, self.slot[(i, k)]) for i in below])
            self._upper.append([(j, self.slot[(k, j)]) for j in right])

    @property
    def entry_count(self) -> int:
        """Number of stored places [-], fill included."""
        return len(self.slot)

    def factorise(self, values: Array) -> None:
        """Turn values [any], shape (entry_count, batch), into the factors, in place.

        A pivot that cancels to nothing, that of oil which hangs together and is shut off from the rest, is held at
        `LEAST_PIVOT` of what it was.
        """
        least = {pivot: LEAST_PIVOT * values[pivot] for pivot, _ in self._plan}
        for pivot, steps in self._plan:
            inverse = 1.0 / np.maximum(values[pivot], least[pivot])
            values[pivot] = inverse
            for factor, updates in steps:
                values[factor] *= inverse
                for target, source in updates:
                    values[target] -= values[factor] * values[source]

    def solve(self, factors: Array, right_side: Array) -> None:
        """Replace right_side [any], shape (size, batch), by the solution, in place."""
        for k, lower in zip(self.order, self._lower, strict=True):
            for i, factor in lower:
                right_side[i] -= factors[factor] * right_side[k]
        for k, upper in zip(reversed(self.order), reversed(self._upper), strict=True):
            for j, factor in upper:
                right_side[k] -= factors[factor] * right_side[j]
            right_side[k] *= factors[self.slot[(k, k)]]


def _minimum_degree(size: int, pattern: set[tuple[int, int]]) -> list[int]:
    """Elimination order that keeps the fill small: always the unknown with the fewest neighbours left."""
    neighbours: dict[int, set[int]] = {i: set() for i in range(size)}
    for i, j in pattern:
        if i != j:
            neighbours[i].add(j)
            neighbours[j].add(i)
    order = []
    while neighbours:
        k = min(neighbours, key=lambda i: (len(neighbours[i]), i))
        around = neighbours.pop(k)
        for i in around:
            neighbours[i] |= around - {i}
            neighbours[i].discard(k)
        order.append(k)
    return order
