"""Actuators: what their loads ask of the oil."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from heataudit.network.branches import Branch, Flags
from heataudit.network.linear import Array
from heataudit.network.plant import Command, Plant
from heataudit.physics.actuators import (
    cylinder_areas,
    cylinder_flow,
    cylinder_speed,
    double_rod_areas,
    effort,
    load_of_effort,
    motor_flow,
    motor_speed,
    plunger_areas,
)

TWO_PI = 2.0 * np.pi


@dataclass(frozen=True)
class Drive:
    """How an actuator turns oil into motion in one direction.

    `area` [m², of a motor m³/rad] at the inlet turns pressure into force or torque, `area_ratio` [-] is the outlet's
    per the inlet's. `flow_ratio` [-] is what leaves the outlet per what enters the inlet.
    """

    area: float
    area_ratio: float
    flow_ratio: float
    inlet: int
    outlet: int


def drives(actuator: Any, plant: Plant) -> tuple[Drive, Drive]:
    """Forward (A is the inlet) and backward (B is the inlet)."""
    port_a = plant.node(actuator.port_a)
    port_b = plant.node(actuator.port_b)
    if actuator.kind in ("motor", "constant pressure"):
        area = actuator.displacement * actuator.count / TWO_PI if actuator.kind == "motor" else 1.0
        return Drive(area, 1.0, 1.0, port_a, port_b), Drive(area, 1.0, 1.0, port_b, port_a)
    if actuator.kind == "plunger":
        area = float(plunger_areas(actuator.bore, actuator.count)[0])
        return Drive(area, 0.0, 0.0, port_a, 0), Drive(area, 0.0, 1.0, 0, port_a)
    areas = cylinder_areas if actuator.kind == "cylinder" else double_rod_areas
    bore_side, rod_side = (float(a) for a in areas(actuator.bore, actuator.rod, actuator.count))
    leak = 1.0 - actuator.volumetric_efficiency

    def drive(inlet: float, outlet: float, *ports: int) -> Drive:
        ratio = outlet / inlet
        return Drive(inlet, ratio, ratio * (1.0 - leak) + leak, *ports)

    return drive(bore_side, rod_side, port_a, port_b), drive(rod_side, bore_side, port_b, port_a)


class Actuator:
    """An actuator in a batch of phases: its command, its load and its two drives.

    `load` [N or N·m; Pa of a constant pressure consumer], shape (phases,), is NaN where gauge readings stand for it.
    `forward` and `backward` are the directions of its move. A floating actuator goes where its load, typed as against
    extending or turning forward, drives it.
    """

    def __init__(self, row: Any, plant: Plant) -> None:
        """Parameters are a row of the table and the plant."""
        self.row = row
        self.name: str = row.name
        self.command: Command = plant.commands[row.name]
        self.drives = drives(row, plant)
        self.is_compensated = plant.is_compensated(row.section)
        value = plant.cycle.value
        pushed = np.nan_to_num(value(row.name, "load")) + np.nan_to_num(value(row.name, "load_pressure"))
        self.forward = self.command.forward | (self.command.floating & (pushed < 0))
        self.backward = self.command.backward | (self.command.floating & (pushed > 0))
        self.returning = self.backward & (row.kind == "plunger")
        self.gauge_inlet, self.gauge_outlet = value(row.name, "inlet"), value(row.name, "outlet")
        self.load_pressure = value(row.name, "load_pressure")
        load = self._typed_load(value(row.name, "load"))
        self.load = np.where(self.command.floating, -np.abs(load), load)

    def _efficiency(self) -> float:
        return 1.0 if self.row.kind == "constant pressure" else float(self.row.mechanical_efficiency)

    def _by_direction(self, name: str) -> Array:
        forward, backward = (getattr(d, name) for d in self.drives)
        return np.where(self.backward, backward, forward)

    def _typed_load(self, load: Array) -> Array:
        """The load as typed, or from a load pressure or from both gauge readings."""
        area, ratio = self._by_direction("area"), self._by_direction("area_ratio")
        net = np.where(np.isnan(self.load_pressure), self.gauge_inlet - ratio * self.gauge_outlet, self.load_pressure)
        return np.where(np.isnan(load), load_of_effort(net * area, self._efficiency()), load)

    @property
    def is_asked(self) -> Flags:
        """Phases in which a speed is asked of it."""
        return self.command.moving & ~np.isnan(self.command.speed)

    def needed_pressure(self) -> Array:
        """Inlet pressure [Pa] that the load needs against an empty outlet, shape (phases,)."""
        return np.where(
            np.isnan(self.load),
            self.gauge_inlet,
            effort(np.nan_to_num(self.load), self._efficiency()) / self._by_direction("area"),
        )

    def asked_flow(self) -> Array:
        """Flow [m³/s] into the inlet that the asked speed needs, infinite where none is asked, shape (phases,)."""
        speed, row = self.command.speed, self.row
        if row.kind == "constant pressure":
            return np.full(len(speed), np.inf)
        if row.kind == "motor":
            flow = motor_flow(speed, row.displacement * row.count, row.volumetric_efficiency, np.nan_to_num(self.load))
        else:
            flow = cylinder_flow(speed, self._by_direction("area"), self._inlet_efficiency())
        return np.where(np.isnan(speed), np.inf, flow)

    def _inlet_efficiency(self) -> Array:
        """Volumetric efficiency [-] of a cylinder; a returning plunger has no inlet that leaks."""
        return np.where(self.returning, 1.0, float(self.row.volumetric_efficiency))

    def speed(self, flow: Array) -> Array:
        """Speed [m/s or 1/s] at a flow [m³/s] into the inlet, shape (phases,)."""
        row = self.row
        if row.kind == "constant pressure":
            return np.zeros_like(flow)
        if row.kind == "motor":
            load = np.nan_to_num(self.load)
            return np.asarray(motor_speed(flow, row.displacement * row.count, row.volumetric_efficiency, load))
        return np.asarray(cylinder_speed(flow, self._by_direction("area"), self._inlet_efficiency()))

    def load_found(self, inlet: Array, outlet: Array) -> Array:
        """The load, backed out of the pressures [Pa] where only the inlet's gauge reading is given."""
        net = (inlet - self._by_direction("area_ratio") * np.nan_to_num(outlet)) * self._by_direction("area")
        return np.where(np.isnan(self.load), load_of_effort(net, self._efficiency()), self.load)

    def power(self, load: Array, speed: Array, flow: Array) -> Array:
        """Mechanical power [W] on a load, shape (phases,)."""
        if self.row.kind == "constant pressure":
            return load * flow
        return load * speed * (TWO_PI if self.row.kind == "motor" else 1.0)

    def branches(self) -> list[Branch]:
        """Inlet to outlet, one branch for each direction; what is held, at its stop or asked for no speed is shut."""
        needed, asked = self.needed_pressure(), self.asked_flow()
        gauge_only = np.isnan(self.load)
        free = (self.command.moving & (asked > 0)) | self.command.floating
        limit = np.where(self.is_compensated | self.command.floating, np.inf, asked)
        made = []
        for role, commanded, drive in zip(
            ("forward", "backward"), (self.forward, self.backward), self.drives, strict=True
        ):
            if not commanded.any():
                continue
            made.append(self._branch(role, drive, free & commanded, np.where(gauge_only, 0.0, drive.area_ratio),
                                     (needed, limit)))  # fmt: skip
        return made

    def _branch(self, role: str, drive: Drive, opened: Flags, gain: Array, wants: tuple[Array, Array]) -> Branch:
        needed, asked = wants
        returning = self.row.kind == "plunger" and role == "backward"
        return Branch(
            self.name, role, drive.inlet, drive.outlet, constant=np.nan_to_num(needed), low=0.0, high=asked,
            ratio=drive.flow_ratio, gain=1.0 if returning else gain, open=opened,
        )  # fmt: skip
