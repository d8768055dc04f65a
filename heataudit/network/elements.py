"""The reduced network of a batch of phases: a handful of elements between a handful of nodes.

Everything is scaled: flows by each phase's pump flow, pressures by `PRESSURE_SCALE`. Node -1 is the tank. An element
carries the flow q away from `flow_from` and brings `ratio` times q to `flow_to`; the pressure that drives it is
p[pressure_from] - gain p[pressure_to]. For most elements both pairs of nodes are the same and ratio equals gain (1,
or the area ratio of the cylinder inside); a pump's slip is driven by outlet less inlet and leaves by the drain.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from heataudit.network.linear import Array, BatchedLU
from heataudit.physics.lines import LineShape, line_drop

PRESSURE_SCALE = 1e7
"""Pressure [Pa] by which all pressures of the reduced network are divided (100 bar)."""

LAMINAR_FLOW = 1e-6
"""Flow [-], as a share of the pump flow, below which a throttle is taken as linear, so that its slope stays finite."""

LEAST_SLOPE = 1e-10
"""Slope [-] that every law has at the least (100 bar per pump flow): without it a pump at its setting, or a load
without a line or a spool, would be infinitely conductive. It costs at most 0.001 Pa at the whole pump flow."""

NODE_LEAK = 1e-11
"""Leak [-] of every node to the tank (pump flow per 100 bar): it fixes the pressure behind a closed check."""

Integers = NDArray[np.intp]


@dataclass(frozen=True)
class LinePlaces:
    """Lines inside elements: place k lies in element `element[k]` (the same for all phases), its line may differ.

    All arrays, those of `shape` too, are of shape (places, batch), SI; an empty place has length 0.
    """

    element: Integers
    flow_factor: Array
    pressure_factor: Array
    shape: LineShape
    viscosity: Array
    density: Array

    def take(self, rows: Integers) -> LinePlaces:
        """The same places for some rows of the batch."""
        return LinePlaces(
            self.element,
            np.take(self.flow_factor, rows, axis=1),
            np.take(self.pressure_factor, rows, axis=1),
            LineShape(*(np.take(values, rows, axis=1) for values in self.shape)),
            np.take(self.viscosity, rows, axis=1),
            np.take(self.density, rows, axis=1),
        )


@dataclass(frozen=True)
class Elements:
    """Elements of the reduced network, arrays of shape (elements, batch), scaled."""

    node_count: int
    flow_from: Integers
    flow_to: Integers
    pressure_from: Integers
    pressure_to: Integers
    ratio: Array
    gain: Array
    constant: Array
    linear: Array
    quadratic: Array
    power: Array
    low: Array
    high: Array
    active: NDArray[np.bool_]
    injection: Array
    flow_scale: Array
    lines: LinePlaces

    @property
    def batch(self) -> int:
        """Number of phases [-] in the batch."""
        return self.constant.shape[1]

    def take(self, rows: Integers) -> Elements:
        """The same network for some rows of the batch."""
        per_row = ("ratio", "gain", "constant", "linear", "quadratic", "power", "low", "high", "active", "injection")
        arrays: dict[str, Any] = {name: np.take(getattr(self, name), rows, axis=1) for name in per_row}
        taken = replace(self, flow_scale=self.flow_scale[rows], lines=self.lines.take(rows), **arrays)
        taken.__dict__["solver"] = self.solver
        return taken

    def laws(self, flow: Array) -> tuple[Array, Array]:
        """Drop that each element needs and its slope over flow [-], shapes (elements, batch), at the flow [-]."""
        root = np.sqrt(flow * flow + LAMINAR_FLOW**2)
        linear = self.linear + LEAST_SLOPE
        drop = self.constant + flow * (linear + self.quadratic * root)
        slope = linear + self.quadratic * (2.0 * root - LAMINAR_FLOW**2 / root)
        for limited in np.flatnonzero(self.power.any(axis=1)):
            _limit(drop[limited], slope[limited], flow[limited], self.power[limited])
        lines = self.lines
        if lines.element.size:
            line_flow = lines.flow_factor * flow[lines.element] * self.flow_scale
            line, rise = line_drop(line_flow, lines.shape, lines.viscosity, lines.density)
            line *= lines.pressure_factor / PRESSURE_SCALE
            rise *= lines.pressure_factor * lines.flow_factor * (self.flow_scale / PRESSURE_SCALE)
            for place, element in enumerate(lines.element):
                drop[element] += line[place]
                slope[element] += rise[place]
        return drop, slope

    def driving(self, pressure: Array) -> Array:
        """Pressure [-] that drives each element, shape (elements, batch), from node pressures (nodes, batch)."""
        with_tank = np.concatenate([pressure, np.zeros((1, pressure.shape[1]))])
        return with_tank[self.pressure_from] - self.gain * with_tank[self.pressure_to]

    def outflow(self, flow: Array) -> Array:
        """Flow [-] that leaves each node through elements, shape (nodes, batch), from element flows."""
        out = np.zeros((self.node_count + 1, flow.shape[1]))
        arriving = self.ratio * flow
        for e, (start, end) in enumerate(zip(self.flow_from, self.flow_to, strict=True)):
            out[start] += flow[e]
            out[end] -= arriving[e]
        return out[:-1]

    def node_residual(self, flow: Array, pressure: Array) -> Array:
        """Flow [-] that each node lacks or has left over, shape (nodes, batch)."""
        return self.outflow(flow) + NODE_LEAK * pressure - self.injection

    @cached_property
    def solver(self) -> BatchedLU:
        """Elimination plan of the node equations."""
        rows = np.stack([self.flow_from, self.flow_from, self.flow_to, self.flow_to]).ravel()
        columns = np.stack([self.pressure_from, self.pressure_to, self.pressure_from, self.pressure_to]).ravel()
        places = {(int(i), int(j)) for i, j in zip(rows, columns, strict=True) if i >= 0 and j >= 0}
        return BatchedLU(self.node_count, places)

    def factorise(self, conductance: Array) -> Array:
        """Factors of the node matrix for element conductances [-] d flow / d drop, shape (elements, batch)."""
        solver = self.solver
        values = np.zeros((solver.entry_count, conductance.shape[1]))
        for node in range(self.node_count):
            values[solver.slot[(node, node)]] = NODE_LEAK
        arriving = self.ratio * conductance
        back = self.gain * conductance
        both = self.ratio * back
        for e in range(len(self.flow_from)):
            start, end = self.flow_from[e], self.flow_to[e]
            first, second = self.pressure_from[e], self.pressure_to[e]
            for row, column, value, sign in (
                (start, first, conductance, 1), (start, second, back, -1),
                (end, first, arriving, -1), (end, second, both, 1),
            ):  # fmt: skip
                if row >= 0 and column >= 0:
                    slot = solver.slot[(int(row), int(column))]
                    if sign > 0:
                        values[slot] += value[e]
                    else:
                        values[slot] -= value[e]
        solver.factorise(values)
        return values

    def direction(self, factors: Array, conductance: Array, law_side: Array, node_side: Array) -> tuple[Array, Array]:
        """Newton step of flows and pressures [-].

        Solves  step_q / conductance - driving(step_p) = law_side  and  outflow(step_q) + leak step_p = node_side.
        """
        eliminated = conductance * law_side
        step_p = node_side - self.outflow(eliminated)
        self.solver.solve(factors, step_p)
        return eliminated + conductance * self.driving(step_p), step_p


def _limit(drop: Array, slope: Array, flow: Array, power: Array) -> None:
    """Raise a pump's drop [-] to where its flow [-] times its pressure is no more than the power [-], in place."""
    limits = (power > 0) & (flow > 0)
    flow = np.where(limits, flow, 1.0)
    limit = np.where(limits, -power / flow, -np.inf)
    over = limit > drop
    drop[over] = limit[over]
    slope[over] = (power / flow**2)[over]
