"""The batched elimination against LAPACK, on patterns and values as node equations have them."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from heataudit.network.linear import BatchedLU

Array = np.ndarray[Any, Any]


def stored(solver: BatchedLU, matrices: Array) -> Array:
    """Matrices, shape (batch, size, size), as the solver keeps them."""
    values = np.zeros((solver.entry_count, len(matrices)))
    for (i, j), slot in solver.slot.items():
        values[slot] = matrices[:, i, j]
    return values


def networks(seed: int, size: int, batch: int) -> tuple[set[tuple[int, int]], Array]:
    """Node matrices C D C^T + leak of random networks: resistances over 8 decades, area ratios, some ways closed."""
    rng = np.random.default_rng(seed)
    ways = [(i, int(rng.integers(-1, i))) for i in range(size)]  # a tree that reaches the tank (-1)
    ways += [tuple(rng.integers(-1, size, 2).tolist()) for _ in range(size)]
    matrices = np.zeros((batch, size, size))
    matrices[:] = 1e-9 * np.eye(size)
    places = set()
    for start, end in ways:
        if start == end:
            continue
        column = np.zeros((batch, size))
        conductance = 10.0 ** rng.uniform(-4, 4, batch) * (rng.random(batch) < 0.9)
        if start >= 0:
            column[:, start] += 1.0
        if end >= 0:
            column[:, end] -= np.where(rng.random(batch) < 0.3, rng.uniform(0.3, 1.0, batch), 1.0)
        matrices += conductance[:, None, None] * column[:, :, None] * column[:, None, :]
        places |= {(i, j) for i in (start, end) for j in (start, end) if i >= 0 and j >= 0}
    return places, matrices


@settings(max_examples=60, deadline=None, derandomize=True)
@given(st.integers(0, 2**31), st.integers(1, 12), st.integers(1, 5))
def test_node_equations_as_lapack_solves_them(seed: int, size: int, batch: int) -> None:
    places, matrices = networks(seed, size, batch)
    solver = BatchedLU(size, places)
    right = np.random.default_rng(seed + 1).normal(size=(size, batch))
    factors, found = stored(solver, matrices), right.copy()
    solver.factorise(factors)
    solver.solve(factors, found)
    expected = np.linalg.solve(matrices, right.T[:, :, None])[:, :, 0].T  # numpy.linalg.solve, pivoted LU of LAPACK
    # Backward stability (Higham, Accuracy and Stability of Numerical Algorithms, 2002, theorem 10.3: symmetric positive
    # definite matrices need no pivoting): the residual is small against |A| |x|, and what both solutions differ by is
    # within the condition number times rounding.
    left = np.einsum("bij,jb->ib", matrices, found) - right
    size_of = np.einsum("bij,jb->ib", np.abs(matrices), np.abs(found)) + np.abs(right)
    assert (np.abs(left) <= 1e-13 * size * size_of.max(axis=0)).all()
    for b in range(batch):
        limit = 1e-15 * size**2 * np.linalg.cond(matrices[b]) * np.abs(expected[:, b]).max()
        assert np.abs(found[:, b] - expected[:, b]).max() <= limit


@settings(max_examples=40, deadline=None, derandomize=True)
@given(st.integers(0, 2**31), st.integers(1, 9))
def test_unsymmetric_diagonally_dominant_systems(seed: int, size: int) -> None:
    """Slip is driven by other nodes than those it connects: the matrix is not symmetric."""
    rng = np.random.default_rng(seed)
    matrices = rng.normal(size=(4, size, size)) * (rng.random((size, size)) < 0.5)
    matrices[:, range(size), range(size)] = 1.0 + np.abs(matrices).sum(axis=2)
    solver = BatchedLU(size, {(i, j) for i in range(size) for j in range(size) if matrices[0, i, j] != 0})
    right = rng.normal(size=(size, 4))
    factors, found = stored(solver, matrices), right.copy()
    solver.factorise(factors)
    solver.solve(factors, found)
    expected = np.linalg.solve(matrices, right.T[:, :, None])[:, :, 0].T  # numpy.linalg.solve
    assert found == pytest.approx(expected, rel=1e-11, abs=1e-13)


def test_rows_of_a_batch_do_not_touch_each_other() -> None:
    places, matrices = networks(7, 8, 6)
    solver = BatchedLU(8, places)
    right = np.random.default_rng(3).normal(size=(8, 6))
    factors, together = stored(solver, matrices), right.copy()
    solver.factorise(factors)
    solver.solve(factors, together)
    for b in range(6):
        factors, alone = stored(solver, matrices[b : b + 1]), right[:, b : b + 1].copy()
        solver.factorise(factors)
        solver.solve(factors, alone)
        assert (alone[:, 0] == together[:, b]).all()  # the same arithmetic in the same order


def test_a_chain_fills_nothing_in() -> None:
    # Minimum degree on a tree eliminates leaves first: no fill (Rose, 1972). A star shows it: the hub comes last.
    star = {(0, i) for i in range(1, 9)} | {(i, 0) for i in range(1, 9)}
    solver = BatchedLU(9, star)
    assert solver.entry_count == 9 + 16
    assert 0 in solver.order[-2:]


def test_nothing_to_solve() -> None:
    solver = BatchedLU(0, set())
    values, right = np.zeros((solver.entry_count, 3)), np.zeros((0, 3))
    solver.factorise(values)
    solver.solve(values, right)
    assert right.shape == (0, 3)
