"""Heights: the rises of lines must add up to nothing round every loop."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

from heataudit.machine.model import rows
from heataudit.machine.ports import Ports
from heataudit.machine.sheet import Sheet

Sheets = Mapping[str, Sheet]

SMALL = 1e-6
"""Height [m] by which a loop may be off: rounding."""


def check_rises(sheets: Sheets, ports: Ports) -> None:
    """Note lines that close a loop whose rises do not add up to nothing; oil would rise for ever in it.

    Valves, sections, pumps and actuators lie at one height. What but a pump joins the tank without a line counts as a
    short cut of the description, and says nothing about height.
    """
    heights = _Heights(len(ports))
    for start, end in _level(sheets, ports):
        heights.join(start, end, 0.0)
    sheet = sheets["lines"]
    for row, line in enumerate(rows(sheet.frame)):
        rise = 0.0 if np.isnan(line.rise) else float(line.rise)
        error = heights.join(ports.node(line.from_), ports.node(line.to), rise)
        if abs(error) > SMALL:
            text = (
                f"closes a loop round which the rises add up to {error:.3g} m instead of 0; check the rises of "
                f"{line.name} and of the lines that lead the oil back"
            )
            key = "rise" if "rise" in sheet.positions else "name"
            sheet.complain(key, [row], text, warn=True)


def _level(sheets: Sheets, ports: Ports) -> Iterator[tuple[int, int]]:
    """Pairs of nodes that a component other than a line holds at one height; the tank only with a pump's suction."""
    for table, first, others in (
        ("valves", "from_", ("to", "port_3")), ("sections", "port_p", ("port_t", "port_a", "port_b", "port_n")),
        ("actuators", "port_a", ("port_b",)), ("pumps", "outlet", ("suction",)),
    ):  # fmt: skip
        for row in rows(sheets[table].frame):
            start = getattr(row, first)
            for key in others:
                end = getattr(row, key)
                if start and end and start in ports and end in ports:
                    pair = ports.node(start), ports.node(end)
                    if 0 not in pair or table == "pumps":
                        yield pair


class _Heights:
    """Nodes that hang together, each with its height over the first of its group (a weighted union-find)."""

    def __init__(self, count: int) -> None:
        self.root = list(range(count))
        self.over = [0.0] * count

    def _find(self, node: int) -> tuple[int, float]:
        height = 0.0
        while self.root[node] != node:
            height += self.over[node]
            node = self.root[node]
        return node, height

    def join(self, start: int, end: int, rise: float) -> float:
        """Set the end above the start; what a loop that this closes is off by [m], 0 where it closes none."""
        (first, low), (second, high) = self._find(start), self._find(end)
        if first == second:
            return low + rise - high
        self.root[second], self.over[second] = first, low + rise - high
        return 0.0
