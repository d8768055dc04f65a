"""Directional valve sections: their metering paths, compensators and feeds, and the galleries of open-centre banks."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from heataudit.machine import rows
from heataudit.network.branches import Branch, Flags, MovePath
from heataudit.network.elements import Integers
from heataudit.network.kinds.actuators import Actuator
from heataudit.network.linear import Array
from heataudit.network.plant import Plant
from heataudit.network.unknowns import PRESSURE_TOLERANCE, PRESSURE_UNIT, Look, Trial, Unknown, held_at_ends
from heataudit.physics.valves import throttle_coefficient

LEAST_OPENING = 1e-4
"""Opening [-] of a spool at the least, as a share of the allowed one, where it has to be found."""


class Section:
    """A spool section in a batch of phases.

    `opening` [-] is how far its spool may open, of a compensated section how far it stands for the flow asked, 0 in
    neutral; shape (phases,). `supply` and `back` are the nodes that it takes its oil from and returns it to.
    """

    def __init__(self, row: Any, plant: Plant, actuators: tuple[Actuator, ...], nodes: tuple[int, int]) -> None:
        """`nodes` are those of supply and return, which the bank's feed decides."""
        self.row, self.name = row, row.name
        self.supply, self.back = nodes
        self.port_a, self.port_b = plant.node(row.port_a), plant.node(row.port_b)
        none = np.zeros(plant.phases, bool)
        command = plant.section_command(row.name)
        self.forward = none if command is None else command.forward
        self.backward = none if command is None else command.backward
        self.floating = none if command is None else command.floating
        self.is_compensated = row.compensator != "none"
        served = [actuator for actuator in actuators if actuator.row.section == row.name]
        self.asked = np.any([actuator.is_asked for actuator in served], axis=0) if served else none
        allowed = np.zeros(plant.phases) if command is None else command.opening
        if self.is_compensated and served:
            flow = np.sum([np.minimum(actuator.asked_flow(), 1e3) for actuator in served], axis=0)
            allowed = np.where(self.asked, np.minimum(allowed, flow / self._feed_flow()), allowed)
        self.opening = np.where(self.active, allowed, 0.0)

    @property
    def active(self) -> Flags:
        """Commanded to feed its actuator, moving or not."""
        return self.forward | self.backward

    def _feed_flow(self) -> Array:
        """Rated flow [m³/s] of the path that feeds the actuator."""
        return np.where(self.backward, self.row.p_b, self.row.p_a)

    def sensed_pressure(self, look: Look) -> Array:
        """Load-sensing pressure [Pa]: that of the working port that is fed, 0 where none is."""
        forward, backward = self.forward[look.rows], self.backward[look.rows]
        pressure = np.where(backward, look.pressure(self.port_b), look.pressure(self.port_a))
        return np.where((forward | backward) & ~np.isnan(pressure), np.maximum(pressure, 0.0), 0.0)

    def branches(self) -> list[Branch]:
        """The metering paths: forward P-A and B-T, backward P-B and A-T, floating A-T and B-T."""
        row = self.row
        regenerates = self.forward & (row.regeneration == "extend")
        made = []
        for role, rated, ends, fed in (
            ("P-A", row.p_a, (self.supply, self.port_a), self.forward),
            ("B-T", row.b_t, (self.port_b, self.back), self.forward & ~regenerates),
            ("P-B", row.p_b, (self.supply, self.port_b), self.backward),
            ("A-T", row.a_t, (self.port_a, self.back), self.backward),
        ):
            if rated > 0:
                made.append(self._path(role, rated, ends, fed))
        if regenerates.any():
            made.append(
                Branch(
                    self.name, "regeneration", self.port_b, self.supply, low=0.0, open=regenerates & (self.opening > 0),
                    quadratic=throttle_coefficient(row.p_a, row.rated_drop),
                )
            )  # fmt: skip
        return made

    def _path(self, role: str, rated: float, ends: tuple[int, int], fed: Flags) -> Branch:
        floats = self.floating if role.endswith("T") else np.zeros_like(self.floating)
        opening = np.where(floats, 1.0, np.where(self.opening > 0, self.opening, 1.0))
        high = np.where(floats, np.inf, opening * rated) if self.is_compensated and role.startswith("P") else np.inf
        return Branch(
            self.name, role, *ends, quadratic=throttle_coefficient(rated, self.row.rated_drop, opening), high=high,
            open=(fed & (self.opening > 0)) | floats,
        )  # fmt: skip


@dataclass(frozen=True)
class Gallery:
    """A gallery, or a part of one: sections in series, in the order of the table.

    `coefficients` [Pa s²/m⁶] are the sections' quadratic coefficients in neutral and `closed_at` [-] the openings at
    which they shut it, both of shape (sections,).
    """

    name: str
    role: str
    sections: tuple[Section, ...]
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
        return Branch(self.name, self.role, *self.ports, quadratic=self.neutral)


class GalleryPassage(Unknown):
    """What a gallery lets pass [-] per its flow in neutral at the same drop, by the openings of its spools.

    An opening for a speed of a hundredth of the pump flow is known to about 1e-8 only, hence the tolerance.
    """

    tolerance = 1e-7

    def __init__(self, gallery: Gallery, branch: int) -> None:
        """Explicit where no opening has to be found."""
        place = gallery.conductance(np.stack([section.opening for section in gallery.sections]))
        asked = np.any([section.asked & ~section.is_compensated for section in gallery.sections], axis=0)
        super().__init__(place, asked)
        self.gallery, self.branch = gallery, branch

    def set(self, trial: Trial, place: Array, rows: Integers) -> None:
        """Shut at 0."""
        trial.open[self.branch] = place > 0
        trial.quadratic[self.branch] = self.gallery.neutral / np.where(place > 0, place, 1.0) ** 2

    def excess(self, place: Array, look: Look) -> Array:
        """What the spools leave it, less what it was taken to pass."""
        openings = np.stack([s.opening[look.rows] * look.share(s.name) for s in self.gallery.sections])
        return self.gallery.conductance(openings) - place


class SpoolOpening(Unknown):
    """Opening [-] of a spool per the allowed one, where its oil is not that of the actuator alone."""

    least = LEAST_OPENING

    def __init__(self, path: MovePath, phases: int) -> None:
        """Not looked for until it is seen that another way shares the oil."""
        super().__init__(np.ones(phases), np.zeros(phases, bool))
        self.path = path

    def set(self, trial: Trial, place: Array, rows: Integers) -> None:
        """NaN where the opening is explicit: there the asked speed stays an upper bound."""
        found = ~np.isnan(place)
        for edge in (self.path.feed, self.path.back):
            if edge >= 0:
                trial.quadratic[edge] /= np.where(found, place, 1.0) ** 2
        trial.high[self.path.branch] = np.where(found, np.inf, trial.high[self.path.branch])

    def excess(self, place: Array, look: Look) -> Array:
        """Speed over the asked one, less 1; none where it falls short wide open, or the load outruns a shut spool."""
        asked = look.network.branches.high[self.path.branch, look.rows]
        over = look.flow(self.path.branch) / np.where(np.isfinite(asked), asked, 1.0) - 1.0
        return held_at_ends(over, place, self.least, -1.0)


class FlowSharing(Unknown):
    """Share [-] of the flows asked of a bank that the pump can give, the same for all its flow-sharing sections."""

    least = 1e-4
    tolerance = PRESSURE_TOLERANCE

    def __init__(self, sections: tuple[Section, ...], edges: tuple[tuple[Section, int], ...]) -> None:
        """`edges` are the feed branches of the sections."""
        active = np.any([section.active for section in sections], axis=0)
        super().__init__(np.ones(len(active)), active)
        self.sections, self.edges = sections, edges

    def set(self, trial: Trial, place: Array, rows: Integers) -> None:
        """All compensators give up the same share."""
        for _, edge in self.edges:
            trial.high[edge] *= place

    def excess(self, place: Array, look: Look) -> Array:
        """Supply pressure over the highest moving load's and the drop over a feed edge at this share [100 bar]."""
        signal = np.zeros(len(look.rows))
        moving = np.zeros(len(look.rows), bool)
        for section, edge in self.edges:
            flows = look.flow(edge) > 0
            signal = np.where(flows, np.maximum(signal, section.sensed_pressure(look)), signal)
            moving |= flows
        first = self.sections[0]
        supply = np.nan_to_num(look.pressure(first.supply))
        spare = (supply - signal - place**2 * first.row.rated_drop) / PRESSURE_UNIT
        return held_at_ends(np.where(moving, spare, 1.0 - place), place, self.least, 1.0)


@dataclass(frozen=True)
class Banks:
    """All sections and galleries of a machine."""

    sections: tuple[Section, ...]
    galleries: tuple[Gallery, ...]

    def branches(self) -> list[Branch]:
        """Metering paths and galleries."""
        made = [branch for section in self.sections for branch in section.branches()]
        return made + [gallery.branch() for gallery in self.galleries]

    def unknowns(self, number: dict[tuple[str, str], int]) -> list[Unknown]:
        """Galleries and flow-sharing banks; `number` is that of a branch by component and role."""
        found: list[Unknown] = [GalleryPassage(g, number[(g.name, g.role)]) for g in self.galleries]
        sharing: dict[str, list[Section]] = {}
        for section in self.sections:
            if section.row.compensator == "flow sharing":
                sharing.setdefault(section.row.bank.casefold(), []).append(section)
        for sections in sharing.values():
            edges = [
                (s, number[(s.name, role)]) for s in sections for role in ("P-A", "P-B") if (s.name, role) in number
            ]
            found.append(FlowSharing(tuple(sections), tuple(edges)))
        return found


def banks(plant: Plant, actuators: tuple[Actuator, ...]) -> Banks:
    """Sections and galleries of every bank of a machine.

    In a bank whose sections are all fed in parallel the gallery is one piece; where a section is fed from the gallery
    (tandem, series) each open-centre section has its own part of it, with a node behind.
    """
    table = plant.machine.sections
    sections: dict[str, Section] = {}
    galleries: list[Gallery] = []
    for _, group in table.groupby(table["bank"].str.casefold(), sort=False):
        members = rows(group)
        in_parts = any(row.feed != "parallel" for row in members)
        opened = [row for row in members if row.centre == "open"]
        behind = plant.node(members[0].port_p)
        for row in members:
            supply = plant.node(row.port_p) if row.feed == "parallel" else behind
            end = behind
            if in_parts and row.centre == "open":
                end = plant.node(row.port_n) if row is opened[-1] else plant.new_node()
            back = end if row.feed == "series" and row.centre == "open" else plant.node(row.port_t)
            sections[row.name] = Section(row, plant, actuators, (supply, back))
            if in_parts and row.centre == "open":
                galleries.append(_gallery([row], sections, (behind, end), f"gallery {row.name}"))
            behind = end
        if opened and not in_parts:
            ends = (plant.node(opened[0].port_p), plant.node(opened[0].port_n))
            galleries.append(_gallery(opened, sections, ends, "gallery"))
    return Banks(tuple(sections[name] for name in table["name"]), tuple(galleries))


def _gallery(parts: list[Any], sections: dict[str, Section], ends: tuple[int, int], role: str) -> Gallery:
    coefficients = [float(throttle_coefficient(row.bypass, row.rated_drop)) for row in parts]
    return Gallery(
        f"{parts[0].bank} gallery", role, tuple(sections[row.name] for row in parts), ends, np.array(coefficients),
        np.array([row.bypass_closed_at for row in parts]),
    )  # fmt: skip
