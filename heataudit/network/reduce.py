"""Fold the full network of a batch into the reduced one."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from heataudit.network.branches import Branches, some_phases
from heataudit.network.elements import PRESSURE_SCALE, Elements, LinePlaces
from heataudit.network.linear import Array
from heataudit.network.topology import Topology
from heataudit.physics.lines import LineShape


def _no_lines(element: NDArray[np.intp], phases: int) -> LinePlaces:
    """Places without a line in them: of length 0 and without fittings."""

    def full(value: float) -> Array:
        return np.full((len(element), phases), value)

    shape = LineShape(full(1.0), full(0.0), full(1.0), full(0.0), full(0.0), full(0.0), full(1.0))
    return LinePlaces(element, full(1.0), full(1.0), shape, full(1.0), full(1.0))


class Folding:
    """One way to fold a batch: which branch stands where, with which factors."""

    def __init__(self, branches: Branches, topology: Topology) -> None:
        """Number the nodes and the places of lines."""
        self.branches = branches
        self.topology = topology
        self._number = {node: k for k, node in enumerate(topology.kept)} | {0: -1}
        self._places = self._number_line_places()

    def _number_line_places(self) -> list[int]:
        """How many lines each slot holds at the most, as the element of every place."""
        most = [0] * len(self.topology.slots)
        for chain, slot, _ in self.topology.runs:
            lines = sum(self.branches.items[k].line is not None for k, _ in chain.items)
            most[slot] = max(most[slot], lines)
        return [slot for slot, count in enumerate(most) for _ in range(count)]

    def elements(self, viscosity_factor: Array) -> Elements:
        """The reduced network, scaled.

        Parameters
        ----------
        viscosity_factor
            Factor [-] on the oil's viscosity in each branch that is a line, shape (branches, phases).
        """
        br, phases = self.branches, self.branches.phases
        slots = len(self.topology.slots)
        arrays = {name: np.zeros((slots, phases)) for name in ("constant", "linear", "quadratic", "power")}
        arrays |= {"ratio": np.ones((slots, phases)), "gain": np.ones((slots, phases))}
        arrays |= {"low": np.full((slots, phases), -np.inf), "high": np.full((slots, phases), np.inf)}
        active = np.zeros((slots, phases), bool)
        element = np.array(self._places, np.intp)
        lines = _no_lines(element, phases)
        for chain, slot, rows in self.topology.runs:
            active[slot, rows] = True
            free = iter(np.flatnonzero(element == slot).tolist())
            a = b = 1.0
            for k, sign in chain.items:
                arrays["constant"][slot, rows] += b * sign * br.constant[k, rows]
                arrays["linear"][slot, rows] += b * a * br.linear[k, rows]
                arrays["quadratic"][slot, rows] += b * a * a * br.quadratic[k, rows]
                arrays["power"][slot, rows] += br.power[k, rows]
                low, high = br.low[k, rows] / a, br.high[k, rows] / a
                low, high = (low, high) if sign > 0 else (-high, -low)
                arrays["low"][slot, rows] = np.maximum(arrays["low"][slot, rows], low)
                arrays["high"][slot, rows] = np.minimum(arrays["high"][slot, rows], high)
                shape = br.items[k].line
                if shape is not None:
                    here = some_phases(shape, rows)
                    self._fill_line(lines, next(free), rows, here, viscosity_factor[k, rows], (a, b))
                a, b = a * br.ratio[k, rows], b * br.gain[k, rows]
            arrays["ratio"][slot, rows] = a
            arrays["gain"][slot, rows] = b
        scale = br.flow_scale
        return Elements(
            node_count=len(self.topology.kept),
            **self._incidence(),
            ratio=arrays["ratio"],
            gain=arrays["gain"],
            constant=arrays["constant"] / PRESSURE_SCALE,
            linear=arrays["linear"] * scale / PRESSURE_SCALE,
            quadratic=arrays["quadratic"] * scale**2 / PRESSURE_SCALE,
            power=arrays["power"] / (scale * PRESSURE_SCALE),
            low=arrays["low"] / scale,
            high=arrays["high"] / scale,
            active=active,
            injection=self._injection() / scale,
            flow_scale=scale,
            lines=lines,
        )

    def thicken(self, elements: Elements, viscosity_factor: Array) -> Elements:
        """The same reduced network with other viscosity factors [-], shape (branches, phases)."""
        viscosity = elements.lines.viscosity.copy()
        for chain, slot, rows in self.topology.runs:
            free = iter(np.flatnonzero(elements.lines.element == slot).tolist())
            for k, _ in chain.items:
                if self.branches.items[k].line is not None:
                    viscosity[next(free), rows] = self.branches.viscosity[rows] * viscosity_factor[k, rows]
        changed = replace(elements, lines=replace(elements.lines, viscosity=viscosity))
        changed.__dict__["solver"] = elements.solver
        return changed

    def _fill_line(
        self, lines: LinePlaces, place: int, rows: NDArray[np.intp], shape: LineShape, thicker: Array,
        factors: tuple[float | Array, float | Array],
    ) -> None:  # fmt: skip
        """Put a line into its place."""
        for values, value in zip(lines.shape, shape, strict=True):
            np.asarray(values)[place, rows] = value
        lines.viscosity[place, rows] = self.branches.viscosity[rows] * thicker
        lines.density[place, rows] = self.branches.density[rows]
        lines.flow_factor[place, rows] = factors[0]
        lines.pressure_factor[place, rows] = factors[1]

    def _incidence(self) -> dict[str, NDArray[np.intp]]:
        """Nodes that each slot connects and those that drive it."""
        number = self._number
        nodes = np.array([[number[node] for node in ends] for ends in self.topology.slots], np.intp).reshape(-1, 4)
        return dict(zip(("flow_from", "flow_to", "pressure_from", "pressure_to"), nodes.T, strict=True))

    def _injection(self) -> Array:
        """Flow [m³/s] that fixed pumps bring to each kept node."""
        out = np.zeros((len(self.topology.kept), self.branches.phases))
        for injection in self.branches.injections:
            if self._number.get(injection.node, -1) >= 0:
                out[self._number[injection.node]] += injection.flow
        return out
