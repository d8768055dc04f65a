"""The component laws once more, as a reader of results would check them: flows, port pressures and states only.

Every law is as physics has it, written out here without the program's own formulas; friction is `fluids`' Churchill.
"""

from __future__ import annotations

from collections.abc import Iterator
from math import pi
from typing import Any, NamedTuple

import fluids
import numpy as np

from heataudit.machine import Machine, rows
from heataudit.network.solution import Solution, State

ATMOSPHERE = 101325.0
BENDS = {"swept": (800.0, 0.20), "elbow": (800.0, 0.40), "drilled": (1000.0, 1.15)}  # Hooper 1981
NONE = 1e-10
"""Flow that counts as none, as a share of the pump flow."""


class Miss(NamedTuple):
    """By how much the law of a component is missed in a phase [Pa]."""

    component: str
    phase: int
    missed: float


def misses(machine: Machine, found: Solution) -> Iterator[Miss]:
    """Every law of lines, passive valves, actuators and pumps whose pressures are known, in every phase."""
    look = _Look(machine, found)
    for n in range(found.phases):
        for line in rows(machine.lines):
            yield Miss(line.name, n, look.line(line, n))
        for valve in rows(machine.valves):
            if valve.kind in ("check", "relief", "throttle", "flow control", "filter", "cooler"):
                yield Miss(valve.name, n, look.valve(valve, n))
        for number, actuator in enumerate(rows(machine.actuators)):
            yield Miss(actuator.name, n, look.actuator(number, actuator, n))
        for number, pump in enumerate(rows(machine.pumps)):
            if pump.control in ("fixed", "pressure compensated"):
                yield Miss(pump.name, n, look.pump(number, pump, n))


def one_sided(drop: float, opens: float, needed: float, flows: bool) -> float:
    """Pascal by which a valve that opens at `opens` is off: its law where oil flows, else what opens it."""
    return abs(drop - needed) if flows else max(drop - opens, 0.0)


class _Look:
    """One machine and its solution."""

    def __init__(self, machine: Machine, found: Solution) -> None:
        self.machine, self.found = machine, found
        self.flow_of = dict(zip(found.components.name, found.components.flow, strict=True))

    def drop(self, component: Any, n: int) -> float:
        """From From to To [Pa], NaN where a side is not known."""
        ends = (self.found.pressure[self.found.ports.node(label), n] for label in (component.from_, component.to))
        return float(next(ends)) - float(next(ends))

    def given(self, name: str, quantity: str, n: int, default: float) -> float:
        """What the duty cycle says, or the default."""
        value = float(self.machine.cycle.value(name, quantity)[n])
        return default if np.isnan(value) else value

    def line(self, line: Any, n: int) -> float:
        """Darcy with Churchill, Hooper's bends, Barus at the mean gauge pressure, lift."""
        drop, flow = self.drop(line, n), float(self.flow_of[line.name][n])
        if np.isnan(drop):
            return 0.0
        density, needed = self.found.density[n], self.found.density[n] * 9.80665 * line.rise
        if flow != 0:
            ends = [self.found.pressure[self.found.ports.node(label), n] for label in (line.from_, line.to)]
            thick = np.exp(self.machine.oil["pressure_viscosity_coefficient"] * max(sum(ends) / 2, 0.0))
            speed = flow / line.count / (pi / 4 * line.inside_diameter**2)
            reynolds = abs(speed) * line.inside_diameter / (self.found.viscosity[n] * thick)
            friction = 64 / reynolds
            if reynolds > 100:
                friction = fluids.friction.Churchill_1977(Re=reynolds, eD=line.roughness / line.inside_diameter)
            k1, k_infinity = BENDS[line.bend_type]
            bend = k1 / reynolds + k_infinity * (1 + 0.0254 / line.inside_diameter)
            loss = friction * line.length / line.inside_diameter + 0.5 * line.ends + line.loss_coefficient
            needed += (loss + line.bends * bend) * density * speed * abs(speed) / 2
        return abs(drop - needed)

    def valve(self, valve: Any, n: int) -> float:
        """The laws of passive valves."""
        drop, flow = self.drop(valve, n), float(self.flow_of[valve.name][n])
        if np.isnan(drop):
            return 0.0
        k = valve.rated_drop / valve.rated_flow**2
        if valve.kind == "check":
            return one_sided(drop, valve.opening_pressure, valve.opening_pressure + k * flow**2, flow > 0)
        if valve.kind == "relief":
            override = valve.rated_drop / valve.rated_flow
            setting = self.given(valve.name, "setting", n, valve.opening_pressure)
            opens = setting - override * (0.0 if np.isnan(valve.set_at_flow) else valve.set_at_flow)
            return one_sided(drop, opens, opens + override * flow, flow > 0)
        if valve.kind == "throttle":
            opening = self.given(valve.name, "opening", n, 1.0)
            return abs(drop - k * flow * abs(flow) / opening**2) if opening > 0 else 1e9 * abs(flow)
        if valve.kind == "flow control":
            limited = flow >= valve.set_flow * (1 - 1e-9)
            return max(k * flow**2 - drop, 0.0) if limited else abs(drop - k * flow * abs(flow))
        nu = self.found.viscosity[n] / valve.rated_viscosity
        return abs(drop - valve.rated_drop * flow / valve.rated_flow * nu)

    def actuator(self, number: int, actuator: Any, n: int) -> float:
        """Force balance of what moves under a typed load; what is stalled lacks pressure."""
        states = self.found.actuators
        state, load = states.state[number, n], states.load[number, n]
        inlet, outlet = states.inlet[number, n], np.nan_to_num(states.outlet[number, n])
        typed = [self.machine.cycle.value(actuator.name, q)[n] for q in ("load", "load_pressure")]
        if np.isnan(inlet) or np.isnan(typed).all() or state in (State.HELD, State.FLOATING):
            return 0.0
        area_in, area_out = self.areas(actuator, number, n)
        eta = 1.0 if actuator.kind == "constant pressure" else actuator.mechanical_efficiency
        needed = (load / eta if load >= 0 else load * eta) / area_in + outlet * area_out / area_in
        if state == State.STALLED:
            return max(inlet - needed, 0.0)
        if not actuator.section and states.speed[number, n] >= states.asked_speed[number, n] * (1 - 1e-6):
            return max(needed - inlet, 0.0)  # no spool throttles: the asked speed holds by itself
        return abs(inlet - needed)

    def areas(self, actuator: Any, number: int, n: int) -> tuple[float, float]:
        """Areas [m², m³/rad, 1] at the inlet and the outlet."""
        if actuator.kind == "constant pressure":
            return 1.0, 1.0
        if actuator.kind == "motor":
            return (actuator.displacement * actuator.count / (2 * pi),) * 2
        bore = actuator.count * pi / 4 * actuator.bore**2
        rod = actuator.count * pi / 4 * (0.0 if np.isnan(actuator.rod) else actuator.rod) ** 2
        if actuator.kind == "double rod":
            return bore - rod, bore - rod
        if actuator.kind == "plunger":
            return bore, 0.0
        back = self.machine.cycle.moves[actuator.name][n] == self.back
        return (bore - rod, bore) if back else (bore, bore - rod)

    @property
    def back(self) -> int:
        """Code of retracting."""
        from heataudit.machine import Move

        return int(Move.RETRACT)

    def pump(self, number: int, pump: Any, n: int) -> float:
        """Slip as Wilson has it, displacement full or the outlet at its setting; in Pascal by the slip's slope."""
        state = self.found.pumps
        speed, drop = state.speed[number, n], state.pressure[number, n] - state.inlet_pressure[number, n]
        if speed == 0:
            return 1e12 * abs(float(state.flow[number, n]))
        ratio = (self.found.viscosity[n] / pump.rated_viscosity) ** pump.viscosity_exponent
        slope = pump.displacement * pump.speed * (1 - pump.volumetric_efficiency) / pump.rated_pressure / ratio
        used = float(state.displacement[number, n])
        off = abs(used * pump.displacement * speed - slope * drop - state.flow[number, n])
        missed = off / slope if slope > 0 else 1e12 * off
        if pump.control == "pressure compensated" and np.isnan(pump.power_limit):
            over = state.pressure[number, n] - state.setting[number, n]
            missed = max(missed, max(-over, 0.0) if used < 1 - 1e-9 else 0.0, max(over, 0.0) if used > 1e-9 else 0.0)
        return float(missed)
