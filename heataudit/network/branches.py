"""The full network of a batch of phases: every component as one or more branches between nodes.

A branch is what a component is to the solver: where its flow goes, and the pressure drop that it needs,

    constant + linear q + quadratic q |q| (+ the friction of a line),   low <= q <= high,

and at least -power / q where a power limits a pump.

Component kinds (the modules in `network.kinds`) make `Branch` objects; `stack` lays them out as arrays of shape
(branches, phases) in SI units.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from heataudit.network.linear import Array
from heataudit.physics.lines import LineShape

Value = float | Array
Flags = NDArray[np.bool_]


def some_phases(line: LineShape, rows: NDArray[np.intp]) -> LineShape:
    """The same line for some of the phases."""
    return LineShape(*(value if np.ndim(value) == 0 else np.asarray(value)[rows] for value in line))


@dataclass(frozen=True)
class Branch:
    """One branch; numbers are scalars or arrays of shape (phases,), SI.

    `ratio` is the flow at the end per flow at the start [-], `gain` the weight [-] of the pressure at the end: the
    area ratio of a cylinder, else 1. A pump's slip and its displacement box are driven by other nodes than those
    that they connect (`driven_from`, `driven_to`). A `lazy` branch is left out until the pressures would open it, or
    until the pressure of the node `pilot` lifts it (`pilot_ratio` x pilot pressure against the pressure from end to
    start); then it stands in the place of the component's branch of the role `replaces`.
    """

    component: str
    role: str
    start: int
    end: int
    constant: Value = 0.0
    linear: Value = 0.0
    quadratic: Value = 0.0
    power: Value = 0.0
    low: Value = -np.inf
    high: Value = np.inf
    ratio: Value = 1.0
    gain: Value = 1.0
    open: bool | Flags = True
    line: LineShape | None = None
    driven_from: int | None = None
    driven_to: int | None = None
    lazy: bool = False
    pilot: int = -1
    pilot_ratio: float = 0.0
    replaces: str = ""

    @property
    def driving_nodes(self) -> tuple[int, int]:
        """Nodes whose pressures drive the branch."""
        return (
            self.start if self.driven_from is None else self.driven_from,
            self.end if self.driven_to is None else self.driven_to,
        )

    @property
    def one_way(self) -> bool:
        """Whether oil passes from start to end only."""
        return bool(np.all(np.asarray(self.low) >= 0))


@dataclass(frozen=True)
class Injection:
    """Flow [m³/s] that a fixed pump brings to a node (negative: takes from it), shape (phases,)."""

    component: str
    node: int
    flow: Array


class MovePath(NamedTuple):
    """Branches that an actuator's move uses in one direction: its own and those of its section, -1 where none."""

    actuator: int
    branch: int
    feed: int
    back: int


@dataclass(frozen=True)
class Branches:
    """All branches as arrays of shape (branches, phases), SI."""

    items: tuple[Branch, ...]
    injections: tuple[Injection, ...]
    node_count: int
    start: NDArray[np.intp]
    end: NDArray[np.intp]
    constant: Array
    linear: Array
    quadratic: Array
    power: Array
    low: Array
    high: Array
    ratio: Array
    gain: Array
    open: Flags
    flow_scale: Array
    viscosity: Array
    density: Array
    foldable: Flags = field(repr=False)
    lazy: Flags = field(repr=False)

    @property
    def phases(self) -> int:
        """Number of phases [-]."""
        return self.constant.shape[1]

    def take(self, rows: NDArray[np.intp]) -> Branches:
        """The same network for some of the phases."""
        per_row = ("constant", "linear", "quadratic", "power", "low", "high", "ratio", "gain", "open")
        arrays: dict[str, Any] = {name: np.take(getattr(self, name), rows, axis=1) for name in per_row}
        arrays |= {name: getattr(self, name)[rows] for name in ("flow_scale", "viscosity", "density")}
        return replace(
            self,
            items=tuple(i if i.line is None else replace(i, line=some_phases(i.line, rows)) for i in self.items),
            injections=tuple(Injection(i.component, i.node, i.flow[rows]) for i in self.injections),
            **arrays,
        )


def stack(
    items: Sequence[Branch], injections: Sequence[Injection], node_count: int, oil: tuple[Array, Array], scale: Array
) -> Branches:
    """Lay branches out as arrays.

    Parameters
    ----------
    items, injections
        What the component kinds made.
    node_count
        Number of nodes [-], the tank (node 0) included.
    oil
        Kinematic viscosity [m²/s] and density [kg/m³] of each phase, shape (phases,).
    scale
        Flow [m³/s] by which the flows of each phase are scaled in the solver, shape (phases,).
    """
    phases = len(scale)

    def rows(name: str) -> Array:
        values = np.empty((len(items), phases))
        for k, item in enumerate(items):
            values[k] = getattr(item, name)
        return values

    return Branches(
        items=tuple(items),
        injections=tuple(injections),
        node_count=node_count,
        start=np.array([i.start for i in items], np.intp),
        end=np.array([i.end for i in items], np.intp),
        open=rows("open").astype(bool) & ~np.array([i.lazy for i in items], bool)[:, None],
        flow_scale=scale,
        viscosity=oil[0],
        density=oil[1],
        foldable=np.array([i.driven_from is None for i in items], bool),
        lazy=np.array([i.lazy for i in items], bool),
        **{name: rows(name) for name in ("constant", "linear", "quadratic", "power", "low", "high", "ratio", "gain")},
    )
