"""What a duty cycle may not ask: a command without a load, two values for one thing, a move whose path is absent."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray

from heataudit.machine.cycle import CycleSheet
from heataudit.machine.names import row_of
from heataudit.machine.ports import Ports
from heataudit.machine.sheet import SHOWN_AT_MOST, Sheet
from heataudit.machine.values import folded

Sheets = Mapping[str, Sheet]
Flags = NDArray[np.bool_]

MOVING = ("extend", "retract", "forward", "reverse", "on")
TO_A = ("extend", "forward", "on", "press")
TO_B = ("retract", "reverse")


def check_cycle(cycle: CycleSheet, sheets: Sheets, ports: Ports) -> None:
    """Note everything that a duty cycle asks and a machine cannot do."""
    for actuator in sheets["actuators"].frame.itertuples(index=False):
        if actuator.name:
            _check_loads(cycle, actuator)
            _check_plunger(cycle, actuator)
            _check_speeds(cycle, actuator)
            _check_paths(cycle, actuator, sheets, ports)
    _check_shared_sections(cycle, sheets)
    _check_pump_speeds(cycle, sheets)


def shut_throttles(cycle: CycleSheet) -> set[str]:
    """Throttles that are closed in some phase, names folded."""
    return {
        folded(target.component)
        for key, target in cycle.targets.items()
        if target.quantity == "opening" and (cycle.sheet.frame[key] == 0).any()
    }


def _given(cycle: CycleSheet, component: str, quantity: str) -> Flags:
    key = cycle.key(component, quantity)
    return np.zeros(len(cycle.sheet), bool) if key is None else cycle.sheet.is_typed(key)


def _moves(cycle: CycleSheet, component: str) -> NDArray[np.object_]:
    key = cycle.key(component, "move")
    return np.full(len(cycle.sheet), "", object) if key is None else cycle.sheet.frame[key].to_numpy(object)


def _both(cycle: CycleSheet, component: str, first: str, second: str, advice: str) -> None:
    """Note rows in which two columns of a component hold a value."""
    rows = np.flatnonzero(_given(cycle, component, first) & _given(cycle, component, second))
    key, other = cycle.key(component, first), cycle.key(component, second)
    if key is not None and other is not None:
        header = cycle.sheet.columns[other].header
        unit_name = cycle.sheet.units[other].name
        cycle.sheet.complain(key, rows, f"and {header} [{unit_name}] are both given; {advice}")


def _check_loads(cycle: CycleSheet, actuator: Any) -> None:
    """A command has exactly one load: typed, as a pressure, or by gauge readings."""
    name = actuator.name
    one = "leave one of the two blank"
    _both(cycle, name, "load_pressure", "load", one)
    for gauge in ("inlet", "outlet"):
        for load in ("load", "load_pressure"):
            _both(cycle, name, gauge, load, "a gauge pressure stands for the load, " + one)
    inlet, outlet = _given(cycle, name, "inlet"), _given(cycle, name, "outlet")
    loaded = _given(cycle, name, "load") | _given(cycle, name, "load_pressure")
    key = cycle.key(name, "outlet")
    if key is not None:
        rows = np.flatnonzero(outlet & ~inlet & ~loaded)
        cycle.sheet.complain(key, rows, f'is given without "{name} inlet"; give both gauge readings')
    moves = _moves(cycle, name)
    key = cycle.key(name, "move")
    if key is not None:
        rows = np.flatnonzero(np.isin(moves, MOVING) & ~loaded & ~inlet & ~outlet)
        cycle.sheet.complain(key, rows, lambda row: (
            f'is "{moves[row]}" without a load; give "{name} load", 0 where there is none'
        ))  # fmt: skip


def _check_plunger(cycle: CycleSheet, actuator: Any) -> None:
    """An extending plunger has no outlet whose oil could brake a load that drives it."""
    if actuator.kind != "plunger":
        return
    extends = _moves(cycle, actuator.name) == "extend"
    for quantity in ("load", "load_pressure"):
        key = cycle.key(actuator.name, quantity)
        if key is not None:
            rows = np.flatnonzero(extends & (cycle.values(actuator.name, quantity) < 0))
            unit_name = cycle.sheet.units[key].name
            text = "and the plunger extends: nothing brakes a load that drives it; it must be at least 0"
            told = [f"is {cycle.sheet.shown(key, row)} {unit_name}, {text}" for row in range(len(extends))]
            cycle.sheet.complain(key, rows, told.__getitem__)


def _check_speeds(cycle: CycleSheet, actuator: Any) -> None:
    """A speed or a travel, and a spool that can be opened for it."""
    name = actuator.name
    _both(cycle, name, "travel", "speed", "they steer one thing, leave one of the two blank")
    if actuator.section:
        return
    for quantity in ("speed", "travel", "opening"):
        key = cycle.key(name, quantity)
        if key is not None:
            rows = np.flatnonzero(_given(cycle, name, quantity))
            text = f"is given, but {name} has no Section whose spool could be opened for it; leave it blank"
            cycle.sheet.complain(key, rows, text)


def _check_paths(cycle: CycleSheet, actuator: Any, sheets: Sheets, ports: Ports) -> None:
    """A commanded move needs the paths of its section that feed it and let the oil back."""
    row = row_of(sheets["sections"], actuator.section) if actuator.section else None
    key = cycle.key(actuator.name, "move")
    if row is None or key is None:
        return
    section = sheets["sections"].frame.iloc[row]
    moves = _moves(cycle, actuator.name)
    plunger = actuator.kind == "plunger"
    needs = [(TO_A, "p_a"), (("retract", "float"), "a_t")]
    if not plunger:
        needs = [(TO_A, "p_a"), (TO_B, "p_b"), (("float",), "a_t"), (("float",), "b_t")]
        regenerates = section["regeneration"] == "extend"
        back = tuple(move for move in TO_A if move != "press" and not (regenerates and move == "extend"))
        for words, path, port in ((back, "b_t", actuator.port_b), (TO_B, "a_t", actuator.port_a)):
            if not _leads_on(port, sheets, ports):
                needs.append((words, path))
    for words, path in needs:
        if section[path] == 0:
            header = sheets["sections"].columns[path].header
            rows = np.flatnonzero(np.isin(moves, words))
            for row in rows[:SHOWN_AT_MOST]:
                text = f'is "{moves[row]}", but section {section["name"]} has no path {header}: its flow there is 0'
                cycle.sheet.complain(key, [row], text)


def _leads_on(port: str, sheets: Sheets, ports: Ports) -> bool:
    """Whether a line or valve starts at a port, so that oil may leave it past its section."""
    if not port:
        return True
    node = ports.node(port)
    return any(
        ports.node(label) == node
        for table in ("lines", "valves")
        for end in ("from_", "to")
        for label in sheets[table].frame[end]
        if label
    )


def _check_shared_sections(cycle: CycleSheet, sheets: Sheets) -> None:
    """Actuators on one section get the same command."""
    frame = sheets["actuators"].frame
    shared = frame[frame["section"] != ""]
    for section, group in shared.groupby("section"):
        first, *others = (str(name) for name in group["name"])
        for other in others:
            differ = _commanded(cycle, first) != _commanded(cycle, other)
            for name in (other, first):
                key = cycle.key(name, "move")
                if key is not None:
                    text = (
                        f"differs from that of {first if name == other else other}, which is on the same section "
                        f"{section}; give both the same move"
                    )
                    cycle.sheet.complain(key, np.flatnonzero(differ), text)
                    break


def _commanded(cycle: CycleSheet, name: str) -> NDArray[np.object_]:
    moves = _moves(cycle, name)
    return np.where(moves == "", "hold", moves)


def _check_pump_speeds(cycle: CycleSheet, sheets: Sheets) -> None:
    """A pump's speed comes from one column only."""
    for pump in sheets["pumps"].frame.itertuples(index=False):
        name, drive = str(pump.name), str(pump.drive)
        own = cycle.key(name, "speed")
        if own is not None and drive:
            rows = np.flatnonzero(_given(cycle, name, "speed") & _given(cycle, drive, "speed"))
            text = f"and {drive} speed are both given, and both steer {name}; leave one of the two blank"
            cycle.sheet.complain(own, rows, text)
