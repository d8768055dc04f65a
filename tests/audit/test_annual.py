from dataclasses import replace
from typing import Any

import numpy as np
import pandas as pd
import pytest

from heataudit.audit.annual import drive_input, drives
from heataudit.audit.losses import find_losses
from heataudit.audit.model import Audit
from heataudit.audit.run import audit
from heataudit.machine import Machine
from tests.audit.fixture import changed, press, relief_solver, solution, with_cycle

BLANK = {
    "name": "Motor", "kind": "electric", "speed": 25.0, "power_limit": np.nan, "efficiency": np.nan,
    "no_load_power": np.nan, "specific_fuel_consumption": np.nan, "idle_fuel": np.nan,
}  # fmt: skip
PHASES = {"phase 1": 9200.0, "phase 2": 0.0}


def year(machine: Machine | None = None, **general: Any) -> Audit:
    """A kilowatt-hour an hour less: 9.2 kW for half of each cycle, nothing for the other."""
    plain = with_cycle(press() if machine is None else machine, [30.0, 30.0])
    plain = changed(plain, general={"operating_hours": 1000.0, "oil_temperature": 323.15} | general)
    return audit(plain, relief_solver(lambda cycle, _: np.array([PHASES[name] for name in cycle.phase])))


def driven(**cells: Any) -> Machine:
    row = pd.DataFrame([BLANK | cells])
    return replace(press(), drives=row, pumps=press().pumps.assign(drive="Motor"))


def test_a_pump_without_a_drive_has_an_electric_motor_of_its_own() -> None:
    found = year(energy_price=0.25, co2_factor=0.4)
    # exact arithmetic: 4.6 kW mean; / 0.92 + 3 % of 9.2 kW all the time
    assert found.annual.shaft_kWh == pytest.approx(4600)
    assert found.annual.drive_input_kWh == pytest.approx((4.6 / 0.92 + 0.276) * 1000)
    assert found.annual.energy_cost == pytest.approx(5276 * 0.25)
    assert found.annual.co2_kg == pytest.approx(5276 * 0.4)
    assert found.annual.loss_kWh == pytest.approx(4600)
    assert found.annual.price_per_kWh_loss == pytest.approx(5276 * 0.25 / 4600)
    assert (found.annual.fuel_L, found.annual.fan_kWh) == (None, 0.0)
    assert found.losses["annual_cost"].sum() == pytest.approx(found.annual.energy_cost)


def test_without_a_price_there_is_no_money() -> None:
    found = year()
    assert (found.annual.energy_cost, found.annual.co2_kg, found.annual.price_per_kWh_loss) == (None, None, None)
    assert found.losses["annual_cost"].isna().all()
    assert found.losses["annual_kWh"].sum() == pytest.approx(4600)


def test_an_electric_drive_keeps_its_own_figures() -> None:
    found = year(driven(efficiency=0.8, no_load_power=500.0, power_limit=9000.0))
    assert found.annual.drive_input_kWh == pytest.approx((4.6 / 0.8 + 0.5) * 1000)
    row = found.drives.iloc[0]
    assert (row["drive"], row["peak_shaft_kW"], row["mean_shaft_kW"], row["power_limit_kW"]) == ("Motor", 9.2, 4.6, 9.0)
    (finding,) = [f for f in found.findings if f.code == "pump-overload"]
    assert finding.text == (
        "Motor gives 9.2 kW, above its limit of 9 kW. Lower the pressure or the flow in such a phase, or fit a "
        "larger drive or a power control. In 1 of 2 phases (phase 1)."
    )


def test_an_engine_burns_fuel_and_idles() -> None:
    consumption = 230e-3 / 3.6e6  # 230 g/kWh
    found = year(driven(kind="diesel", specific_fuel_consumption=consumption), energy_price=1.5, co2_factor=2.6)
    # exact arithmetic: 0.23 kg/kWh / 0.84 kg/L, 4.6 kW mean, and a tenth of the burn at 9.2 kW all the time
    litres = 0.23 / 0.84 * (4.6 + 0.92) * 1000
    assert found.annual.fuel_L == pytest.approx(litres)
    assert found.annual.drive_input_kWh is None
    assert found.annual.energy_cost == pytest.approx(1.5 * litres)
    assert found.annual.co2_kg == pytest.approx(2.6 * litres)


def test_a_given_idle_burn_is_kept() -> None:
    consumption = 230e-3 / 3.6e6
    found = year(driven(kind="diesel", specific_fuel_consumption=consumption, idle_fuel=2e-3 / 3600))
    assert found.annual.fuel_L == pytest.approx(0.23 / 0.84 * 4600 + 2 * 1000)


def test_a_pump_that_stands_takes_no_load_power_neither() -> None:
    solved = solution()
    speed = solved.pumps.speed.copy()
    shaft = solved.pumps.shaft_power.copy()
    speed[0, 2], shaft[0, 2] = 0.0, 0.0
    standing = replace(solved, pumps=replace(solved.pumps, speed=speed, shaft_power=shaft))
    (drive,) = drives(press(), standing, find_losses(press(), press().cycle, standing))
    assert drive_input(drive)[2] == 0.0
    assert drive_input(drive)[0] == pytest.approx(5000 / 0.92 + 0.03 * 5000)  # exact arithmetic


def test_a_price_says_nothing_for_two_kinds_of_drive() -> None:
    both = pd.DataFrame(
        [BLANK | {"efficiency": 0.9}, BLANK | {"name": "Engine", "kind": "diesel", "specific_fuel_consumption": 6e-8}]
    )
    pumps = pd.concat([press().pumps.assign(drive="Motor"), press().pumps.assign(name="Pump 2", drive="Engine")])
    solved = solution()
    twin = {name: np.vstack([value, value]) for name, value in vars(solved.pumps).items() if name != "name"}
    two = replace(solved, pumps=replace(solved.pumps, name=("Pump 1", "Pump 2"), **twin))
    machine = changed(
        replace(press(), drives=both, pumps=pumps), general={"energy_price": 1.0, "oil_temperature": 313.15}
    )

    def stacked(_: Machine, cycle: Any, temperature: Any) -> Any:
        from heataudit.network.solve import spread_phases

        return spread_phases(two, np.tile(np.arange(3), len(cycle) // 3))

    annual = audit(machine, stacked).annual
    assert annual.energy_cost is None
    assert annual.drive_input_kWh is not None
    assert annual.fuel_L is not None
