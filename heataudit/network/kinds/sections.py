"""Directional valve sections and the galleries of open-centre banks."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from heataudit.network.branches import Branch, Flags
from heataudit.network.linear import Array
from heataudit.network.plant import Command, Plant
from heataudit.physics.valves import throttle_coefficient

FEEDS = ("P-A", "P-B")
RETURNS = ("B-T", "A-T")


def make(section: Any, plant: Plant) -> list[Branch]:
    """The metering paths of a section at the opening that its command allows.

    A path is a throttle; the opening scales both paths of a move together. Forward, P-A and B-T are open; backward,
    P-B and A-T.
    """
    command = plant.section_command(section.name)
    if command is None:
        return []
    branches = []
    for path, opened in (
        ("P-A", command.forward), ("B-T", command.forward), ("P-B", command.backward), ("A-T", command.backward)
    ):  # fmt: skip
        rated = getattr(section, path.lower().replace("-", "_"))
        if rated > 0:
            branches.append(_path(section, path, rated, opened & (command.opening > 0), command, plant))
    return branches


def _path(section: Any, path: str, rated: float, opened: Flags, command: Command, plant: Plant) -> Branch:
    start, end = (plant.node(getattr(section, f"port_{letter.lower()}")) for letter in path.split("-"))
    opening = np.where(command.opening > 0, command.opening, 1.0)
    return Branch(
        section.name, path, start, end, quadratic=throttle_coefficient(rated, section.rated_drop, opening), open=opened
    )


@dataclass(frozen=True)
class Gallery:
    """The gallery of an open-centre bank: its sections in series, in the order of the table.

    `sections` are their names, `coefficients` [Pa s²/m⁶] their quadratic coefficients in neutral and `closed_at` [-]
    the openings at which they shut it, both of shape (sections,).
    """

    name: str
    sections: tuple[str, ...]
    ports: tuple[int, int]
    coefficients: Array
    closed_at: Array

    @property
    def neutral(self) -> float:
        """Quadratic coefficient [Pa s²/m⁶] with all sections in neutral."""
        return float(self.coefficients.sum())

    def conductance(self, openings: Array) -> Array:
        """Flow [-] as a share of that in neutral at the same drop, for openings [-] of shape (sections, phases)."""
        left = np.maximum(0.0, 1.0 - openings / self.closed_at[:, None])
        shut = (left <= 0).any(axis=0)
        total = (self.coefficients[:, None] / np.where(left > 0, left, 1.0) ** 2).sum(axis=0)
        return np.where(shut, 0.0, np.sqrt(self.neutral / total))

    def branch(self) -> Branch:
        """The gallery in neutral."""
        return Branch(self.name, "gallery", *self.ports, quadratic=self.neutral)


def galleries(plant: Plant) -> list[Gallery]:
    """One gallery for each bank with open-centre sections."""
    table = plant.machine.sections
    opened = table[table["centre"] == "open"]
    found = []
    for _, rows in opened.groupby(opened["bank"].str.casefold(), sort=False):
        first = rows.iloc[0]
        found.append(
            Gallery(
                f"{first['bank']} gallery", tuple(rows["name"]),
                (plant.node(first["port_p"]), plant.node(first["port_n"])),
                np.asarray(throttle_coefficient(rows["bypass"].to_numpy(float), rows["rated_drop"].to_numpy(float))),
                rows["bypass_closed_at"].to_numpy(float),
            )
        )  # fmt: skip
    return found
