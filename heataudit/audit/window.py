"""The hottest stretch of a cycle."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from heataudit.physics.arrays import Array


class Window(NamedTuple):
    """A stretch of the cycle: start after the cycle's [s], length [s], mean heat [W]."""

    start: float
    length: float
    heat: float


def hottest_window(time: Array, heat: Array, length: float) -> Window:
    """The stretch of a repeating cycle with the highest mean heat; the whole cycle where it is not longer than that.

    The highest mean is found where a window begins or ends with a phase.

    Parameters
    ----------
    time
        Length of each phase, repeats counted [s], shape (phases,).
    heat
        Heat in each phase [W], shape (phases,).
    length
        Length of the stretch [s].

    Examples
    --------
    >>> hottest_window(np.array([10.0, 5.0, 5.0]), np.array([0.0, 300.0, 100.0]), 10.0)
    Window(start=10.0, length=10.0, heat=200.0)
    """
    ends = np.cumsum(time)
    cycle = float(ends[-1])
    energies = np.cumsum(time * heat)
    if length >= cycle:
        return Window(0.0, cycle, float(energies[-1] / cycle))
    edges = np.concatenate([[0.0], ends, ends + cycle])
    collected = np.concatenate([[0.0], energies, energies + energies[-1]])
    starts = np.concatenate([[0.0], ends[:-1], np.mod(ends - length, cycle)])
    means = (np.interp(starts + length, edges, collected) - np.interp(starts, edges, collected)) / length
    best = int(np.argmax(means))
    return Window(float(starts[best]), length, float(means[best]))
