"""An audit made by hand: a machine from a small workbook, invented flows and drops whose energies add up.

In each phase the power of the pumps is shared among load and losses as `_shares` says; drops follow from heat and flow.
"""

from __future__ import annotations

from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import numpy as np
import pandas as pd

from heataudit.audit.model import GROUPS, Annual, Audit, Conditions, Cooler, CycleTotals, Finding, Thermal
from heataudit.machine import Machine, connect, read_machine
from heataudit.network.solution import ActuatorState, ComponentState, PumpState, Solution, State
from tests.workbooks import Sheets, write

BAR, L_MIN = 1e5, 1e-3 / 60
NAMES = ("Lift", "Carry on", "Turn", "Press hard", "Lower", "Pause")
HOURS, PRICE = 2000.0, 0.25


def sheets(phases: int = 6, lines: int = 4, prefix: str = "") -> Sheets:
    """A workbook: two pumps, two open-centre sections, one closed one, three actuators; names may be made longer."""
    moves = [["extend", 20, "hold", 0, "hold", 0], ["hold", 0, "forward", 90, "hold", 0]] * phases
    return {
        "Machine": [
            ["Item", "Value", "Unit"], ["Machine", f"{prefix}Hand-made rig"], ["Site", "Invented"],
            ["Energy price", PRICE], ["CO2 factor", 0.4],
        ],
        "Reservoir": [["Item", "Value", "Unit"], ["Oil volume", 120, "L"]],
        "Pumps": [
            ["Pump", "Type", "Control", "Displacement [cm³/rev]", "Speed [rpm]", "Outlet"],
            [f"{prefix}Main pump", "piston", "fixed", 40, 1500, "P1"],
            [f"{prefix}Pilot pump", "gear", "fixed", 8, 1500, "P2"],
        ],
        "Lines": [
            ["Line", "From", "To", "Service", "Size", "Length [m]"],
            [f"{prefix}Return", "Block.T", "R", "return", "DN25", 3],
            *[[f"{prefix}Feed {k}", "P1", "Block.P", "pressure", "DN20", 2] for k in range(1, lines)],
        ],
        "Valves": [
            ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Opening pressure [bar]"],
            [f"{prefix}Main relief", "relief", "P1", "Tank", None, 200],
            [f"{prefix}Pilot relief", "relief", "P2", "Tank", None, 60],
            [f"{prefix}Return filter", "filter", "R", "Tank", 120, None],
        ],
        "Directional valves": [
            ["Section", "Bank", "Size", "Centre", "Port P", "Port T"],
            [f"{prefix}Lift spool", "Block", "NG10", "open", None, None],
            [f"{prefix}Turn spool", "Block", "NG10", "open", None, None],
            [f"{prefix}Clamp spool", "Clamps", "NG6", "closed", "P2", "R"],
        ],
        "Actuators": [
            ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]"],
            [f"{prefix}Ram", "cylinder", f"{prefix}Lift spool", 80, 45, None],
            [f"{prefix}Drum", "motor", f"{prefix}Turn spool", None, None, 160],
            [f"{prefix}Clamp", "cylinder", f"{prefix}Clamp spool", 40, 25, None],
        ],
        "Duty cycle": [
            ["Phase", "Duration [s]", "Repeats [-]", *[f"{prefix}{name} {what}" for name, what in (
                ("Ram", "move"), ("Ram", "load [kN]"), ("Drum", "move"), ("Drum", "load [N·m]"), ("Clamp", "move"),
                ("Clamp", "load [kN]"),
            )]],
            *[[f"{prefix}{NAMES[k % 6]}" + (f" {k // 6 + 1}" if k >= 6 else ""), 2 + 3 * (k % 4), 1 + k % 2, *moves[k]]
              for k in range(phases)],
        ],
        "Coolers": _coolers(prefix),
    }  # fmt: skip


def _coolers(prefix: str) -> list[list[Any]]:
    """Two curves of two points."""
    return [
        ["Cooler", "Kind", "Oil flow [L/min]", "Capacity [kW/K]", "Pressure drop [bar]", "Fan power [kW]", "Price"],
        [f"{prefix}Small fan", "air", 30, 0.1, 0.5, 0.2, 500],
        [f"{prefix}Small fan", "air", 80, 0.14, 1.5, 0.2, 500],
        [f"{prefix}Large fan", "air", 40, 0.3, 0.4, 0.5, 900],
        [f"{prefix}Large fan", "air", 120, 0.5, 1.4, 0.5, 900],
    ]


@cache
def machine(phases: int = 6, lines: int = 4, prefix: str = "") -> Machine:
    """The workbook, read."""
    with TemporaryDirectory() as folder:
        return read_machine(write(Path(folder) / "rig.xlsx", sheets(phases, lines, prefix)))


def _shares(phases: int) -> dict[str, Any]:
    """Shares of the pumps' hydraulic power: load and losses; in a pause nothing moves."""
    number = np.arange(phases)
    pause = number % 6 == 5
    pressing = number % 6 == 3
    share = {
        "load": np.where(pressing, 0.1, 0.4 + 0.02 * (number % 5)), "lines": np.full(phases, 0.05),
        "metering": np.full(phases, 0.12), "overflow": np.where(pressing, 0.6, 0.0),
        "actuators": np.full(phases, 0.03),
    }  # fmt: skip
    share = {part: np.where(pause, 0.0, values) for part, values in share.items()}
    share["bypass"] = 1.0 - sum(share.values())
    return share | {"pause": pause}


def solution(made: Machine) -> Solution:
    """Invented flows, drops and heat; powers agree to rounding."""
    n = len(made.cycle)
    ports = connect(made.pumps, made.lines, made.valves, made.sections, made.actuators)
    wave = 1.0 + 0.5 * np.sin(np.arange(n))
    pressure = np.vstack([90 * wave, np.full(n, 30.0)]) * BAR
    flow = np.vstack([np.full(n, 58.0), np.full(n, 11.0)]) * L_MIN
    heat = np.vstack([0.08, 0.12]) * pressure * flow
    power = (pressure * flow).sum(axis=0)
    share = _shares(n)
    lines, bank = list(made.lines["name"]), "Block gallery"
    valves, sections = list(made.valves["name"]), list(made.sections["name"])
    names = (*lines, *valves, *sections, bank)
    kinds = (*["line"] * len(lines), *made.valves["kind"], *["section"] * len(sections), "gallery")
    parts = {name: share["lines"] / (len(lines) + 1) for name in (*lines, valves[2])}
    parts |= {valves[0]: share["overflow"], valves[1]: np.zeros(n), bank: share["bypass"]}
    parts |= {name: share["metering"] / len(sections) for name in sections}
    of_parts = np.array([parts[name] * power for name in names])
    flows = np.where(of_parts > 0, (20.0 + 5.0 * (np.arange(len(names)) % 7))[:, None] * L_MIN, 0.0)
    drops = np.divide(of_parts, flows, out=np.zeros_like(of_parts), where=flows > 0)
    actuators = list(made.actuators["name"])
    taken = np.array([share["load"], share["actuators"]]) * power
    states = np.where(share["pause"], State.HELD, State.MOVING) * np.ones((3, 1), int)
    states[2] = State.HELD
    moving = states == State.MOVING
    inlet = np.where(moving, 60 * BAR, np.nan)
    nodes = np.full((len(ports), n), 5 * BAR)
    nodes[0], nodes[-1] = 0.0, np.nan
    zero = np.zeros_like(of_parts)
    ones = np.ones((2, n))
    return Solution(
        ports=ports, pressure=nodes, oil_temperature=np.full(n, 333.15), viscosity=np.full(n, 2e-5),
        density=np.full(n, 850.0), converged=np.ones(n, bool), iterations=np.full(n, 9), residual=np.full(n, 1e-12),
        node_balance=np.full(n, 1e-12), balance_error=np.zeros(n),
        components=ComponentState(names, kinds, flows, drops, of_parts, zero, zero),
        pumps=PumpState(
            tuple(made.pumps["name"]), pressure, np.zeros((2, n)), flow, 0.02 * flow, 25.0 * ones, ones,
            np.nan * ones, pressure * flow + heat, heat,
        ),
        actuators=ActuatorState(
            tuple(actuators), tuple(made.actuators["kind"]), tuple(made.actuators["section"]), states.astype(np.int8),
            np.where(moving, 20 * L_MIN, 0.0), np.where(moving, np.array([[0.1], [2.0], [0.0]]), 0.0),
            np.full((3, n), np.nan), inlet, np.where(moving, 4 * BAR, np.nan), np.where(moving, 2e4, np.nan),
            np.where(moving, 0.8, 0.0), np.array([[0.7], [0.3], [0.0]]) * taken[0],
            np.array([[0.7], [0.3], [0.0]]) * taken[1],
        ),
    )  # fmt: skip


def audit(phases: int = 6, lines: int = 4, prefix: str = "", cooler_kW_K: float = 0.0) -> Audit:
    """The hand-made audit; its tables are plain sums over the invented solution."""
    made = machine(phases, lines, prefix)
    solved = solution(made)
    time = made.cycle.duration * made.cycle.repeats
    groups = _by_group(solved)
    table = _losses(solved, time)
    heat = float(table["heat_kJ"].sum())
    shaft = float(solved.shaft_power @ time) / 1e3
    useful = float(solved.load_power @ time) / 1e3
    cycles = HOURS * 3600 / float(time.sum())
    table["share"], table["annual_kWh"] = table["heat_kJ"] / heat, table["heat_kJ"] * cycles / 3600
    table["annual_cost"] = table["annual_kWh"] * PRICE / 0.9
    return Audit(
        machine=made, solution=solved, version="0.0", phases=_phases(made, solved, groups), losses=table,
        conditions=Conditions(60.0, "given", 25.0, 35.0, 20.0, 850.0),
        cycle=CycleTotals(float(time.sum()), shaft, useful, 0.0, 0.0, heat, heat / float(time.sum()),
                          float(solved.heat.max()) / 1e3, useful / shaft, 1e-9),
        loss_groups={group: float(groups[group] @ time) / 1e3 for group in GROUPS},
        lines=_lines(made, solved, time, cycles), rectangles=_rectangles(made, solved),
        drives=pd.DataFrame([["Motor", "electric", 12.0, 8.0, 15.0, 20000.0, np.nan]], columns=[
            "drive", "kind", "peak_shaft_kW", "mean_shaft_kW", "power_limit_kW", "annual_input_kWh", "annual_fuel_L"]),
        thermal=thermal(cooler_kW_K), cooler=cooler(made, cooler_kW_K),
        annual=Annual(HOURS, shaft * cycles / 3600, shaft * cycles / 3600 / 0.9, None, heat * cycles / 3600, 0.0,
                      shaft * cycles / 3600 / 0.9 * PRICE, 1000.0, "EUR", PRICE / 0.9),
        cold_start=pd.DataFrame(columns=["pump", "phase", "viscosity_mm2_s", "pressure_bar", "relief_flow_L_min",
                                         "inlet_bar"]),
        findings=(
            Finding("line-velocity", "note", f"{prefix}Feed 1", str(made.cycle.phase[0]), "6 m/s in it, not 5 m/s."),
            Finding("oil-too-hot", "danger", "Oil", "", "The oil reaches 80 °C, above the 60 °C that it may have."),
            Finding("relief-flowing", "warning", f"{prefix}Main relief", str(made.cycle.phase[-1]),
                    "30 L/min at 200 bar."),
        ),
    )  # fmt: skip


def _by_group(solved: Solution) -> dict[str, Any]:
    """Heat of each group in each phase [W]."""
    of = {"line": "lines", "filter": "lines", "relief": "overflow", "section": "metering", "gallery": "bypass"}
    pause = np.all(solved.actuators.state == State.HELD, axis=0)
    groups = {group: np.zeros(solved.phases) for group in GROUPS}
    for kind, heat in zip(solved.components.kind, solved.components.heat, strict=True):
        groups[of[kind]] += heat
    groups["pump"] += solved.pumps.heat.sum(axis=0)
    groups["actuators"] += solved.actuators.heat.sum(axis=0)
    for group in ("pump", "bypass", "metering", "lines"):
        groups["idle"] += np.where(pause, groups[group], 0.0)
        groups[group] = np.where(pause, 0.0, groups[group])
    return groups


def _losses(solved: Solution, time: Any) -> pd.DataFrame:
    """A row per component; pauses are idle."""
    pause = np.all(solved.actuators.state == State.HELD, axis=0)
    of = {"line": "lines", "filter": "lines", "relief": "overflow", "section": "metering", "gallery": "bypass",
          "pump": "pump", "cylinder": "actuators", "motor": "actuators"}  # fmt: skip
    rows = []
    for state, kinds in ((solved.pumps, ("pump",) * 2), (solved.components, solved.components.kind),
                         (solved.actuators, solved.actuators.kind)):  # fmt: skip
        for name, kind, heat in zip(state.name, kinds, state.heat, strict=True):
            idle = float((heat * pause) @ time) / 1e3
            rows.append((name, kind, of[kind], float(heat @ time) / 1e3 - idle))
            rows += [(name, kind, "idle", idle)] if idle else []
    table = pd.DataFrame(rows, columns=["component", "kind", "group", "heat_kJ"])
    return table.sort_values("heat_kJ", ascending=False, kind="stable", ignore_index=True)


def _phases(made: Machine, solved: Solution, groups: dict[str, Any]) -> pd.DataFrame:
    n = solved.phases
    return pd.DataFrame({
        "phase": made.cycle.phase, "duration_s": made.cycle.duration, "repeats": made.cycle.repeats,
        "shaft_power_kW": solved.shaft_power / 1e3, "heat_kW": solved.heat / 1e3,
        "useful_power_kW": solved.load_power / 1e3, "returned_power_kW": np.zeros(n), "lifting_power_kW": np.zeros(n),
        "other_heat_kW": np.zeros(n), "balance_error_kW": np.zeros(n), "converged": solved.converged,
        "iterations": solved.iterations, "residual": solved.residual,
        **{f"{group}_kW": groups[group] / 1e3 for group in GROUPS},
    })  # fmt: skip


def _lines(made: Machine, solved: Solution, time: Any, cycles: float) -> pd.DataFrame:
    rows = []
    for k, line in enumerate(made.lines.itertuples()):
        heat = float(solved.components.heat[k] @ time) / 1e3
        rows.append((
            line.name, line.service, line.size, line.inside_diameter * 1e3, line.count, line.length,
            made.cycle.phase[0], 40.0, 0.5 + 0.9 * (k % 9), 3.0 if line.service == "return" else 5.0, 4000.0, 1.2,
            heat / float(time.sum()), heat, heat * cycles / 3600, heat * cycles / 3600 * PRICE / 0.9,
        ))  # fmt: skip
    columns = ["line", "service", "size", "inside_diameter_mm", "count", "length_m", "phase", "flow_L_min",
               "velocity_m_s", "guideline_m_s", "reynolds", "drop_bar", "mean_heat_kW", "heat_kJ", "annual_kWh",
               "annual_cost"]  # fmt: skip
    return pd.DataFrame(rows, columns=columns)


def _rectangles(made: Machine, solved: Solution) -> pd.DataFrame:
    """Layers of the working column, then the columns of bypass and overflow."""
    power = (solved.pumps.pressure * solved.pumps.flow).sum(axis=0)
    flow = solved.pumps.flow.sum(axis=0)
    share = _shares(solved.phases)
    rows = []
    for k in range(min(solved.phases, 12)):
        pressure, working = power[k] / flow[k] / BAR, 1.0 - share["bypass"][k] - share["overflow"][k]
        low, left, total = 0.0, 0.0, flow[k] / L_MIN
        for part in ("load", "actuators", "metering", "lines"):
            if working > 1e-9 and share[part][k] > 0:
                high = pressure * share[part][k] / working
                rows.append(
                    (k, made.cycle.phase[k], part, 0.0, total * working, low, high, share[part][k] * power[k] / 1e3)
                )
                low += high
        left = total * working
        for part in ("bypass", "overflow"):
            if share[part][k] > 1e-9:
                name = "idle" if share["pause"][k] else part
                wide = total * share[part][k]
                rows.append((k, made.cycle.phase[k], name, left, wide, 0.0, pressure, share[part][k] * power[k] / 1e3))
                left += wide
    return pd.DataFrame(rows, columns=[
        "phase_number", "phase", "part", "flow_start_L_min", "flow_width_L_min", "pressure_start_bar",
        "pressure_height_bar", "power_kW"])  # fmt: skip


def thermal(cooler_kW_K: float = 0.0) -> Thermal:
    """A heat balance with straight lines: 5 kW less 0.01 kW/K, a tank of 0.06 kW/K."""
    oil = np.linspace(20.0, 120.0, 11)
    heat, tank = 5.2 - 0.01 * oil, 0.06 * (oil - 25.0)
    bare = (5.2 + 1.5) / 0.07
    cooled = (5.2 + 25.0 * (0.06 + cooler_kW_K)) / (0.07 + cooler_kW_K)
    time = np.linspace(0.0, 600.0, 61)
    rise = 1.0 - np.exp(-time / 150.0)
    return Thermal(
        mean_heat_kW=4.6, tank_dissipation_kW=2.1, tank_coefficient_W_m2K=12.0, equilibrium_C=cooled,
        equilibrium_without_cooler_C=bare, warm_up_min=450.0, ripple_K=1.2, time_constant_min=150.0,
        start_temperature_C=25.0, highest_temperature_C=60.0,
        heat_curve=pd.DataFrame({
            "oil_C": oil, "heat_kW": heat, "tank_kW": tank, "tank_and_cooler_kW": tank + cooler_kW_K * (oil - 25.0)}),
        warm_up=pd.DataFrame({
            "time_min": time, "with_cooler_C": 25 + (cooled - 25) * rise, "without_cooler_C": 25 + (bare - 25) * rise}),
    )  # fmt: skip


def cooler(made: Machine, existing_kW_K: float = 0.0) -> Cooler:
    """What is needed by the straight lines at 60 °C oil and 35 °C air: 4.6 kW less 1.5 kW, over 25 K."""
    names = list(dict.fromkeys(made.coolers["name"]))
    options = pd.DataFrame({
        "cooler": names, "kind": ["air", "air"], "oil_flow_L_min": ["40 to 120", "30 to 80"],
        "offered_kW_K": [0.4, 0.12], "oil_temperature_C": [44.0, 61.0], "pressure_drop_bar": [1.0, 1.5],
        "fan_power_kW": [0.5, 0.2], "price": [900.0, 500.0], "enough": [True, False],
        "remark": ["enough", "gives 88 % of what is needed"],
    })  # fmt: skip
    return Cooler(
        needed=True, design_heat_kW=4.6, tank_at_design_kW=1.5, oil_inlet_C=60.0, coolant_inlet_C=35.0,
        oil_flow_L_min=60.0, required_kW=3.1, required_kW_K=3.1 / 25.0, reserve_percent=10.0, window_start_s=0.0,
        window_s=60.0, existing_kW_K=existing_kW_K,
        existing_margin_percent=100 * (existing_kW_K / (3.1 / 25) - 1) if existing_kW_K else None,
        choice=names[0], choice_oil_temperature_C=44.0, drop_hot_bar=0.7, drop_cold_bar=4.0,
        verdict=f"3.1 kW must be taken away to hold 60 °C. {names[0]} is enough.", options=options,
    )  # fmt: skip
