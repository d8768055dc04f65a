from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from heataudit.audit.advice import cold_findings, oil_findings, waste_findings
from heataudit.audit.annual import drives
from heataudit.audit.cold_start import cold_start_table
from heataudit.audit.findings import Solved, phase_findings
from heataudit.audit.losses import find_losses
from heataudit.audit.model import Finding
from heataudit.audit.run import audit
from heataudit.machine import Machine
from heataudit.network.solution import Solution, State
from heataudit.physics.constants import KELVIN
from tests.audit.fixture import BAR, L_MIN, changed, constant, press, solution, with_cycle
from tests.audit.test_thermal import mass

MACHINE, SOLUTION = press(), solution()


def found(solved: Solution = SOLUTION, machine: Machine = MACHINE) -> list[Finding]:
    losses = find_losses(machine, machine.cycle, solved)
    return phase_findings(Solved(machine, machine.cycle, solved, losses, drives(machine, solved, losses)))


def only(code: str, solved: Solution = SOLUTION, machine: Machine = MACHINE) -> Finding:
    (finding,) = [f for f in found(solved, machine) if f.code == code]
    return finding


def pumps(**more: Any) -> Solution:
    return replace(SOLUTION, pumps=replace(SOLUTION.pumps, **more))


def actuators(**more: Any) -> Solution:
    return replace(SOLUTION, actuators=replace(SOLUTION.actuators, **more))


def components(row: int, **more: Any) -> Solution:
    arrays = {name: getattr(SOLUTION.components, name).copy() for name in more}
    for name, values in more.items():
        arrays[name][row] = values
    return replace(SOLUTION, components=replace(SOLUTION.components, **arrays))


def test_a_machine_in_order_has_nothing_to_report() -> None:
    assert found() == []


def test_phases_that_were_not_solved_are_named() -> None:
    finding = only(
        "not-converged", replace(SOLUTION, converged=np.array([True, False, True]), residual=np.array([0, 0.02, 0]))
    )
    assert (finding.severity, finding.where, finding.phase) == ("danger", "Small press", "Up")
    assert finding.text == (
        "Pressures and flows could not be solved: the worst residual is 2 % after 8 steps. Do not "
        "use the numbers of such a phase; check its loads, settings and openings. In 1 of 3 phases (Up)."
    )


@pytest.mark.parametrize(
    "broken", [{"balance_error": np.array([0.0, 5.0, 0.0])}, {"node_balance": np.array([0, 1e-3, 0])}]
)
def test_a_balance_that_is_off_is_reported(broken: dict[str, Any]) -> None:
    finding = only("balance-error", replace(SOLUTION, **broken))
    assert (finding.severity, finding.phase) == ("danger", "Up")


def test_a_hundredth_of_a_percent_is_bookkeeping() -> None:
    assert found(replace(SOLUTION, balance_error=np.array([0.4, 0.0, 0.0]))) == []  # of 5 kW


def test_unsound_audits_say_so() -> None:
    solver = constant(500.0)

    def off(*arguments: Any) -> Solution:
        solved = solver(*arguments)
        return replace(solved, converged=np.zeros(solved.phases, bool))

    assert not audit(with_cycle(MACHINE, [5.0]), off).sound
    assert audit(with_cycle(MACHINE, [5.0]), solver).sound


def test_an_actuator_that_stands_against_its_command() -> None:
    finding = only("stalled", actuators(state=np.array([[State.STALLED, State.MOVING, State.HELD]], np.int8)))
    assert finding.text == (
        "Ram is commanded but stands still: 50 bar at its inlet do not move its load. Check the load and the relief "
        "or pump setting, and whether another function takes the oil. In 1 of 3 phases (Down)."
    )


def test_a_speed_that_is_missed_by_more_than_a_percent() -> None:
    slow = np.array([[State.SLOW, State.MOVING, State.HELD]], np.int8)
    finding = only("speed-missed", actuators(state=slow, speed=np.array([[0.08, 0.1, 0]])))
    assert finding.text == (
        "Ram is asked for 100 mm/s and reaches 80 mm/s; the pumps deliver 40 L/min in all. Give it more pump flow or a "
        "larger opening, or allow the phase more time. In 1 of 3 phases (Down)."
    )
    assert found(actuators(speed=np.array([[0.0995, 0.1, 0]]))) == []


def test_a_load_that_outruns_the_asked_speed() -> None:
    finding = only("speed-missed", actuators(speed=np.array([[0.15, 0.1, 0]])))
    assert finding.text == (
        "Ram is asked for 100 mm/s and runs at 150 mm/s: its load drives it faster than the return holds it back. "
        "Throttle the return, or fit a counterbalance valve. In 1 of 3 phases (Down)."
    )


def test_oil_that_fails_to_follow_draws_a_void() -> None:
    finding = only("cavitation-risk", components(5, flow=[0, 3 * L_MIN, 1 * L_MIN]))
    assert (finding.severity, finding.where, finding.phase) == ("danger", "Ram.A", "Up")
    assert finding.text == (
        "Ram.A draws a void: 3 L/min of oil are missing, so the load runs ahead of the oil. Add a counterbalance "
        "valve or a make-up check, or throttle the return. In 2 of 3 phases, most in Up."
    )


@pytest.mark.parametrize(("kind", "gauge", "reported"), [("gear", -0.31, 0), ("gear", -0.32, 1), ("piston", -0.22, 1)])
def test_a_pump_that_starves(kind: str, gauge: float, reported: int) -> None:
    """0.7 bar absolute for gear pumps, 0.8 for piston pumps (common practice); 1.01325 bar at sea level (ISO 2533)."""
    machine = replace(MACHINE, pumps=MACHINE.pumps.assign(type=kind))
    starved = [
        f for f in found(pumps(inlet_pressure=np.array([[gauge, 0, 0]]) * BAR), machine) if f.code == "cavitation-risk"
    ]
    assert len(starved) == reported


def test_altitude_takes_from_the_inlet() -> None:
    high = changed(MACHINE, general={"altitude": 3000.0})  # 0.701 bar (ISO 2533, check value 11.7)
    assert found(pumps(inlet_pressure=np.array([[-0.01, 0, 0]]) * BAR), high)[0].code == "cavitation-risk"
    assert (
        "with 0.691 bar absolute"
        in only("cavitation-risk", pumps(inlet_pressure=np.array([[-0.01, 0, 0]]) * BAR), high).text
    )


def test_a_pump_that_stands_does_not_starve() -> None:
    assert found(pumps(inlet_pressure=np.full((1, 3), -0.9 * BAR), speed=np.zeros((1, 3)))) == []


def test_a_pump_above_its_own_power_limit() -> None:
    limited = replace(MACHINE, pumps=MACHINE.pumps.assign(power_limit=2000.0))
    finding = only("pump-overload", machine=limited)
    # exact arithmetic: 16 cm³ x 1450 rpm x 60 bar = 2.32 kW
    assert finding.text.startswith(
        "Pump 1 is loaded with the torque of 2.32 kW at its rated speed, above its limit of 2 kW."
    )
    assert finding.phase == "Down"


def test_oil_over_a_relief_valve() -> None:
    finding = only("relief-flowing", components(2, flow=[0, 0, 20 * L_MIN], drop=[0, 0, 210 * BAR], heat=[0, 0, 7000]))
    assert finding.text == (
        "20 L/min go over Main relief at 210 bar: 7 kW of heat. Unload the pump or let it swivel back, or match its "
        "flow to what the function takes. In 1 of 3 phases (Wait)."
    )
    assert found(components(2, flow=[0, 0, 0.3 * L_MIN])) == []  # less than a hundredth of the pump flow


def test_oil_that_is_too_fast_for_its_line() -> None:
    narrow = replace(
        MACHINE, lines=MACHINE.lines.assign(inside_diameter=[0.01905, 0.012], service=["pressure", "return"])
    )
    finding = only("line-velocity", machine=narrow)
    # exact arithmetic: 40 L/min in 12 mm: 5.89 m/s; 12 mm x sqrt(5.89 / 3)
    assert finding.text == (
        "5.89 m/s in the return line Return, where 3 m/s is the guideline; it drops 1 bar. An inside diameter of "
        "16.8 mm would do. In 3 of 3 phases, most in Wait."
    )
    assert finding.severity == "warning"


def test_a_return_line_that_presses_back() -> None:
    pressure = SOLUTION.pressure.copy()
    pressure[SOLUTION.ports.node("Press.T")] = [12 * BAR, 1 * BAR, 30 * BAR]  # in the third phase nothing moves
    finding = only("return-pressure", replace(SOLUTION, pressure=pressure))
    assert (finding.where, finding.phase, finding.severity) == ("Press", "Down", "note")


def test_what_idles_is_reported_with_its_share() -> None:
    losses = find_losses(MACHINE, MACHINE.cycle, SOLUTION)
    (finding,) = waste_findings(Solved(MACHINE, MACHINE.cycle, SOLUTION, losses, []))
    # exact arithmetic: 4.667 kJ of 27.17 kJ, 2 kJ of it in the pump
    assert finding == Finding(
        "idle-loss", "warning", "Pump 1", "Wait",
        "17.2 % of the shaft energy, 4.67 kJ in each cycle, are lost while nothing moves; Pump 1 alone has 42.9 % "
        "of it. Unload the pumps or stop them in pauses, and lower the stand-by pressure. In 1 of 3 phases, most in "
        "Wait.",
    )  # fmt: skip


def test_metering_above_three_tenths_is_throttling() -> None:
    losses = find_losses(MACHINE, MACHINE.cycle, components(3, heat=[3000.0, 3000.0, 0.0]))
    codes = [f.code for f in waste_findings(Solved(MACHINE, MACHINE.cycle, SOLUTION, losses, []))]
    assert "throttling" in codes


@pytest.mark.parametrize(
    ("temperature", "codes"),
    [
        (20.0, []),
        (-15.0, ["viscosity-high"]),
        (59.0, []),
        (60.5, ["oil-too-hot"]),
        (90.0, ["oil-too-hot", "viscosity-low"]),
    ],
)
def test_oil_outside_its_range(temperature: float, codes: list[str]) -> None:
    machine = changed(mass(), general={"oil_temperature": KELVIN + temperature})
    result = audit(machine, constant(100.0))
    assert [f.code for f in oil_findings(result.conditions, result.thermal, result.cooler)] == codes


def test_a_cold_start_on_thick_oil() -> None:
    cold = replace(
        SOLUTION, viscosity=np.full(3, 1500e-6),
        pumps=replace(SOLUTION.pumps, inlet_pressure=np.array([[-0.1, -0.6, -0.2]]) * BAR),
    )  # fmt: skip
    machine = changed(MACHINE, general={"start_temperature": KELVIN - 10.0})
    table = cold_start_table(machine, machine.cycle, cold)
    assert table.to_dict("records") == [{
        "pump": "Pump 1", "phase": "Up", "viscosity_mm2_s": pytest.approx(1500), "pressure_bar": 5.0,
        "relief_flow_L_min": 0.0, "inlet_bar": pytest.approx(1.01325 - 0.6),
    }]  # fmt: skip
    oil, pump = cold_findings(machine, table, 1500.0)
    assert (oil.where, pump.where, pump.phase) == ("Oil", "Pump 1", "Up")
    assert pump.text == (
        "At -10 °C and 1500 mm²/s Pump 1 has 0.413 bar absolute at its inlet; a gear pump wants 0.7 bar or more. "
        "Start at low speed without load, warm the oil, or widen the suction line."
    )


def test_a_warm_start_shows_the_highest_pressure() -> None:
    (row,) = cold_start_table(MACHINE, MACHINE.cycle, SOLUTION).to_dict("records")
    assert (row["phase"], row["pressure_bar"]) == ("Down", 60.0)


def test_the_gravest_come_first_and_each_place_once() -> None:
    result = audit(changed(mass(), general={"oil_temperature": KELVIN + 90.0}), constant(10e3))
    order = [("danger", "warning", "note").index(f.severity) for f in result.findings]
    assert order == sorted(order)
    assert len({(f.code, f.where) for f in result.findings}) == len(result.findings)


def test_a_cooler_that_rests_on_an_unsolved_phase_says_so() -> None:
    solver = constant(500.0)

    def fails_hot(machine: Machine, cycle: Any, temperature: Any) -> Solution:
        solved = solver(machine, cycle, temperature)
        return replace(solved, converged=temperature < KELVIN + 59.0)

    result = audit(changed(mass(), general={"oil_temperature": KELVIN + 40.0}), fails_hot)
    (finding,) = [f for f in result.findings if f.code == "not-converged"]
    assert (finding.where, finding.severity, result.sound) == ("Cooler", "danger", False)
    assert finding.text.startswith("Pressures and flows could not be solved with oil of 60 °C.")


def test_a_given_temperature_above_the_highest_is_set_against_the_balance() -> None:
    result = audit(changed(mass(), general={"oil_temperature": KELVIN + 65.0}), constant(500.0))
    (finding,) = [f for f in result.findings if f.code == "oil-too-hot"]
    assert finding.text == (
        "The oil temperature given, 65 °C, is above the 60 °C that it may have; by the heat balance it is 40 °C. "
        "Check the reading, then the cooler."
    )
