"""The practitioner's picture of waste: pump pressure by pump flow, cut into load, throttling, line, overflow."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from heataudit.audit.figures import BAR, L_MIN
from heataudit.audit.losses import Losses, something_moves
from heataudit.audit.model import GROUPS
from heataudit.machine import Cycle
from heataudit.network.solution import Solution
from heataudit.physics.arrays import Array

LAYERS = ("load", "actuators", "lowering", "metering", "lines", "other")
"""Parts of the working column, from the bottom."""

COLUMNS = ("bypass", "idle", "overflow")
"""Parts that take the whole pressure, beside the working column."""

PAID_FIRST = ("lowering", "actuators", "metering", "lines", "other", "bypass", "idle", "overflow", "load")
"""Parts in the order in which the power of loads that drive pays for them."""

MOST_PHASES = 1000
"""Phases that have a rectangle; of a longer cycle those that take the most energy."""

TABLE_COLUMNS = (
    "phase_number", "phase", "part", "flow_start_L_min", "flow_width_L_min", "pressure_start_bar",
    "pressure_height_bar", "power_kW",
)  # fmt: skip


def hydraulic_power(solution: Solution) -> tuple[Array, Array]:
    """Hydraulic power [W] of all pumps and the flow [m³/s] that they deliver, whichever way, shape (phases,).

    Power is the sum of flow x (outlet less inlet pressure).

    Parameters
    ----------
    solution
        The solved phases.
    """
    pumps = solution.pumps
    drop = pumps.pressure - pumps.inlet_pressure
    return np.asarray((pumps.flow * drop).sum(axis=0)), np.asarray(np.abs(pumps.flow).sum(axis=0))


def shares(solution: Solution, losses: Losses) -> dict[str, Array]:
    """Power [W] of each part, 0 or more; together the pumps' hydraulic power, shape (phases,) each.

    What loads give back pays for the lowering first, then for the others in the order of `PAID_FIRST`. The lines' part
    has what lifts the oil. What slip spends in suction and drain lines is no part of the delivered flow; being small,
    it is left out in the same order.

    Parameters
    ----------
    solution
        The solved phases.
    losses
        Their losses.
    """
    total, _ = hydraulic_power(solution)
    total = np.maximum(total, 0.0)
    parts = {group: power.copy() for group, power in zip(GROUPS, losses.powers, strict=True)}
    pumps_heat = solution.pumps.heat.sum(axis=0)
    working = something_moves(solution)
    parts["idle"] -= np.where(working, 0.0, pumps_heat)
    parts["other"] -= losses.let_down
    parts["lines"] += solution.lifting_power
    parts["load"] = np.maximum(solution.actuators.power, 0.0).sum(axis=0)
    parts = {part: np.maximum(parts[part], 0.0) for part in PAID_FIRST}
    given_back = np.maximum(sum(parts.values()) - total, 0.0)
    for part in PAID_FIRST:
        paid = np.minimum(parts[part], given_back)
        parts[part] = parts[part] - paid
        given_back = given_back - paid
    left = sum(parts.values())
    scale = np.divide(total, left, out=np.zeros_like(total), where=left > 0)
    return {part: power * scale for part, power in parts.items()}


def rectangle_table(cycle: Cycle, solution: Solution, losses: Losses) -> pd.DataFrame:
    """Rectangles as `Audit.rectangles` says; parts without power are left out.

    Parameters
    ----------
    cycle
        The phases.
    solution
        What the network found for them.
    losses
        Their losses.
    """
    power, flow = hydraulic_power(solution)
    energy = power * cycle.duration * cycle.repeats
    drawn = np.sort(np.argsort(-energy, kind="stable")[:MOST_PHASES])
    drawn = drawn[(power[drawn] > 0) & (flow[drawn] > 0)]
    power, flow = power[drawn], flow[drawn]
    parts = {part: values[drawn] for part, values in shares(solution, losses).items()}
    pressure = power / flow
    working = sum(parts[part] for part in LAYERS)
    width = flow * (working / power)
    table, base, start = [], np.zeros(len(drawn)), width
    for part in LAYERS:
        height = np.divide(parts[part], width, out=np.zeros_like(width), where=width > 0)
        table.append(_rows(drawn, part, (np.zeros_like(width), width, base, height), parts[part]))
        base = base + height
    for part in COLUMNS:
        wide = flow * (parts[part] / power)
        table.append(_rows(drawn, part, (start, wide, np.zeros_like(width), pressure), parts[part]))
        start = start + wide
    found = pd.concat(table, ignore_index=True)
    found = found[found["power_kW"] > 0].sort_values("phase_number", kind="stable", ignore_index=True)
    found.insert(1, "phase", cycle.phase[found["phase_number"].to_numpy()])
    return found


def _rows(drawn: NDArray[np.intp], part: str, place: tuple[Array, Array, Array, Array], power: Array) -> pd.DataFrame:
    flow, width, pressure, height = place
    columns = (drawn, part, flow / L_MIN, width / L_MIN, pressure / BAR, height / BAR, power / 1e3)
    return pd.DataFrame(dict(zip((c for c in TABLE_COLUMNS if c != "phase"), columns, strict=True)))
