"""Who is joined with whom: port labels and the nodes that they form."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import pandas as pd

from heataudit.machine.values import folded

TANK = "Tank"
"""Port label of the reservoir."""


@dataclass(frozen=True)
class Ports:
    """Nodes of a machine: `nodes[n]` are the labels that are joined in node n; node 0 is the tank."""

    nodes: tuple[tuple[str, ...], ...]

    @cached_property
    def _numbers(self) -> dict[str, int]:
        return {folded(label): number for number, labels in enumerate(self.nodes) for label in labels}

    def node(self, label: str) -> int:
        """Node number [-] of a port label, without regard to case and surrounding blanks.

        Raises
        ------
        KeyError
            No port has this label.
        """
        return self._numbers[folded(label)]

    def __len__(self) -> int:
        """Number of nodes."""
        return len(self.nodes)

    def __contains__(self, label: str) -> bool:
        """Whether a port has this label."""
        return folded(label) in self._numbers


def connect(
    pumps: pd.DataFrame, lines: pd.DataFrame, valves: pd.DataFrame, sections: pd.DataFrame, actuators: pd.DataFrame
) -> Ports:
    """Join the ports of a machine.

    Ports with the same label are joined. An actuator's port is joined to its section's port, unless lines or valves
    make a way between the two; a line or valve that leads elsewhere does not count as such a way.

    Parameters
    ----------
    pumps, lines, valves, sections, actuators
        Tables of a machine, defaults filled in.

    Returns
    -------
    The nodes, in the order in which their labels appear; node 0 is the tank.
    """
    labels: dict[str, str] = {folded(TANK): TANK}
    for table, keys in (
        (pumps, ("outlet", "suction", "drain_to")), (lines, ("from_", "to")), (valves, ("from_", "to", "port_3")),
        (sections, ("port_p", "port_t", "port_a", "port_b", "port_n")), (actuators, ("port_a", "port_b")),
    ):  # fmt: skip
        for row in table[list(keys)].itertuples(index=False):
            for label in row:
                if label:
                    labels.setdefault(folded(label), label)
    root = {label: label for label in labels}
    for own, of_section in _joints(pumps, lines, valves, sections, actuators):
        first, second = _root(root, own), _root(root, of_section)
        if first != second:
            later = max(first, second, key=list(labels).index)
            root[later] = first if later == second else second
    groups: dict[str, list[str]] = defaultdict(list)
    for label, written in labels.items():
        groups[_root(root, label)].append(written)
    return Ports(tuple(tuple(group) for group in groups.values()))


def _root(root: dict[str, str], label: str) -> str:
    """The label that stands for a node."""
    while root[label] != label:
        label = root[label]
    return label


def _joints(
    pumps: pd.DataFrame, lines: pd.DataFrame, valves: pd.DataFrame, sections: pd.DataFrame, actuators: pd.DataFrame
) -> Iterable[tuple[str, str]]:
    """Pairs of an actuator's port and its section's port that are joined without a row that says so."""
    ways: dict[str, set[str]] = defaultdict(set)
    for table in (lines, valves):
        for start, end in zip(table["from_"].map(folded), table["to"].map(folded), strict=True):
            ways[start].add(end)
            ways[end].add(start)
    ends = {folded(TANK)}
    for table, keys in (
        (pumps, ("outlet", "suction", "drain_to")), (sections, ("port_p", "port_t", "port_a", "port_b", "port_n")),
        (actuators, ("port_a", "port_b")),
    ):  # fmt: skip
        for key in keys:
            ends |= {folded(label) for label in table[key] if label}
    by_name: dict[str, Any] = dict(zip(sections["name"].map(folded), sections.itertuples(index=False), strict=True))
    rows: Iterable[Any] = actuators.itertuples(index=False)
    for actuator in rows:
        section = by_name.get(folded(actuator.section))
        if section is None:
            continue
        for own, of_section in ((actuator.port_a, section.port_a), (actuator.port_b, section.port_b)):
            if own and of_section and not _reaches(ways, folded(own), folded(of_section), ends):
                yield folded(own), folded(of_section)


def _reaches(ways: dict[str, set[str]], start: str, goal: str, ends: set[str]) -> bool:
    """Whether lines and valves lead from one port to another through junctions only, not through other components."""
    seen, waiting = {start}, [start]
    while waiting:
        for label in ways[waiting.pop()] - seen:
            if label == goal:
                return True
            seen.add(label)
            if label not in ends:
                waiting.append(label)
    return False
