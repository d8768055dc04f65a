"""From solved branches and nodes to the states of pumps, components and actuators."""

from __future__ import annotations

from typing import Any

import numpy as np

from heataudit.network.assemble import Network
from heataudit.network.kinds import pumps
from heataudit.network.kinds.actuators import Actuator
from heataudit.network.linear import Array
from heataudit.network.plant import Plant
from heataudit.network.settle import Settled
from heataudit.network.solution import ActuatorState, ComponentState, PumpState, Solution, State
from heataudit.network.unknowns import Look
from heataudit.physics.constants import STANDARD_GRAVITY
from heataudit.physics.pumps import loss_torque, rated_loss_torque, shaft_power, shaft_torque, viscosity_ratio

NO_DELIVERY = 1e-9
"""Delivered flow [-], as a share of the full one, that is none: a pump that only makes up for its slip."""

LITTLE_FLOW = 1e-3
"""Flow [-], as a share of the pump flow, to which node balances are referred at the least."""

AS_ASKED = 1e-6
"""Share [-] by which a speed may fall short of the asked one and still count as reached."""


def extract(network: Network, settled: Settled) -> Solution:
    """States of all components, and the balances of every phase."""
    found = _Found(network, settled)
    components = _components(network, found)
    pump_state = _pumps(network, found)
    actuators = _actuators(network, settled, found)
    heat = components.heat.sum(axis=0) + pump_state.heat.sum(axis=0) + actuators.heat.sum(axis=0)
    given = pump_state.shaft_power.sum(axis=0) - actuators.power.sum(axis=0) - components.lifting.sum(axis=0)
    plant = network.plant
    return Solution(
        ports=plant.ports,
        pressure=settled.state.pressure,
        oil_temperature=plant.temperature,
        viscosity=plant.viscosity,
        density=plant.density,
        components=components,
        pumps=pump_state,
        actuators=actuators,
        converged=settled.converged,
        iterations=settled.iterations,
        residual=settled.residual,
        node_balance=_node_balance(network, found),
        balance_error=given - heat,
    )


class _Found:
    """Flow and drop of branches by component and role."""

    def __init__(self, network: Network, settled: Settled) -> None:
        self.state = settled.state
        self.number = {(b.component, b.role): k for k, b in enumerate(network.branches.items)}
        self.nothing = np.zeros(network.plant.phases)

    def flow(self, component: str, role: str) -> Array:
        """Flow [m³/s]; zero where there is no such branch."""
        k = self.number.get((component, role))
        return self.nothing if k is None else self.state.flow[k]

    def drop(self, component: str, role: str) -> Array:
        """Drop [Pa] where oil flows, else 0."""
        k = self.number.get((component, role))
        return self.nothing if k is None else np.where(self.state.flow[k] != 0, self.state.drop[k], 0.0)

    def heat(self, component: str, role: str) -> Array:
        """Power [W] lost in a branch."""
        return self.flow(component, role) * self.drop(component, role)

    def pressure(self, node: int) -> Array:
        """Pressure [Pa] of a node, NaN where nothing determines it."""
        return self.state.pressure[node]


def _components(network: Network, found: _Found) -> ComponentState:
    plant = network.plant
    rows: list[tuple[str, str, Array, Array, Array, Array, Array]] = []
    nothing = found.nothing
    for line in plant.rows_of("lines"):
        flow = found.flow(line.name, "line")
        head = plant.density * STANDARD_GRAVITY * line.rise
        friction = found.drop(line.name, "line") - np.where(flow != 0, head, 0.0)
        rows.append((line.name, "line", flow, friction + head, flow * friction, nothing, flow * head))
    for valve in plant.rows_of("valves"):
        rows.append((valve.name, valve.kind, *_valve(valve.name, found), nothing, nothing))
    for section in plant.rows_of("sections"):
        flow = found.flow(section.name, "P-A") + found.flow(section.name, "P-B")
        drop = found.drop(section.name, "P-A") + found.drop(section.name, "P-B")
        back = sum((found.heat(section.name, role) for role in ("B-T", "A-T", "regeneration")), nothing)
        heat = found.heat(section.name, "P-A") + found.heat(section.name, "P-B") + back
        rows.append((section.name, "section", flow, drop, heat, back, nothing))
    for name in dict.fromkeys(gallery.name for gallery in network.banks.galleries):
        rows.append((name, "gallery", *_gallery(name, network, found), nothing, nothing))
    for name in (branch.component for branch in network.branches.items if branch.role == "void"):
        flow, drop = found.flow(name, "void"), found.drop(name, "void")
        rows.append((name, "void", flow, drop, flow * drop, nothing, nothing))
    names, kinds, *arrays = zip(*rows, strict=True) if rows else ((), (), (), (), (), (), ())
    shape = (len(rows), plant.phases)
    return ComponentState(names, kinds, *(np.array(a, float).reshape(shape) for a in arrays))


def _valve(name: str, found: _Found) -> tuple[Array, Array, Array]:
    """Flow [m³/s], drop [Pa] and heat [W] of a valve over all its branches; its surplus side is not in the flow."""
    ahead = [role for role in ("valve", "lifted") if (name, role) in found.number]
    flow = sum((found.flow(name, role) for role in ahead), found.nothing) - found.flow(name, "back")
    drop = sum((found.drop(name, role) for role in ahead), found.nothing) - found.drop(name, "back")
    heat = sum((found.heat(name, role) for role in (*ahead, "back", "surplus")), found.nothing)
    return flow, drop, heat


def _gallery(name: str, network: Network, found: _Found) -> tuple[Array, Array, Array]:
    """Flow [m³/s] into a gallery, drop [Pa] over all its parts that carry oil, and heat [W]."""
    roles = [gallery.role for gallery in network.banks.galleries if gallery.name == name]
    flow = found.flow(name, roles[0])
    drop = sum((found.drop(name, role) for role in roles), found.nothing)
    return flow, drop, sum((found.heat(name, role) for role in roles), found.nothing)


def _pumps(network: Network, found: _Found) -> PumpState:
    plant = network.plant
    table = plant.rows_of("pumps")
    states = [_pump(pump, plant, network, found) for pump in table]
    arrays = {name: np.array([state[name] for state in states]) for name in states[0]}
    return PumpState(name=tuple(pump.name for pump in table), **arrays)


def _pump(pump: Any, plant: Plant, network: Network, found: _Found) -> dict[str, Array]:
    """State of one pump, arrays of shape (phases,)."""
    turning = pumps.full_flow(pump, plant) > 0
    nodes = [plant.node(label) for label in (pump.outlet, pump.suction, pump.drain_to)]
    outlet, inlet, drain = (np.nan_to_num(found.pressure(node)) for node in nodes)
    swept = found.flow(pump.name, "displacement")
    for injection in network.branches.injections:
        if injection.component == pump.name and injection.node == nodes[0]:
            swept = injection.flow
    drop = np.where(turning, outlet - inlet, 0.0)
    slips = found.flow(pump.name, "slip"), found.flow(pump.name, "slip back")
    charged = found.flow(pump.name, "charge"), found.flow(pump.name, "charge back")
    nominal = pumps.speed(pump, plant)
    speed = nominal
    if pump.control == "speed controlled":
        speed = np.where(turning, swept / pump.displacement, 0.0)
    shaft = np.where(turning, _shaft_power(pump, plant, (swept, speed, drop)), 0.0)
    shaft = shaft + (charged[0] + charged[1]) * (0.0 if np.isnan(pump.charge_pressure) else pump.charge_pressure)
    hydraulic = outlet * (swept - slips[0] + charged[1]) - inlet * (swept + slips[1] - charged[0])
    hydraulic = hydraulic + drain * (slips[0] + slips[1])
    delivered = swept - slips[0]
    delivered = np.where(np.abs(delivered) < NO_DELIVERY * pumps.full_flow(pump, plant), 0.0, delivered)
    return {
        "pressure": outlet, "inlet_pressure": inlet, "flow": delivered, "slip": slips[0] + slips[1],
        "speed": speed, "displacement": swept / (np.where(speed > 0, speed, 1.0) * pump.displacement),
        "setting": np.broadcast_to(pumps.setting(pump, plant), speed.shape), "shaft_power": shaft,
        "heat": shaft - hydraulic,
    }  # fmt: skip


def _shaft_power(pump: Any, plant: Plant, state: tuple[Array, Array, Array]) -> Array:
    """Shaft power [W] at a swept flow [m³/s], speed [1/s] and pressure difference [Pa]."""
    swept, speed, drop = state
    ratio = viscosity_ratio(plant.viscosity, pump.rated_viscosity, pump.viscosity_exponent)
    rated = rated_loss_torque(pump.displacement, pump.rated_pressure, pump.hydromechanical_efficiency)
    loss = loss_torque(rated, pump.viscous_share, np.abs(drop) / pump.rated_pressure, speed / pump.speed, ratio)
    used = swept / np.where(speed > 0, speed, 1.0)
    return np.asarray(shaft_power(shaft_torque(used, drop, loss), speed))


def _actuators(network: Network, settled: Settled, found: _Found) -> ActuatorState:
    look = Look(network, settled, np.arange(network.plant.phases))
    states = [_actuator(a, network, look, found) for a in network.actuators]
    shape = (len(states), network.plant.phases)
    names = ("state", "flow", "speed", "asked_speed", "inlet", "outlet", "load", "opening", "power", "heat")
    arrays = {name: np.array([state[name] for state in states], float).reshape(shape) for name in names}
    codes = arrays.pop("state").astype(np.int8)
    rows = [actuator.row for actuator in network.actuators]
    return ActuatorState(
        tuple(r.name for r in rows), tuple(r.kind for r in rows), tuple(r.section for r in rows), codes, **arrays
    )


def _actuator(actuator: Actuator, network: Network, look: Look, found: _Found) -> dict[str, Array]:
    """State of one actuator, arrays of shape (phases,)."""
    command, (forward, backward) = actuator.command, actuator.drives
    going_back = actuator.backward
    flow = np.where(going_back, found.flow(actuator.name, "backward"), found.flow(actuator.name, "forward"))
    left = flow * np.where(going_back, backward.flow_ratio, forward.flow_ratio)
    inlet = np.where(going_back, found.pressure(backward.inlet), found.pressure(forward.inlet))
    outlet = np.where(going_back, found.pressure(backward.outlet), found.pressure(forward.outlet))
    active = command.forward | command.backward | command.floating
    speed = actuator.speed(flow)
    load = actuator.load_found(inlet, outlet)
    power = np.where(flow > 0, actuator.power(np.nan_to_num(load), speed, flow), 0.0)
    hydraulic = np.where(flow > 0, np.nan_to_num(inlet) * flow - np.nan_to_num(outlet) * left, 0.0)
    moving, short = flow > 0, speed < command.speed * (1.0 - AS_ASKED)
    state = np.select(
        [~active | command.pressing | (command.speed == 0), command.floating, ~moving, short],
        [State.HELD, State.FLOATING, State.STALLED, State.SLOW], State.MOVING,
    )  # fmt: skip
    shown = active & ~(command.speed == 0)
    one_port = actuator.row.kind == "plunger"
    opening = np.full(len(flow), np.nan)
    section = next((s for s in network.banks.sections if s.name == actuator.row.section), None)
    if section is not None:
        opening = np.where(command.floating, 1.0, section.opening * look.share(section.name))
    return {
        "state": state, "flow": flow, "speed": speed, "asked_speed": np.where(active, command.speed, np.nan),
        "inlet": np.where(shown & ~(going_back & one_port), inlet, np.nan),
        "outlet": np.where(shown & ~(actuator.forward & one_port), outlet, np.nan),
        "load": np.where(active, load, np.nan), "opening": opening, "power": power, "heat": hydraulic - power,
    }  # fmt: skip


def _node_balance(network: Network, found: _Found) -> Array:
    """Worst flow left over at a node [-], as a share of the largest flow of the phase, shape (phases,)."""
    branches, flow = network.branches, found.state.flow
    left = np.zeros((branches.node_count, branches.phases))
    for injection in branches.injections:
        left[injection.node] += injection.flow
    for k, item in enumerate(branches.items):
        left[item.start] -= flow[k]
        left[item.end] += branches.ratio[k] * flow[k]
    largest = np.maximum(np.abs(flow).max(axis=0, initial=0.0), LITTLE_FLOW * branches.flow_scale)
    return np.abs(left[1:]).max(axis=0, initial=0.0) / largest
