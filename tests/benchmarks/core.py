"""Speed of the solver's core, as ratios in one run: `python -m tests.benchmarks.core`.

The core is the batched interior point with its exact finish, on reduced networks, without viscosity under pressure and
without openings that have to be found. It is held against one `scipy.optimize.root` call per phase on the same laws
(natural residual of the bounds) and against one vectorised evaluation of all laws.
"""

from __future__ import annotations

import tempfile
from pathlib import Path
from time import process_time

import numpy as np
from scipy.optimize import root

from heataudit.machine import connect, read_machine
from heataudit.network.active_set import solve_reduced
from heataudit.network.assemble import assemble
from heataudit.network.elements import Elements
from heataudit.network.linear import Array
from heataudit.network.plant import Plant
from heataudit.network.reduce import Folding
from heataudit.network.topology import analyse
from tests.network.random_machines import random_machine
from tests.workbooks import write

PHASES = 10_000
SINGLE = 40
SEEDS = (3, 7, 20)


def reduced(seed: int, phases: int) -> tuple[Elements, Array]:
    """A random machine's reduced network in many phases, loads scattered by 20 %, and pressures to start from."""
    with tempfile.TemporaryDirectory() as folder:
        machine = read_machine(write(Path(folder) / "machine.xlsx", random_machine(seed, 60)))
    rng = np.random.default_rng(seed)
    cycle = machine.cycle.take(rng.integers(0, 60, phases))
    for key in cycle.values:
        if key[1] == "load_pressure":
            cycle.values[key] = cycle.values[key] * rng.uniform(0.8, 1.2, phases)
    ports = connect(machine.pumps, machine.lines, machine.valves, machine.sections, machine.actuators)
    plant = Plant(machine, cycle, ports, np.full(phases, machine.general["oil_temperature"]))
    branches = assemble(plant).branches
    elements = Folding(branches, analyse(branches)).elements(np.ones(branches.constant.shape))
    return elements, np.full((elements.node_count, phases), 1.0)


def natural_residual(elements: Elements, unknowns: Array) -> Array:
    """Laws, bounds and node balances of one phase in one vector."""
    count = len(elements.constant)
    flow, pressure = unknowns[:count, None], unknowns[count:, None]
    drop, _ = elements.laws(flow)
    missed = np.where(elements.active, drop - elements.driving(pressure), flow)
    held = flow - np.clip(flow - missed, elements.low, elements.high)
    held = np.where(elements.active, held, flow)
    return np.concatenate([held, elements.node_residual(flow, pressure)])[:, 0]


def measure(seed: int) -> None:
    """Print the ratios for one machine."""
    elements, start = reduced(seed, PHASES)
    began = process_time()
    point = solve_reduced(elements, start)
    core = (process_time() - began) / PHASES
    began = process_time()
    for _ in range(10):
        elements.laws(point.flow)
    laws = (process_time() - began) / 10 / PHASES
    began, solved = process_time(), 0
    for row in range(SINGLE):
        one = elements.take(np.array([row]))
        guess = np.concatenate([np.full(len(one.constant), 0.1), start[:, row]])
        found = root(lambda x, one=one: natural_residual(one, x), guess)
        solved += bool(found.success)
    single = (process_time() - began) / SINGLE
    print(
        f"machine {seed}: {len(elements.constant)} elements, {elements.node_count} nodes; "
        f"{(point.residual < 1e-8).mean():.2%} solved, {point.iterations.mean():.1f} steps a phase; "
        f"{single / core:.0f} times faster than root per phase (which solves {solved} of {SINGLE}); "
        f"{core / laws:.0f} evaluations of all laws"
    )


if __name__ == "__main__":
    for seed in SEEDS:
        measure(seed)
