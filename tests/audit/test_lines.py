from dataclasses import replace

import numpy as np
import pytest

from heataudit.audit.lines import line_table, speeds
from heataudit.audit.routes import rows_of
from tests.audit.fixture import BAR, L_MIN, press, solution

MACHINE, SOLUTION = press(), solution()


def test_a_line_is_shown_in_its_fastest_phase() -> None:
    feed, back = line_table(MACHINE, MACHINE.cycle, SOLUTION).to_dict("records")
    # exact arithmetic: 40 L/min in 24 mm; 30 L/min x 1 bar for 7 s and 40 x 1 for 10 s
    assert (back["phase"], back["flow_L_min"]) == ("Wait", pytest.approx(40))
    assert back["velocity_m_s"] == pytest.approx(40 * L_MIN / (np.pi / 4 * 0.024**2))
    assert back["heat_kJ"] == pytest.approx(30 / 600 * 7 + 40 / 600 * 10)
    assert back["mean_heat_kW"] == pytest.approx(back["heat_kJ"] / 17)
    assert back["reynolds"] == pytest.approx(back["velocity_m_s"] * 0.024 / 46e-6, rel=1e-9)  # VG 46 at 40 °C
    assert (feed["line"], feed["drop_bar"], feed["size"], feed["guideline_m_s"]) == (
        "Feed",
        pytest.approx(2),
        "DN20",
        5,
    )


def test_the_guideline_follows_the_pressure_phase_by_phase() -> None:
    pressure = SOLUTION.pressure.copy()
    pressure[SOLUTION.ports.node("P1")] = [250 * BAR, 210 * BAR, 0]
    pressure[SOLUTION.ports.node("Press.P")] = [230 * BAR, 200 * BAR, np.nan]
    feed = rows_of(MACHINE.lines)[0]
    _, guideline = speeds(feed, replace(SOLUTION, pressure=pressure))
    assert guideline.tolist() == [6, 5, 5]  # common practice: 5 m/s, 6 above 210 bar


def test_equal_lines_share_the_flow() -> None:
    twin = replace(MACHINE, lines=MACHINE.lines.assign(count=2.0))
    one, two = (line_table(m, m.cycle, SOLUTION)["velocity_m_s"] for m in (MACHINE, twin))
    assert two.to_numpy() == pytest.approx(one.to_numpy() / 2)
