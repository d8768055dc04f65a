"""Places that components find by themselves: what stands where, and how far it is off.

An `Unknown` is one number per phase between `least` and 1: what a gallery lets pass, how far a spool is open, the
setting that a load-sensing line asks for. Component kinds make them; `openings` finds them all.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from heataudit.network.branches import Branches, Flags
from heataudit.network.elements import Integers
from heataudit.network.linear import Array
from heataudit.network.settle import Settled

if TYPE_CHECKING:
    from heataudit.network.assemble import Network


class Trial:
    """The numbers of a network that unknowns set, arrays of shape (branches, phases), SI."""

    def __init__(self, branches: Branches) -> None:
        """Start from the network as it is assembled."""
        self.branches = branches
        self.constant, self.quadratic = branches.constant.copy(), branches.quadratic.copy()
        self.high, self.open = branches.high.copy(), branches.open.copy()

    def placed(self) -> Branches:
        """The network with what was set."""
        return replace(self.branches, constant=self.constant, quadratic=self.quadratic, high=self.high, open=self.open)


class Look:
    """A solution of some phases (`rows` of the network's), as the unknowns look at it."""

    def __init__(self, network: Network, settled: Settled, rows: Integers) -> None:
        """All phases of the solution, in their order."""
        self.network, self.settled, self.rows = network, settled, rows

    def flow(self, branch: int) -> Array:
        """Flow [m³/s] in a branch, shape (rows,)."""
        return self.settled.state.flow[branch]

    def pressure(self, node: int) -> Array:
        """Pressure [Pa] of a node, NaN where nothing determines it, shape (rows,)."""
        return self.settled.state.pressure[node]

    def share(self, section: str) -> Array:
        """Opening of a spool [-] as a share of the allowed one, shape (rows,)."""
        share = np.ones(len(self.rows))
        for number, path in enumerate(self.network.paths):
            if self.network.actuators[path.actuator].row.section == section:
                share = np.minimum(share, self.settled.throttled.share[number])
        return share


class Unknown(ABC):
    """One number per phase [-] that a component finds by itself.

    `place` [-] is where it stands and `free` where it has to be found, both of shape (phases,); `least` [-] is its
    lower bound, 1 its upper; `tolerance` [-] is what it may be off by.
    """

    least = 0.0
    tolerance = 1e-9

    def __init__(self, place: Array, free: Flags) -> None:
        """Places to start from, and where they have to be found."""
        self.place, self.free = place, free

    @abstractmethod
    def set(self, trial: Trial, place: Array, rows: Integers) -> None:
        """Put places [-], shape (rows,), into a trial network of the phases `rows`."""

    @abstractmethod
    def excess(self, place: Array, look: Look) -> Array:
        """What a solution is off by [-], shape (rows,): 0 at the place that is looked for, or at an end that holds."""


PRESSURE_UNIT = 1e7
"""Pressure [Pa] by which excesses of pressure are divided (100 bar)."""

PRESSURE_TOLERANCE = 3e-7
"""Excess of pressure [100 bar] that counts as none, 3 Pa: where all consumers take what they ask and that is what the
pump gives, pressures change by as much from one floating-point number of a share to the next."""


def held_at_ends(excess: Array, place: Array, least: float, sign: float) -> Array:
    """An excess [-] that is none where it would drive a place [-] past its ends.

    `sign` is 1 where the place must grow while the excess is positive, else -1.
    """
    past_least = (place <= least) & (sign * excess < 0)
    past_most = (place >= 1.0) & (sign * excess > 0)
    return np.where(past_least | past_most, 0.0, excess)
