"""The long tables are the solution in other units: every value is compared with its array."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from heataudit.audit.tables import actuator_table, component_table, port_table, pump_table
from tests.report.fixture import machine, solution

MACHINE = machine()
SOLUTION = solution(MACHINE)


def wide(table: pd.DataFrame, key: str, name: str = "component") -> np.ndarray:
    """A column as (components, phases)."""
    return table.pivot(index=name, columns="phase_number", values=key).to_numpy()


@pytest.mark.parametrize("table_of", [component_table, pump_table, actuator_table, port_table])
def test_part_of_the_phases_is_that_part_of_the_whole(table_of):
    whole = table_of(MACHINE, SOLUTION)
    part = table_of(MACHINE, SOLUTION, slice(2, 5))
    expected = whole[whole["phase_number"].between(2, 4)].reset_index(drop=True)
    pd.testing.assert_frame_equal(part, expected)
    assert whole["phase_number"].is_monotonic_increasing
    assert list(part["phase"].unique()) == ["Turn", "Press hard", "Lower"]


def test_components_in_bar_litres_and_kilowatts():
    table = component_table(MACHINE, SOLUTION)
    state = SOLUTION.components
    order = np.argsort(state.name)
    # exact arithmetic: 1 bar = 1e5 Pa, 1 L/min = 1e-3/60 m³/s
    np.testing.assert_allclose(wide(table, "flow_L_min"), state.flow[order] * 60e3, rtol=1e-12)
    np.testing.assert_allclose(wide(table, "drop_bar"), state.drop[order] / 1e5, rtol=1e-12)
    np.testing.assert_allclose(wide(table, "heat_kW"), state.heat[order] / 1e3, rtol=1e-12)


def test_velocity_is_flow_per_area_for_lines_only():
    table = component_table(MACHINE, SOLUTION)
    line = table[table["component"] == "Feed 1"]
    bore = MACHINE.lines.set_index("name").loc["Feed 1", "inside_diameter"]
    flow = SOLUTION.components.flow[SOLUTION.components.name.index("Feed 1")]
    np.testing.assert_allclose(line["velocity_m_s"], flow / (np.pi / 4 * bore**2), rtol=1e-12)
    assert table.loc[table["kind"] != "line", "velocity_m_s"].isna().all()


def test_pumps_and_actuators_carry_their_own_columns():
    pumps, actuators = pump_table(MACHINE, SOLUTION), actuator_table(MACHINE, SOLUTION)
    np.testing.assert_allclose(wide(pumps, "pressure_bar")[0], SOLUTION.pumps.pressure[0] / 1e5)
    np.testing.assert_allclose(pumps["drop_bar"], -pumps["pressure_bar"])  # suction at 0 bar
    drum = actuators[actuators["component"] == "Drum"]
    assert drum["speed_rpm"].tolist() == [120.0] * 5 + [0.0]  # 2 rev/s
    assert drum["speed_mm_s"].isna().all()
    assert actuators[actuators["component"] == "Ram"]["speed_mm_s"].tolist()[0] == 100.0
    assert drum["state"].tolist() == ["moving"] * 5 + ["held"]


def test_every_port_label_has_the_pressure_of_its_node():
    table = port_table(MACHINE, SOLUTION, slice(0, 1)).set_index("port")["pressure_bar"]
    ports = SOLUTION.ports
    assert set(table.index) == {label for labels in ports.nodes for label in labels}
    for label in table.index:
        np.testing.assert_equal(table[label], SOLUTION.pressure[ports.node(label), 0] / 1e5)
