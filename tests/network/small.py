"""Small machines for tests with algebra by hand."""

from __future__ import annotations

import tempfile
from pathlib import Path
from typing import Any

import numpy as np

from heataudit.machine import read_machine
from heataudit.network.solution import Solution
from heataudit.network.solve import solve
from tests.workbooks import Rows, write

BAR = 1e5
L_MIN = 1e-3 / 60
OIL = 40.0
"""Oil temperature [°C]: VG 46 has its 46 mm²/s there."""

PUMP = ["Pump", "Type", "Control", "Displacement [cm³/rev]", "Speed [rpm]", "Volumetric efficiency [%]", "Outlet"]
TIGHT = [PUMP, ["Pump", "gear", "fixed", 50, 1000, 100, "P"]]
"""A tight fixed pump of 50 L/min."""

RELIEF = ["Relief", "relief", "P", "Tank", 100, 20, 200]
VALVE = ["Valve", "Kind", "From", "To", "Rated flow [L/min]", "Rated drop [bar]", "Opening pressure [bar]"]


def attempt(sheets: dict[str, Rows], oil: Rows | None = None, temperature: float = OIL) -> Solution:
    """Solve the duty cycle of a small machine at 40 °C, or try; sheets that are missing have their defaults."""
    book = {
        "Machine": [["Item", "Value"], ["Machine", "Small"], ["Oil temperature", temperature]],
        "Oil": oil or [["Item", "Value"], ["Viscosity grade", 46]],
        "Reservoir": [["Item", "Value"], ["Oil volume", 100]],
        **sheets,
    }
    with tempfile.TemporaryDirectory() as folder:
        machine = read_machine(write(Path(folder) / "small.xlsx", book))
    return solve(machine, machine.cycle, np.full(len(machine.cycle), temperature + 273.15))


def run(sheets: dict[str, Rows], oil: Rows | None = None, temperature: float = OIL) -> Solution:
    """Solve the duty cycle of a small machine; it is solved, and its balances hold."""
    found = attempt(sheets, oil, temperature)
    assert found.converged.all()
    assert (np.abs(found.balance_error) <= 1e-6 * np.maximum(np.abs(found.shaft_power), 1.0)).all()
    assert found.node_balance.max() < 1e-8
    return found


def flow(found: Solution, name: str) -> np.ndarray[Any, Any]:
    """Flow of a component [L/min]."""
    return found.components.flow[found.components.name.index(name)] / L_MIN


def drop(found: Solution, name: str) -> np.ndarray[Any, Any]:
    """Drop of a component [bar]."""
    return found.components.drop[found.components.name.index(name)] / BAR


def at(found: Solution, port: str) -> np.ndarray[Any, Any]:
    """Pressure of a port [bar]."""
    return found.pressure[found.ports.node(port)] / BAR
