"""Hand-made machines and solutions: numbers that balance in exact arithmetic, and a solver with a heat of one's own."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import numpy as np
from numpy.typing import NDArray

from heataudit.audit.states import Solver
from heataudit.machine import Cycle, Machine, connect, read_machine
from heataudit.network.solution import ActuatorState, ComponentState, PumpState, Solution, State
from heataudit.physics.oil import Oil
from tests.workbooks import PRESS, write

Array = NDArray[np.float64]

BAR, L_MIN = 1e5, 1e-3 / 60
COMPONENTS = ("Feed", "Return", "Main relief", "Press", "Press gallery", "Ram.A void", "Ram.B void")
KINDS = ("line", "line", "relief", "section", "gallery", "void", "void")


@cache
def press() -> Machine:
    """The small press of the workbook tests: one gear pump, one open-centre section, one cylinder, three phases."""
    with TemporaryDirectory() as folder:
        return read_machine(write(Path(folder) / "press.xlsx", PRESS))


def changed(machine: Machine, **tables: dict[str, Any]) -> Machine:
    """The machine with some settings changed: general, oil or reservoir."""
    return replace(machine, **{name: getattr(machine, name) | items for name, items in tables.items()})


def with_cycle(machine: Machine, duration: Any, **more: Any) -> Machine:
    """The machine with a cycle of phases that ask nothing, of these durations [s]."""
    time = np.asarray(duration, float)
    phases = len(time)
    names = np.array([f"phase {n + 1}" for n in range(phases)], object)
    blank = {"repeats": np.ones(phases), "other_heat": np.zeros(phases), "moves": {}, "values": {}}
    return replace(machine, cycle=Cycle(phase=names, duration=time, **blank | more))


def nodes(machine: Machine, pressures_bar: dict[str, Any], phases: int) -> tuple[Any, Array]:
    """Ports, and node pressures [Pa] of shape (nodes, phases): 0 at the tank, NaN where none is named."""
    ports = connect(machine.pumps, machine.lines, machine.valves, machine.sections, machine.actuators)
    pressure = np.full((len(ports), phases), np.nan)
    pressure[0] = 0.0
    for label, bar in pressures_bar.items():
        pressure[ports.node(label)] = np.multiply(bar, BAR)
    return ports, pressure


def oil_state(machine: Machine, temperature: Array) -> dict[str, Array]:
    oil = Oil.from_settings(**machine.oil)
    return {
        "oil_temperature": temperature, "viscosity": oil.viscosity(temperature), "density": oil.density(temperature)
    }  # fmt: skip


def good(phases: int) -> dict[str, Any]:
    """Flags of phases that were solved."""
    return {
        "converged": np.ones(phases, bool), "iterations": np.full(phases, 8), "residual": np.full(phases, 1e-12),
        "node_balance": np.full(phases, 1e-12), "balance_error": np.zeros(phases),
    }  # fmt: skip


def solution(machine: Machine | None = None, temperature_C: float = 40.0) -> Solution:
    """The press in three phases: the ram extends against its load, is driven by it, waits.

    In L/min and bar: the pump delivers 40 at 60, 5 and 4. While the ram moves, 30 of them go into it and 10 through the
    gallery; 20 come out. At the ram 50 and 1 bar in, 6 and 61 bar out; 1 bar at the return port.
    """
    machine = press() if machine is None else machine
    ports, pressure = nodes(
        machine, {"P1": [60, 5, 4], "Press.P": [58, 4, 3], "Press.T": [1, 1, 1], "Press.A": [50, 1, np.nan],
                  "Press.B": [6, 61, np.nan]}, 3,
    )  # fmt: skip
    none = [0.0, 0.0, 0.0]
    flow = np.array([[40, 40, 40], [30, 30, 40], none, [30, 30, 0], [10, 10, 40], none, none]) * L_MIN
    drop = np.array([[2, 1, 1], [1, 1, 1], none, [8, 3, 0], [57, 3, 2], none, none]) * BAR
    back = np.zeros_like(flow)
    back[3] = np.array([20 * 5, 20 * 60, 0]) * BAR * L_MIN
    pump_heat = np.array([[1000.0, 500.0, 200.0]])
    hydraulic = np.array([[40 * 60, 40 * 5, 40 * 4]]) * BAR * L_MIN
    taken = np.array([[30 * 50 - 20 * 6, 30 * 1 - 20 * 61, 0]]) * BAR * L_MIN
    heat = np.array([[100.0, 50.0, 0.0]])
    return Solution(
        ports=ports, pressure=pressure, **oil_state(machine, np.full(3, temperature_C + 273.15)), **good(3),
        components=ComponentState(COMPONENTS, KINDS, flow, drop, flow * drop + back, back, np.zeros_like(flow)),
        pumps=PumpState(
            name=("Pump 1",), pressure=pressure[[ports.node("P1")]], inlet_pressure=np.zeros((1, 3)),
            flow=np.full((1, 3), 40 * L_MIN), slip=np.zeros((1, 3)), speed=np.full((1, 3), 25.0),
            displacement=np.ones((1, 3)), setting=np.full((1, 3), np.nan), shaft_power=hydraulic + pump_heat,
            heat=pump_heat,
        ),
        actuators=ActuatorState(
            name=("Ram",), kind=("cylinder",), section=("Press",),
            state=np.array([[State.MOVING, State.MOVING, State.HELD]], np.int8), flow=np.array([[30, 30, 0]]) * L_MIN,
            speed=np.array([[0.1, 0.1, 0.0]]), asked_speed=np.array([[0.1, np.nan, np.nan]]),
            inlet=np.array([[50, 1, np.nan]]) * BAR, outlet=np.array([[6, 61, np.nan]]) * BAR,
            load=np.array([[20e3, -20e3, np.nan]]), opening=np.array([[0.5, 0.5, 0.0]]), power=taken - heat, heat=heat,
        ),
    )  # fmt: skip


RELIEF_PRESSURE = 100 * BAR


def relief_solver(power: Callable[[Cycle, Array], Array]) -> Solver:
    """A solver in whose phases the pump sends all of a power [W] over the relief valve, without a loss of its own."""

    def solve(machine: Machine, cycle: Cycle, temperature: Array) -> Solution:
        phases = len(cycle)
        watts = np.broadcast_to(power(cycle, temperature), (phases,)).astype(float)
        ports, pressure = nodes(machine, {"P1": np.full(phases, 100.0)}, phases)
        zero = np.zeros((len(COMPONENTS), phases))
        flow, drop = zero.copy(), zero.copy()
        flow[2], drop[2] = watts / RELIEF_PRESSURE, RELIEF_PRESSURE
        one = np.ones((1, phases))
        nothing = np.zeros((1, phases))
        return Solution(
            ports=ports, pressure=pressure, **oil_state(machine, temperature), **good(phases),
            components=ComponentState(COMPONENTS, KINDS, flow, drop, flow * drop, zero, zero),
            pumps=PumpState(
                ("Pump 1",), RELIEF_PRESSURE * one, nothing, flow[2:3], nothing, 25.0 * one, one, np.nan * one,
                watts * one, nothing,
            ),
            actuators=ActuatorState(
                ("Ram",), ("cylinder",), ("Press",), np.zeros((1, phases), np.int8), nothing, nothing, np.nan * one,
                np.nan * one, np.nan * one, np.nan * one, nothing, nothing, nothing,
            ),
        )  # fmt: skip

    return solve


def constant(watts: float) -> Solver:
    """A solver with the same heat at every temperature and in every phase."""
    return relief_solver(lambda cycle, temperature: np.full(len(cycle), watts))


def with_conductance(machine: Machine, watts_per_kelvin: float) -> Machine:
    """The machine with a coefficient that makes its tank give off so much per kelvin."""
    from heataudit.audit.surroundings import Surroundings

    surface = Surroundings(machine).surface
    return changed(machine, reservoir={"heat_transfer_coefficient": watts_per_kelvin / surface})
