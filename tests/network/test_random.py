"""Random machines keep the laws: balances, directions, states, and one solution whatever way it is reached."""

from __future__ import annotations

import tempfile
from pathlib import Path

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from heataudit.machine import Machine, read_machine
from heataudit.network import settle
from heataudit.network.solution import Solution, State
from heataudit.network.solve import solve
from tests.network.random_machines import random_machine
from tests.workbooks import write

SEEDS = st.integers(0, 2**31)
FEW = settings(max_examples=20, deadline=None, derandomize=True, suppress_health_check=list(HealthCheck))


def solved(seed: int, phases: int, *, mixed: bool = False) -> tuple[Machine, Solution]:
    """A random machine and its phases, solved at its oil temperature."""
    with tempfile.TemporaryDirectory() as folder:
        machine = read_machine(write(Path(folder) / "machine.xlsx", random_machine(seed, phases, mixed=mixed)))
    return machine, at_oil_temperature(machine)


def at_oil_temperature(machine: Machine, rows: object = None) -> Solution:
    cycle = machine.cycle if rows is None else machine.cycle.take(np.asarray(rows))
    return solve(machine, cycle, np.full(len(cycle), machine.general["oil_temperature"]))


def check(machine: Machine, found: Solution) -> None:
    """What holds in every solved phase."""
    assert found.converged.all()
    assert found.residual.max() < 1e-8  # the contract's: of the pump flow and of 100 bar
    assert found.node_balance.max() < 1e-8
    limit = 1e-4 * np.maximum(np.abs(found.shaft_power), 100.0)  # 0.01 % of the shaft power
    assert (np.abs(found.balance_error) < limit).all()
    actuators, components = found.actuators, found.components
    assert (actuators.flow >= 0).all()
    for name, kind, flow in zip(components.name, components.kind, components.flow, strict=True):
        if kind in ("check", "relief", "void", "load-sensing unloading", "priority"):
            assert (flow >= 0).all(), name
    still = np.isin(actuators.state, (State.HELD, State.STALLED))
    assert (actuators.flow[still] == 0).all()
    assert (actuators.flow[np.isin(actuators.state, (State.MOVING, State.SLOW))] > 0).all()
    slow = actuators.state == State.SLOW
    assert (actuators.speed[slow] < actuators.asked_speed[slow]).all()
    assert ((found.pumps.displacement >= -1e-9) & (found.pumps.displacement <= 1 + 1e-9)).all()
    relief = {v.name: v for v in machine.valves.itertuples(index=False) if v.kind == "relief"}
    for name, flow, drop in zip(components.name, components.flow, components.drop, strict=True):
        if name in relief:  # override in proportion to the flow, by the law's definition
            law = relief[name].opening_pressure + flow / relief[name].rated_flow * relief[name].rated_drop
            assert np.allclose(drop[flow > 0], law[flow > 0], rtol=1e-6)


@FEW
@given(SEEDS)
def test_balances_directions_and_states(seed: int) -> None:
    check(*solved(seed, 10))


@FEW
@given(SEEDS)
def test_a_batch_equals_phases_alone(seed: int) -> None:
    machine, together = solved(seed, 6)
    largest = np.abs(together.components.flow).max(initial=1e-6)
    for phase in range(6):
        alone = at_oil_temperature(machine, [phase])
        flows = dict(zip(together.components.name, together.components.flow[:, phase], strict=True))
        for name, flow in zip(alone.components.name, alone.components.flow[:, 0], strict=True):
            assert flow == pytest.approx(flows[name], rel=1e-6, abs=1e-8 * largest)
        assert alone.pumps.pressure[:, 0] == pytest.approx(together.pumps.pressure[:, phase], rel=1e-6, abs=10.0)


@FEW
@given(SEEDS, st.floats(0.1, 1.0), st.floats(0.0, 2e6))
def test_the_start_does_not_matter(seed: int, share: float, back: float) -> None:
    machine, found = solved(seed, 6)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(settle, "START_SHARE", share)
        patch.setattr(settle, "START_RETURN", back)
        again = at_oil_temperature(machine)
    largest = np.abs(found.components.flow).max(initial=1e-6)
    assert again.components.flow == pytest.approx(found.components.flow, rel=1e-6, abs=1e-8 * largest)


@settings(max_examples=12, deadline=None, derandomize=True, suppress_health_check=list(HealthCheck))
@given(st.sampled_from([0, 3, 4, 5, 6, 8, 10, 11, 12, 13, 14, 18, 48, 49, 50, 51, 52, 53, 56, 57, 58, 59]))
def test_mixed_machines(seed: int) -> None:
    _, found = solved(seed, 12, mixed=True)
    check_mixed(found)
    assert found.converged.all()


def check_mixed(found: Solution) -> None:
    """What holds where pilots, compensators and closed loops are about; phases that are not solved are marked."""
    sound = found.converged
    assert found.node_balance[sound].max(initial=0.0) < 1e-8
    limit = 1e-4 * np.maximum(np.abs(found.shaft_power), 100.0)
    assert (np.abs(found.balance_error) < limit)[sound].all()
    moving = np.isin(found.actuators.state, (State.MOVING, State.SLOW))
    assert (found.actuators.flow[moving & sound] > 0).all()


@pytest.mark.long
def test_twenty_thousand_phases() -> None:
    """Plain and mixed machines; the share that is not solved is printed and bounded."""
    total = unsolved = 0
    for seed in range(500):
        machine, found = solved(seed, 20)
        check(machine, found)
    for seed in range(500):
        _, found = solved(seed, 20, mixed=True)
        check_mixed(found)
        total += found.phases
        unsolved += int((~found.converged).sum())
    print(f"mixed: {unsolved} of {total} phases not solved")
    assert unsolved <= 0.01 * total
