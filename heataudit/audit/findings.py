"""What to look at: one finding per code and place, with its worst phase, its numbers and a remedy."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from heataudit.audit.annual import Drive
from heataudit.audit.cold_start import LEAST_INLET, inlet_pressure
from heataudit.audit.figures import BAR, L_MIN, sig
from heataudit.audit.lines import speeds
from heataudit.audit.losses import Losses, shaft_power
from heataudit.audit.model import GROUPS, Finding
from heataudit.audit.routes import rows_of
from heataudit.machine import Cycle, Machine
from heataudit.network.solution import Solution, State
from heataudit.physics.arrays import Array

Flags = NDArray[np.bool_]

RELIEF_SHARE = 0.01
"""Flow over a relief valve, per pump flow [-], from which it is reported (judgement)."""

SPEED_SHORT = 0.01
"""Share [-] by which a speed may miss the asked one (judgement)."""

VOID_FLOW = 1e-3 * L_MIN
"""Missing flow [m³/s] from which a void counts (judgement: a thousandth of a litre a minute)."""

RETURN_PRESSURE = 10 * BAR
"""Pressure behind a directional valve [Pa] from which it is reported (common practice: 5 to 10 bar is ample)."""

FAR_TOO_FAST = 1.5
"""Multiple [-] of a guideline velocity from which the finding is a warning (judgement)."""

BALANCE = 1e-4
"""Bookkeeping error per shaft power [-] that a phase may have."""

ROUNDING = 0.1
"""Bookkeeping error [W] below which a phase without shaft power counts as balanced."""

NODE_BALANCE = 1e-6
"""Flow left over at a node per largest flow [-] that a phase may have."""


class Place(NamedTuple):
    """What a finding is about: code, severity, component."""

    code: str
    severity: str
    where: str


@dataclass(frozen=True)
class Solved:
    """A solved cycle with all that findings look at.

    Parameters
    ----------
    machine
        The machine.
    cycle
        The phases.
    solution
        What the network found for them.
    losses
        Their losses.
    drives
        The drives over the cycle.
    """

    machine: Machine
    cycle: Cycle
    solution: Solution
    losses: Losses
    drives: list[Drive]

    @property
    def pump_flow(self) -> Array:
        """Flow that all pumps deliver [m³/s], shape (phases,)."""
        return np.asarray(self.solution.pumps.flow.sum(axis=0))

    def note(
        self, place: Place, where: Flags, measure: Array, text: str, **values: Array | float | str
    ) -> Iterator[Finding]:
        """One finding about the phases in which something is so; none where it is in none.

        Parameters
        ----------
        place
            Code, severity and component.
        where
            Phases concerned, shape (phases,).
        measure
            What is worst where it is highest [any unit], shape (phases,).
        text
            The sentence, with names in braces for its numbers.
        values
            What the names stand for [the unit that follows them]: of arrays of shape (phases,) the worst phase's value.
        """
        if not where.any():
            return
        worst = int(np.argmax(np.where(where, np.nan_to_num(measure, nan=-1e300), -np.inf)))
        phase, count = str(self.cycle.phase[worst]), int(where.sum())
        shown = {name: _shown(value, worst) for name, value in values.items()}
        span = f"In {count} of {len(where)} phases" + (f", most in {phase}." if count > 1 else f" ({phase}).")
        yield Finding(*place, phase, f"{text.format(name=place.where, **shown)} {span}")


def _shown(value: Array | float | str, phase: int) -> str:
    if isinstance(value, str):
        return value
    return sig(float(value[phase] if isinstance(value, np.ndarray) else value))


def phase_findings(solved: Solved) -> list[Finding]:
    """Findings of the single phases.

    Parameters
    ----------
    solved
        The solved cycle.
    """
    looks = (_soundness, _stalled, _missed, _voids, _inlets, _overload, _reliefs, _velocities, _return_pressure)
    return [finding for look in looks for finding in look(solved)]


def _soundness(solved: Solved) -> Iterator[Finding]:
    solution = solved.solution
    machine = str(solved.machine.general["machine"])
    yield from solved.note(
        Place("not-converged", "danger", machine), ~solution.converged, solution.residual,
        "Pressures and flows could not be solved: the worst residual is {residual} % after {steps} steps. Do not "
        "use the numbers of such a phase; check its loads, settings and openings.",
        steps=solution.iterations.astype(float), residual=100 * solution.residual,
    )  # fmt: skip
    error, shaft = np.abs(solution.balance_error), np.abs(solution.shaft_power)
    off = (error > BALANCE * shaft + ROUNDING) | (solution.node_balance > NODE_BALANCE) | np.isnan(error)
    yield from solved.note(
        Place("balance-error", "danger", machine), off & solution.converged, error,
        "Power in and power out differ by {error} W at {shaft} kW of shaft power. Do not use the numbers of such a "
        "phase.",
        error=error, shaft=shaft / 1e3,
    )  # fmt: skip


def _stalled(solved: Solved) -> Iterator[Finding]:
    state = solved.solution.actuators
    for name, code, inlet in zip(state.name, state.state, np.nan_to_num(state.inlet), strict=True):
        yield from solved.note(
            Place("stalled", "warning", name), code == State.STALLED, inlet,
            "{name} is commanded but stands still: {inlet} bar at its inlet do not move its load. Check the load "
            "and the relief or pump setting, and whether another function takes the oil.",
            inlet=inlet / BAR,
        )  # fmt: skip


def _missed(solved: Solved) -> Iterator[Finding]:
    state = solved.solution.actuators
    for k, (name, kind) in enumerate(zip(state.name, state.kind, strict=True)):
        speed, asked = state.speed[k], np.nan_to_num(state.asked_speed[k])
        moves = np.isin(state.state[k], (State.MOVING, State.SLOW))
        missed = moves & (speed < asked * (1 - SPEED_SHORT))
        outrun = moves & (asked > 0) & (speed > asked * (1 + SPEED_SHORT))
        factor, unit = (60.0, "rpm") if kind == "motor" else (1e3, "mm/s")
        if outrun.any() and not missed.any():
            yield from solved.note(
                Place("speed-missed", "warning", name), outrun, speed / np.where(asked > 0, asked, np.inf),
                "{name} is asked for {asked} {unit} and runs at {speed} {unit}: its load drives it faster than the "
                "return holds it back. Throttle the return, or fit a counterbalance valve.",
                asked=asked * factor, speed=speed * factor, unit=unit,
            )  # fmt: skip
        yield from solved.note(
            Place("speed-missed", "warning", name), missed, 1.0 - speed / np.where(asked > 0, asked, np.inf),
            "{name} is asked for {asked} {unit} and reaches {speed} {unit}; the pumps deliver {flow} L/min in all. "
            "Give it more pump flow or a larger opening, or allow the phase more time.",
            asked=asked * factor, speed=speed * factor, unit=unit, flow=solved.pump_flow / L_MIN,
        )  # fmt: skip


def _voids(solved: Solved) -> Iterator[Finding]:
    components = solved.solution.components
    for name, kind, flow in zip(components.name, components.kind, components.flow, strict=True):
        if kind == "void":
            yield from solved.note(
                Place("cavitation-risk", "danger", name.removesuffix(" void")), flow > VOID_FLOW, flow,
                "{name} draws a void: {flow} L/min of oil are missing, so the load runs ahead of the oil. Add a "
                "counterbalance valve or a make-up check, or throttle the return.",
                flow=flow / L_MIN,
            )  # fmt: skip


def _inlets(solved: Solved) -> Iterator[Finding]:
    types = dict(zip(solved.machine.pumps["name"], solved.machine.pumps["type"], strict=True))
    pumps = solved.solution.pumps
    for name, inlet, flow in zip(pumps.name, inlet_pressure(solved.machine, solved.solution), pumps.flow, strict=True):
        yield from solved.note(
            Place("cavitation-risk", "warning", name), inlet < LEAST_INLET[types[name]], -inlet,
            "{name} delivers {flow} L/min with {inlet} bar absolute at its inlet; a {type} pump wants {least} bar "
            "or more. Widen or shorten the suction line, raise the tank, or clean the strainer.",
            flow=flow / L_MIN, inlet=inlet / BAR, type=types[name], least=LEAST_INLET[types[name]] / BAR,
        )  # fmt: skip


def _overload(solved: Solved) -> Iterator[Finding]:
    for drive in solved.drives:
        if drive.row is not None:
            limit = float(drive.row.power_limit)
            yield from solved.note(
                Place("pump-overload", "warning", drive.name), drive.power > limit, drive.power,
                "{name} gives {power} kW, above its limit of {limit} kW. Lower the pressure or the flow in such a "
                "phase, or fit a larger drive or a power control.",
                power=drive.power / 1e3, limit=limit / 1e3,
            )  # fmt: skip
    state = solved.solution.pumps
    for k, pump in enumerate(rows_of(solved.machine.pumps)):
        drop = state.pressure[k] - state.inlet_pressure[k]
        power = state.displacement[k] * pump.displacement * pump.speed * drop
        yield from solved.note(
            Place("pump-overload", "warning", pump.name), power > pump.power_limit * (1 + NODE_BALANCE), power,
            "{name} is loaded with the torque of {power} kW at its rated speed, above its limit of {limit} kW. "
            "Lower its pressure or its displacement.",
            power=power / 1e3, limit=pump.power_limit / 1e3,
        )  # fmt: skip


def _reliefs(solved: Solved) -> Iterator[Finding]:
    components = solved.solution.components
    least = RELIEF_SHARE * np.abs(solved.pump_flow)
    for k, (name, kind) in enumerate(zip(components.name, components.kind, strict=True)):
        flow, heat = components.flow[k], components.heat[k]
        if kind == "relief":
            yield from solved.note(
                Place("relief-flowing", "warning", name), (flow > least) & (flow > 0), heat,
                "{flow} L/min go over {name} at {drop} bar: {heat} kW of heat. Unload the pump or let it swivel "
                "back, or match its flow to what the function takes.",
                flow=flow / L_MIN, drop=components.drop[k] / BAR, heat=heat / 1e3,
            )  # fmt: skip


def _velocities(solved: Solved) -> Iterator[Finding]:
    components = solved.solution.components
    for line in rows_of(solved.machine.lines):
        speed, guideline = speeds(line, solved.solution)
        over = np.abs(speed) / guideline
        severity = "warning" if over.max() > FAR_TOO_FAST else "note"
        yield from solved.note(
            Place("line-velocity", severity, line.name), over > 1.0, over,
            "{speed} m/s in the {service} line {name}, where {guideline} m/s is the guideline; it drops {drop} bar. An "
            "inside diameter of {wider} mm would do.",
            speed=np.abs(speed), service=line.service, guideline=guideline,
            wider=line.inside_diameter * np.sqrt(over) * 1e3,
            drop=np.abs(components.drop[components.name.index(line.name)]) / BAR,
        )  # fmt: skip


def _return_pressure(solved: Solved) -> Iterator[Finding]:
    state, solution = solved.solution.actuators, solved.solution
    moving = np.isin(state.state, (State.MOVING, State.SLOW, State.FLOATING)) & (np.abs(state.flow) > 0)
    for section in rows_of(solved.machine.sections):
        if section.feed == "series":
            continue
        served = np.array([name == section.name for name in state.section], bool)
        pressure = np.nan_to_num(solution.pressure[solution.ports.node(section.port_t)])
        high = moving[served].any(axis=0) & (pressure > RETURN_PRESSURE)
        yield from solved.note(
            Place("return-pressure", "note", section.name), high, pressure,
            "{pressure} bar stand at the return port of {name} while its actuator moves; {ample} bar are ample. "
            "Widen the return line, or clean or enlarge the return filter and the cooler.",
            pressure=pressure / BAR, ample=RETURN_PRESSURE / BAR,
        )  # fmt: skip


def share_of_shaft(solved: Solved, group: str) -> tuple[float, Array]:
    """Heat of a group per shaft energy of the cycle [-], and its heat in each phase [W], shape (phases,).

    Parameters
    ----------
    solved
        The solved cycle.
    group
        Loss group.
    """
    time = solved.cycle.duration * solved.cycle.repeats
    heat = solved.losses.powers[GROUPS.index(group)]
    shaft = float(shaft_power(solved.solution, solved.losses) @ time)
    return (float(heat @ time) / shaft if shaft > 0 else 0.0), heat
