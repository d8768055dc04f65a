"""Lines: velocity against the guideline, Reynolds number, drop and heat."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

from heataudit.audit.figures import BAR, L_MIN
from heataudit.audit.routes import rows_of
from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution
from heataudit.physics.arrays import Array
from heataudit.physics.lines import guideline_velocity, reynolds_number, velocity

COLUMNS = (
    "line", "service", "size", "inside_diameter_mm", "count", "length_m", "phase", "flow_L_min", "velocity_m_s",
    "guideline_m_s", "reynolds", "drop_bar", "mean_heat_kW", "heat_kJ",
)  # fmt: skip


def speeds(row: Any, solution: Solution) -> tuple[Array, Array]:
    """Velocity in a line, signed, and its guideline [m/s], both of shape (phases,).

    The guideline of a pressure line depends on the mean of the pressures at its ends.

    Parameters
    ----------
    row
        The line's row of the table.
    solution
        The solved phases.
    """
    flow = solution.components.flow[solution.components.name.index(row.name)]
    ends = (np.nan_to_num(solution.pressure[solution.ports.node(label)]) for label in (row.from_, row.to))
    return velocity(flow, row.inside_diameter, row.count), guideline_velocity(row.service, 0.5 * sum(ends))


def line_table(machine: Machine, cycle: Cycle, solution: Solution) -> pd.DataFrame:
    """Lines as `Audit.lines` says, without the year.

    Parameters
    ----------
    machine
        Gives the lines.
    cycle
        The phases.
    solution
        What the network found for them.
    """
    time = cycle.duration * cycle.repeats
    components = solution.components
    rows = []
    for line in rows_of(machine.lines):
        k = components.name.index(line.name)
        speed, guideline = speeds(line, solution)
        worst = int(np.argmax(np.abs(speed)))
        energy = float(components.heat[k] @ time)
        rows.append((
            line.name, line.service, line.size, line.inside_diameter * 1e3, line.count, line.length,
            cycle.phase[worst], components.flow[k, worst] / L_MIN, float(speed[worst]), float(guideline[worst]),
            float(reynolds_number(speed[worst], line.inside_diameter, solution.viscosity[worst])),
            components.drop[k, worst] / BAR, energy / float(time.sum()) / 1e3, energy / 1e3,
        ))  # fmt: skip
    return pd.DataFrame(rows, columns=list(COLUMNS))
