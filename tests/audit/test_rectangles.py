from dataclasses import replace

import numpy as np
import pandas as pd
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from heataudit.audit.losses import find_losses
from heataudit.audit.rectangles import hydraulic_power, rectangle_table
from heataudit.network.solution import Solution
from tests.audit.fixture import press, solution

MACHINE, SOLUTION = press(), solution()


def table(solved: Solution) -> pd.DataFrame:
    return rectangle_table(MACHINE.cycle, solved, find_losses(MACHINE, MACHINE.cycle, solved))


def test_a_working_phase_has_its_load_below_and_its_bypass_beside() -> None:
    rows = table(SOLUTION)
    parts = rows[rows["phase"] == "Down"].set_index("part")
    # exact arithmetic: 4 kW at 40 L/min, 60 bar; 0.95 kW go through the gallery, so 9.5 L/min wide
    assert parts.loc["bypass", ["flow_start_L_min", "flow_width_L_min"]].tolist() == pytest.approx([30.5, 9.5])
    assert parts.loc["load", ["pressure_start_bar", "pressure_height_bar"]].tolist() == pytest.approx(
        [0, 2.2 * 600 / 30.5]
    )
    assert parts.loc["metering", "power_kW"] == pytest.approx((30 * 8 + 20 * 5) / 600)
    assert parts["power_kW"].sum() == pytest.approx(4.0, rel=1e-12)


def test_a_load_that_drives_pays_for_its_own_lowering() -> None:
    rows = table(SOLUTION)
    parts = rows[rows["phase"] == "Up"].set_index("part")["power_kW"]
    # exact arithmetic: 2.0333 kW given back cover 2 kW of lowering and 0.0333 of the ram's 0.05 kW
    assert "lowering" not in parts
    assert parts["actuators"] == pytest.approx(0.05 - 0.1 / 3)
    assert parts.sum() == pytest.approx(40 * 5 / 600, rel=1e-12)


def test_an_idle_phase_is_one_column() -> None:
    rows = table(SOLUTION)
    (row,) = rows[rows["phase"] == "Wait"].to_dict("records")
    assert (row["part"], row["flow_width_L_min"], row["pressure_height_bar"]) == (
        "idle",
        pytest.approx(40),
        pytest.approx(4),
    )


heats = st.lists(st.floats(0, 1e4), min_size=7, max_size=7)


@settings(max_examples=60, deadline=None)
@given(
    heats=heats, powers=st.tuples(st.floats(-5e3, 5e3), st.floats(-50, 50)), back=st.floats(0, 1),
    pressures=st.tuples(st.floats(0.1, 400), st.floats(-0.3, 0)),
)  # fmt: skip
def test_areas_are_positive_touch_and_sum_to_the_pumps_power(
    heats: list[float], powers: tuple[float, float], back: float, pressures: tuple[float, float]
) -> None:
    """Whatever the components' heats, the load and the lift, for pump pressures from 0.1 to 400 bar."""
    (load, lifted), (pressure, inlet) = powers, pressures
    heat = np.tile(np.array(heats)[:, None], 3)
    return_heat, lifting = np.zeros_like(heat), np.zeros_like(heat)
    return_heat[3], lifting[0] = back * heat[3], lifted
    solved = replace(
        SOLUTION,
        components=replace(SOLUTION.components, heat=heat, return_heat=return_heat, lifting=lifting),
        actuators=replace(SOLUTION.actuators, power=np.array([[load, -load, 0.0]])),
        pumps=replace(
            SOLUTION.pumps,
            pressure=np.full((1, 3), pressure * 1e5),
            inlet_pressure=np.full((1, 3), inlet * 1e5),
        ),
    )
    power, flow = hydraulic_power(solved)
    rows = table(solved)
    assert (rows[["flow_width_L_min", "pressure_height_bar", "power_kW"]] > 0).all(axis=None)
    area = rows["flow_width_L_min"] * rows["pressure_height_bar"] / 600
    assert area.to_numpy() == pytest.approx(rows["power_kW"].to_numpy(), rel=1e-9, abs=1e-12)
    for number, part in rows.groupby("phase_number"):
        assert part["power_kW"].sum() * 1e3 == pytest.approx(power[number], rel=1e-9)
        assert (part["flow_start_L_min"] + part["flow_width_L_min"]).max() <= flow[number] * 6e4 * (1 + 1e-9)
        assert (part["pressure_start_bar"] + part["pressure_height_bar"]).max() <= (pressure - inlet) * (1 + 1e-9)
