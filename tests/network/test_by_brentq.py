"""A whole machine written out by hand and solved by nested bracketed roots of scipy, against the batched solver.

A pump with slip and a relief valve feeds a cylinder and a motor over a common trunk; both return over a line and a
filter, with a check valve beside them. All laws stand here once more, as physics has them: orifices, Churchill's
friction (from `fluids`), Hooper's bends, Barus, Wilson's slip, a torque limit. For a supply pressure at the bank and a
pressure in the return every flow is explicit; return pressure and supply pressure are roots, one inside the other.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from math import exp, inf, pi, sqrt
from typing import Any

import fluids
import numpy as np
import pytest
from scipy.optimize import brentq

from heataudit.network.solution import Solution
from tests.network.small import BAR, L_MIN, PUMP, VALVE, at, flow, run

BORE, RING = pi / 4 * 0.080**2, pi / 4 * (0.080**2 - 0.045**2)
PHI = RING / BORE
MOTOR = 80e-6  # m³/rev
GRAVITY = 9.80665


@dataclass
class Line:
    """Friction and lift of a line."""

    diameter: float
    length: float
    bends: int
    rise: float

    def drop(self, q: float, mean: float, oil: tuple[float, float]) -> float:
        """Pascal at m³/s and a mean pressure, oil being viscosity [m²/s] and density [kg/m³]."""
        lift = oil[1] * GRAVITY * self.rise
        if q == 0:
            return lift
        speed = q / (pi / 4 * self.diameter**2)
        reynolds = abs(speed) * self.diameter / (oil[0] * exp(20e-9 * max(mean, 0.0)))
        friction = 64 / reynolds  # where Churchill's formula is laminar too and would overflow
        if reynolds > 100:
            friction = fluids.friction.Churchill_1977(Re=reynolds, eD=1e-5 / self.diameter)
        bend = 800 / reynolds + 0.2 * (1 + 0.0254 / self.diameter)  # Hooper 1981, long radius
        resistance = friction * self.length / self.diameter + 1.0 + self.bends * bend  # two ends of 0.5
        return lift + resistance * oil[1] * speed * abs(speed) / 2


@dataclass
class Hand:
    """One phase of the machine by hand."""

    oil: tuple[float, float]
    force: float
    torque: float
    ram_opening: float
    motor_opening: float
    ram_speed: float
    variable: bool
    trunk: Line = field(default_factory=lambda: Line(0.016, 6.0, 3, 0.5))
    back: Line = field(default_factory=lambda: Line(0.020, 4.0, 1, -0.4))

    def ram(self, supply: float, back: float) -> float:
        """Flow into the cylinder [m³/s]."""
        k = 10 * BAR / (80 * L_MIN * self.ram_opening) ** 2
        spare = supply - self.force / 0.95 / BORE - PHI * back
        free = sqrt(max(spare, 0.0) / (k + PHI**3 * k))
        return min(free, self.ram_speed * BORE)

    def motor(self, supply: float, back: float) -> float:
        """Flow through the motor [m³/s]."""
        k = 10 * BAR / (60 * L_MIN * self.motor_opening) ** 2
        return sqrt(max(supply - 2 * pi * self.torque / 0.92 / MOTOR - back, 0.0) / (2 * k))

    def drained(self, back: float) -> float:
        """Flow from the return to the tank [m³/s]: line and filter, and a check of 2 bar beside them."""
        filter_ = 0.5 * BAR / (100 * L_MIN) * self.oil[0] / 32e-6

        def over(q: float) -> float:
            return self.back.drop(q, (back + filter_ * q) / 2, self.oil) + filter_ * q - back

        through = brentq(over, -0.1, 0.1, xtol=1e-18, rtol=1e-15)
        return through + sqrt(max(back - 2 * BAR, 0.0) / (5 * BAR)) * 100 * L_MIN

    def return_pressure(self, supply: float) -> float:
        """Pressure in the return for a pressure at the bank."""

        def left(back: float) -> float:
            return PHI * self.ram(supply, back) + self.motor(supply, back) - self.drained(back)

        return brentq(left, -1 * BAR, max(supply, 0.0) + 1 * BAR, xtol=1e-9, rtol=1e-15)

    def taken(self, supply: float) -> tuple[float, float, float]:
        """Flows into cylinder and motor [m³/s] and the pressure at the pump [Pa]."""
        back = self.return_pressure(supply)
        ram, motor = self.ram(supply, back), self.motor(supply, back)
        total, pump = ram + motor, supply
        for _ in range(60):  # the trunk's own mean pressure thickens its oil
            pump = supply + self.trunk.drop(total, (pump + supply) / 2 if total else 0.0, self.oil)
        return ram, motor, pump

    def given(self, pressure: float) -> float:
        """Flow [m³/s] that the pump brings into the trunk at a pressure: 60 L/min less slip and overflow."""
        slip = 60 * L_MIN * 0.08 * pressure / (200 * BAR) / sqrt(self.oil[0] / 32e-6)
        over = max(pressure - 220 * BAR, 0.0) / (20 * BAR) * 100 * L_MIN
        limit = 8e3 / max(pressure, 1.0) if self.variable else inf
        return min(60 * L_MIN, limit) - slip - over

    def solve(self) -> tuple[float, float, float]:
        """Flows of cylinder and motor [m³/s], pump pressure [Pa]."""
        top = 400 * BAR
        if self.variable:  # at its setting it gives what is taken, if it can
            top = brentq(lambda s: self.taken(s)[2] - 150 * BAR, -1 * BAR, 160 * BAR, xtol=1e-9, rtol=1e-15)
            ram, motor, pump = self.taken(top)
            if ram + motor <= self.given(pump):
                return ram, motor, pump

        def short(supply: float) -> float:
            ram, motor, pump = self.taken(supply)
            return ram + motor - self.given(pump)

        return self.taken(brentq(short, -1 * BAR, top, xtol=1e-9, rtol=1e-15))


def machine(phases: list[list[Any]], control: str, temperature: float) -> Solution:
    """The same machine as a workbook."""
    pump = [*PUMP, "Setting [bar]", "Power limit [kW]"]
    values = [150, 8] if control != "fixed" else [None, None]
    return run({
        "Pumps": [pump, ["Pump", "gear", control, 60, 1000, 92, "P", *values]],
        "Lines": [["Line", "From", "To", "Inside diameter [mm]", "Length [m]", "Bends [-]", "Rise [m]"],
                  ["Trunk", "P", "S", 16, 6, 3, 0.5], ["Back", "R", "F", 20, 4, 1, -0.4]],
        "Valves": [[*VALVE, "Rated viscosity [mm²/s]"], ["Relief", "relief", "P", "Tank", 100, 20, 220, None],
                   ["Filter", "filter", "F", "Tank", 100, 0.5, None, 32],
                   ["Beside", "check", "R", "Tank", 100, 5, 2, None]],
        "Directional valves": [["Section", "Port P", "Port T", "P-A [L/min]"], ["One", "S", "R", 80],
                               ["Two", "S", "R", 60]],
        "Actuators": [["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]"],
                      ["Ram", "cylinder", "One", 80, 45, None], ["Motor", "motor", "Two", None, None, 80]],
        "Duty cycle": [["Phase", "Duration [s]", "Ram move", "Ram load [kN]", "Motor move", "Motor load [N·m]",
                        "Ram opening [%]", "Motor opening [%]", "Ram speed [mm/s]"], *phases],
    }, temperature=temperature)  # fmt: skip


@pytest.mark.parametrize("control", ["fixed", "pressure compensated"])
@pytest.mark.parametrize("temperature", [15.0, 50.0, 80.0])
def test_every_phase_as_nested_roots_find_it(control: str, temperature: float) -> None:
    rng = np.random.default_rng(int(temperature) + len(control))
    draws = [
        (rng.uniform(0, 90), rng.uniform(0, 220), rng.choice([0.08, 0.3, 1.0]), rng.choice([0.05, 0.4, 1.0]),
         rng.choice([inf, 0.02, 0.15])) for _ in range(14)
    ]  # fmt: skip
    phases = [[f"p{n}", 1, "extend", kn, "forward", nm, 100 * a, 100 * b, None if v == inf else 1e3 * v]
              for n, (kn, nm, a, b, v) in enumerate(draws)]  # fmt: skip
    found = machine(phases, control, temperature)
    oil = float(found.viscosity[0]), float(found.density[0])
    for n, (kn, nm, a, b, v) in enumerate(draws):
        ram, motor, pump = Hand(oil, kn * 1e3, nm, a, b, v, control != "fixed").solve()
        assert found.actuators.flow[:, n] == pytest.approx([ram, motor], rel=1e-7, abs=1e-8 * L_MIN * 60), n
        assert found.pumps.pressure[0, n] == pytest.approx(pump, rel=1e-7, abs=1.0), n
    overflow = flow(found, "Relief")
    assert overflow == pytest.approx(np.maximum(at(found, "P") - 220, 0) / 20 * 100, rel=1e-6, abs=1e-9)
