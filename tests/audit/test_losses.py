from dataclasses import replace

import numpy as np
import pytest

from heataudit.audit.losses import LET_DOWN, find_losses, let_down_energy, phase_table, totals
from heataudit.audit.model import GROUPS
from heataudit.machine import Move
from tests.audit.fixture import press, solution

MACHINE, SOLUTION = press(), solution()
TIME = np.array([4.0, 3.0, 10.0])


def test_heat_falls_into_the_groups_that_the_state_of_the_machine_asks_for() -> None:
    powers = dict(zip(GROUPS, find_losses(MACHINE, MACHINE.cycle, SOLUTION).powers, strict=True))
    # exact arithmetic: L/min x bar / 0.6 = W, from the table in `solution`
    expected = {
        "pump": [1000, 500, 0], "idle": [0, 0, 200 + 40 * 4 / 0.6], "bypass": [10 * 57 / 0.6, 10 * 3 / 0.6, 0],
        "metering": [30 * 8 / 0.6 + 20 * 5 / 0.6, 30 * 3 / 0.6, 0], "lines": [(80 + 30) / 0.6, (40 + 30) / 0.6, 0],
        "overflow": [0, 0, 0], "lowering": [0, 20 * 60 / 0.6, 0], "actuators": [100, 50, 0], "other": [0, 0, 0],
    }  # fmt: skip
    for group, power in expected.items():
        assert powers[group] == pytest.approx(power, rel=1e-12, abs=1e-9), group


def test_groups_and_components_sum_to_the_heat_of_the_cycle() -> None:
    losses = find_losses(MACHINE, MACHINE.cycle, SOLUTION)
    cycle = totals(MACHINE.cycle, SOLUTION, losses)
    assert sum(losses.groups(MACHINE.cycle).values()) == cycle.heat_energy_kJ
    assert losses.table["heat_kJ"].sum() == pytest.approx(cycle.heat_energy_kJ, rel=1e-12)
    assert losses.heat == pytest.approx(SOLUTION.heat, rel=1e-12)
    assert set(losses.table["component"]) == {*SOLUTION.components.name, "Pump 1", "Ram"}


def test_energy_in_is_work_and_heat() -> None:
    cycle = totals(MACHINE.cycle, SOLUTION, find_losses(MACHINE, MACHINE.cycle, SOLUTION))
    # exact arithmetic: 5 kW for 4 s, 0.8333 kW for 3 s, 0.4667 kW for 10 s
    assert cycle.shaft_energy_kJ == pytest.approx(20 + 2.5 + 14 / 3, rel=1e-12)
    assert cycle.useful_energy_kJ == pytest.approx(2.2 * 4, rel=1e-12)
    assert cycle.returned_energy_kJ == pytest.approx((1190 / 600 + 0.05) * 3, rel=1e-12)
    assert cycle.shaft_energy_kJ + cycle.returned_energy_kJ == pytest.approx(
        cycle.useful_energy_kJ + cycle.heat_energy_kJ + cycle.lifting_energy_kJ, rel=1e-12
    )
    assert cycle.efficiency == pytest.approx(8.8 / (20 + 2.5 + 14 / 3), rel=1e-12)


def test_repeats_count_in_energies_and_not_in_powers() -> None:
    twice = replace(MACHINE.cycle, repeats=np.array([2.0, 2.0, 2.0]))
    once, double = (totals(c, SOLUTION, find_losses(MACHINE, c, SOLUTION)) for c in (MACHINE.cycle, twice))
    assert double.heat_energy_kJ == pytest.approx(2 * once.heat_energy_kJ, rel=1e-12)
    assert (double.mean_heat_kW, double.peak_heat_kW) == pytest.approx((once.mean_heat_kW, once.peak_heat_kW))


def trapped(litres: float, moves: list[Move]) -> np.ndarray:
    machine = replace(
        MACHINE, actuators=MACHINE.actuators.assign(trapped_volume=litres * 1e-3),
        cycle=replace(MACHINE.cycle, moves={"Ram": np.array(moves, np.int8)}),
    )  # fmt: skip
    return let_down_energy(machine, machine.cycle, SOLUTION)


def test_trapped_oil_is_let_down_when_a_loaded_move_ends() -> None:
    one_stroke = 50e5**2 * 2e-3 / (2 * 1.4e9)  # p² V / (2 K), inlet at 50 bar: exact arithmetic
    ends = trapped(2.0, [Move.EXTEND, Move.RETRACT, Move.HOLD])
    assert ends == pytest.approx([one_stroke, 0, 0], rel=1e-12)  # the second move is driven by its load


def test_trapped_oil_stays_while_the_command_goes_on() -> None:
    assert trapped(2.0, [Move.EXTEND, Move.EXTEND, Move.HOLD]) == pytest.approx([0, 0, 0])
    assert trapped(2.0, [Move.EXTEND, Move.EXTEND, Move.EXTEND]) == pytest.approx([0, 0, 0])
    assert trapped(0.0, [Move.EXTEND, Move.RETRACT, Move.HOLD]) == pytest.approx([0, 0, 0])


def test_a_press_lets_down_whatever_its_load() -> None:
    at_1_bar = 1e5**2 * 2e-3 / (2 * 1.4e9)  # the second phase's inlet stands at 1 bar
    assert trapped(2.0, [Move.HOLD, Move.PRESS, Move.HOLD]) == pytest.approx([0, at_1_bar, 0], rel=1e-12)


def test_the_last_phase_is_followed_by_the_first() -> None:
    rolled = trapped(2.0, [Move.EXTEND, Move.HOLD, Move.EXTEND])
    assert rolled[0] > 0  # ends: the next phase holds


def test_let_down_is_heat_and_shaft_energy_alike() -> None:
    machine = replace(MACHINE, actuators=MACHINE.actuators.assign(trapped_volume=2e-3))
    losses = find_losses(machine, machine.cycle, SOLUTION)
    plain = totals(MACHINE.cycle, SOLUTION, find_losses(MACHINE, MACHINE.cycle, SOLUTION))
    cycle = totals(machine.cycle, SOLUTION, losses)
    energy_kJ = 50e5**2 * 2e-3 / (2 * 1.4e9) / 1e3
    assert cycle.heat_energy_kJ - plain.heat_energy_kJ == pytest.approx(energy_kJ)
    assert cycle.shaft_energy_kJ - plain.shaft_energy_kJ == pytest.approx(energy_kJ)
    assert losses.groups(machine.cycle)["other"] == pytest.approx(energy_kJ, rel=1e-12)
    row = losses.table.set_index("component").loc[LET_DOWN]
    assert (row["group"], row["heat_kJ"]) == ("other", pytest.approx(energy_kJ))


def test_relief_oil_is_overflow_even_while_nothing_moves() -> None:
    flow = SOLUTION.components.flow.copy()
    heat = SOLUTION.components.heat.copy()
    flow[2, 2], heat[2, 2] = 1e-4, 700.0
    with_relief = replace(SOLUTION, components=replace(SOLUTION.components, flow=flow, heat=heat))
    powers = find_losses(MACHINE, MACHINE.cycle, with_relief).powers
    assert powers[GROUPS.index("overflow")].tolist() == [0, 0, 700.0]


def test_phase_table_repeats_the_groups_and_balances() -> None:
    losses = find_losses(MACHINE, MACHINE.cycle, SOLUTION)
    table = phase_table(MACHINE.cycle, SOLUTION, losses, np.array([100.0, 0.0, 0.0]))
    assert table[[f"{group}_kW" for group in GROUPS]].sum(axis=1).to_numpy() == pytest.approx(table["heat_kW"])
    left = (table["shaft_power_kW"] + table["returned_power_kW"] - table["useful_power_kW"]
            - table["lifting_power_kW"] - table["heat_kW"])  # fmt: skip
    assert left.to_numpy() == pytest.approx([0, 0, 0], abs=1e-12)
    assert table["other_heat_kW"].tolist() == [0.1, 0, 0]
