"""A solved machine as long tables: a row for each phase and component, units in the column names.

`phase_number` counts the phases from 0. Cells that do not apply are NaN, or "" for words.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

from heataudit.audit.figures import BAR, L_MIN
from heataudit.machine import Machine
from heataudit.network.solution import Solution, State
from heataudit.physics.arrays import Array
from heataudit.physics.lines import velocity

ALL = slice(None)

STATES = np.array([state.name.lower() for state in State], object)
"""Words for the codes of `State`."""


def component_table(machine: Machine, solution: Solution, rows: slice = ALL) -> pd.DataFrame:
    """Lines, valves, sections, galleries and voids.

    Parameters
    ----------
    machine
        Gives the phases and the lines' bores.
    solution
        The solved phases.
    rows
        Phases wanted.

    Returns
    -------
    pandas.DataFrame
        `phase_number`, `phase`, `component`, `kind`, `flow_L_min` from From to To, `drop_bar`, `heat_kW`,
        `velocity_m_s` (lines only, signed as the flow); phase by phase.
    """
    state = solution.components
    lines = dict(zip(machine.lines["name"], machine.lines[["inside_diameter", "count"]].to_numpy(float), strict=True))
    flow = state.flow[:, rows]
    speeds = np.full_like(flow, np.nan)
    for k, (name, kind) in enumerate(zip(state.name, state.kind, strict=True)):
        if kind == "line":
            speeds[k] = velocity(flow[k], *lines[name])
    wide = {
        "flow_L_min": flow / L_MIN, "drop_bar": state.drop[:, rows] / BAR, "heat_kW": state.heat[:, rows] / 1e3,
        "velocity_m_s": speeds,
    }  # fmt: skip
    return _long(machine, rows, {"component": state.name, "kind": state.kind}, wide)


def pump_table(machine: Machine, solution: Solution, rows: slice = ALL) -> pd.DataFrame:
    """Pumps.

    Parameters
    ----------
    machine
        Gives the phases.
    solution
        The solved phases.
    rows
        Phases wanted.

    Returns
    -------
    pandas.DataFrame
        `phase_number`, `phase`, `component`, `kind`, `pressure_bar` at the outlet, `flow_L_min` delivered, `drop_bar`
        from suction to outlet (a pump's is negative), `slip_L_min`, `speed_rpm`, `displacement_percent`,
        `shaft_power_kW`, `heat_kW`; phase by phase.
    """
    state = solution.pumps
    wide = {
        "pressure_bar": state.pressure[:, rows] / BAR, "flow_L_min": state.flow[:, rows] / L_MIN,
        "drop_bar": (state.inlet_pressure - state.pressure)[:, rows] / BAR, "slip_L_min": state.slip[:, rows] / L_MIN,
        "speed_rpm": state.speed[:, rows] * 60.0, "displacement_percent": state.displacement[:, rows] * 100.0,
        "shaft_power_kW": state.shaft_power[:, rows] / 1e3, "heat_kW": state.heat[:, rows] / 1e3,
    }  # fmt: skip
    return _long(machine, rows, {"component": state.name, "kind": ("pump",) * len(state.name)}, wide)


def actuator_table(machine: Machine, solution: Solution, rows: slice = ALL) -> pd.DataFrame:
    """Actuators.

    Parameters
    ----------
    machine
        Gives the phases.
    solution
        The solved phases.
    rows
        Phases wanted.

    Returns
    -------
    pandas.DataFrame
        `phase_number`, `phase`, `component`, `kind`, `state`, `flow_L_min` and `speed_mm_s` (motors `speed_rpm`) in the
        commanded direction, `inlet_bar`, `outlet_bar`, `drop_bar` from inlet to outlet, `opening_percent`, `power_kW`
        on the load, `heat_kW`; phase by phase.
    """
    state = solution.actuators
    kinds = np.array(state.kind, object)[:, None]
    speed = state.speed[:, rows]
    wide = {
        "state": STATES[state.state[:, rows]], "flow_L_min": state.flow[:, rows] / L_MIN,
        "speed_mm_s": np.where((kinds != "motor") & (kinds != "constant pressure"), speed * 1e3, np.nan),
        "speed_rpm": np.where(kinds == "motor", speed * 60.0, np.nan),
        "inlet_bar": state.inlet[:, rows] / BAR, "outlet_bar": state.outlet[:, rows] / BAR,
        "drop_bar": (state.inlet - state.outlet)[:, rows] / BAR, "opening_percent": state.opening[:, rows] * 100.0,
        "power_kW": state.power[:, rows] / 1e3, "heat_kW": state.heat[:, rows] / 1e3,
    }  # fmt: skip
    return _long(machine, rows, {"component": state.name, "kind": state.kind}, wide)


def port_table(machine: Machine, solution: Solution, rows: slice = ALL) -> pd.DataFrame:
    """Pressure at every port label.

    Parameters
    ----------
    machine
        Gives the phases.
    solution
        The solved phases.
    rows
        Phases wanted.

    Returns
    -------
    pandas.DataFrame
        `phase_number`, `phase`, `port`, `pressure_bar` (NaN where nothing is connected); phase by phase.
    """
    labels = tuple(label for node in solution.ports.nodes for label in node)
    node = np.repeat(np.arange(len(solution.ports)), [len(labels) for labels in solution.ports.nodes])
    return _long(machine, rows, {"port": labels}, {"pressure_bar": solution.pressure[node][:, rows] / BAR})


def _long(
    machine: Machine, rows: slice, names: dict[str, tuple[str, ...]], wide: dict[str, Array | Any]
) -> pd.DataFrame:
    """Arrays of shape (components, phases) as columns, phase by phase."""
    numbers = np.arange(len(machine.cycle))[rows]
    count = len(next(iter(names.values())))
    repeated = np.repeat(numbers, count)
    return pd.DataFrame({
        "phase_number": repeated,
        "phase": machine.cycle.phase[repeated],
        **{key: np.tile(np.array(words, object), len(numbers)) for key, words in names.items()},
        **{key: values.T.ravel() for key, values in wide.items()},
    })  # fmt: skip
