"""Ways of the oil: ports that lead nowhere, and fixed pumps whose oil cannot reach the tank."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Mapping
from typing import Any

from heataudit.machine.ports import TANK, Ports
from heataudit.machine.sheet import Sheet, nearest
from heataudit.machine.tables.valves import PASSES
from heataudit.machine.values import folded

Sheets = Mapping[str, Sheet]
Terminal = tuple[Sheet, int, str]


def check_routes(sheets: Sheets, ports: Ports, shut: set[str]) -> None:
    """Note ports that lead nowhere; where there are none, fixed pumps that have no way to the tank.

    Parameters
    ----------
    sheets
        Sheets by key.
    ports
        Who is joined with whom.
    shut
        Throttles that the duty cycle closes in some phase, names folded.
    """
    if not _check_dead_ends(sheets, ports):
        _check_pumps(sheets, ports, shut)


def _rows(sheet: Sheet) -> Iterator[tuple[int, Any]]:
    yield from enumerate(sheet.frame.itertuples(index=False))


def terminals(sheets: Sheets) -> Iterator[Terminal]:
    """Ports that must lead somewhere: those of everything that passes oil."""
    for table, keys in (("pumps", ("outlet", "suction", "drain_to")), ("lines", ("from_", "to"))):
        for row in range(len(sheets[table])):
            yield from ((sheets[table], row, key) for key in keys)
    for row, valve in _rows(sheets["valves"]):
        ends = ["from_", "to", "port_3"] if valve.kind == "priority" else ["from_", "to"]
        yield from ((sheets["valves"], row, key) for key in ends)
    sheet = sheets["sections"]
    served = {folded(name) for name in sheets["actuators"].frame["section"] if name}
    for row, section in _rows(sheet):
        yield from ((sheet, row, key) for key in ("port_p", "port_t"))
        for key, paths in (("port_a", (section.p_a, section.a_t)), ("port_b", (section.p_b, section.b_t))):
            own = not sheet.is_typed(key)[row]
            if any(flow != 0 for flow in paths) and not (own and _is_spare(sheets, section, key, served)):
                yield sheet, row, key
        if section.centre == "open":
            yield sheet, row, "port_n"
    known = {folded(name) for name in sheet.frame["name"]}
    for row, actuator in _rows(sheets["actuators"]):
        if actuator.section and folded(actuator.section) not in known:
            continue
        ends = ["port_a"] if actuator.kind == "plunger" else ["port_a", "port_b"]
        yield from ((sheets["actuators"], row, key) for key in ends)


def _is_spare(sheets: Sheets, section: Any, key: str, served: set[str]) -> bool:
    """Whether a section's own port may stay closed: it commands nothing, or a plunger, which has no port B."""
    if folded(section.name) not in served:
        return True
    actuators = sheets["actuators"].frame
    commanded = actuators[actuators["section"].map(folded) == folded(section.name)]
    return key == "port_b" and bool((commanded["kind"] == "plunger").all())


def _owner(sheet: Sheet, row: int, key: str) -> tuple[str, str]:
    """The component of a port; a bank is the owner of the ports that its sections share."""
    if sheet.table.key == "sections" and key in ("port_p", "port_t", "port_n"):
        return "bank", folded(sheet.frame["bank"].iloc[row])
    return sheet.table.key, str(row)


def _check_dead_ends(sheets: Sheets, ports: Ports) -> int:
    """Note ports that lead nowhere, and give their number."""
    users: dict[int, list[Terminal]] = defaultdict(list)
    labels: set[str] = set()
    for terminal in terminals(sheets):
        sheet, row, key = terminal
        label = sheet.frame[key].iloc[row]
        if label:
            users[ports.node(label)].append(terminal)
            labels.add(label)
    dead = 0
    for node, users_here in users.items():
        if node == 0 or len({_owner(*terminal) for terminal in users_here}) > 1:
            continue
        sheet, row, key = users_here[0]
        label = sheet.frame[key].iloc[row]
        advice = f'which leads nowhere; give another port the same label, or "{TANK}"'
        if sheet.is_typed(key)[row]:
            text = f'is "{label}", {advice}{nearest(label, labels - {label})}'
        else:
            text = f'is blank, so it is "{label}", {advice}'
        sheet.complain(key, [row], text)
        dead += 1
    return dead


def _check_pumps(sheets: Sheets, ports: Ports, shut: set[str]) -> None:
    ways = _ways(sheets, ports, shut)
    sheet = sheets["pumps"]
    for row, pump in _rows(sheet):
        if pump.control == "fixed" and not _reaches_tank(ways, ports.node(pump.outlet)):
            text = (
                f'is "{pump.outlet}", from which the oil of this fixed pump has no way to the tank when all sections '
                "are in neutral; add a relief valve or an open-centre valve"
            )
            sheet.complain("outlet", [row], text)


def _ways(sheets: Sheets, ports: Ports, shut: set[str]) -> dict[int, set[int]]:
    """Nodes that oil may reach from a node while every section is in neutral."""
    ways: dict[int, set[int]] = defaultdict(set)
    for _, line in _rows(sheets["lines"]):
        start, end = ports.node(line.from_), ports.node(line.to)
        ways[start].add(end)
        ways[end].add(start)
    for _, valve in _rows(sheets["valves"]):
        passes = PASSES.get(valve.kind)
        if passes is None or (valve.kind == "throttle" and folded(valve.name) in shut):
            continue
        start, end = ports.node(valve.from_), ports.node(valve.to)
        ways[start].add(end)
        if passes == "both":
            ways[end].add(start)
    for _, section in _rows(sheets["sections"]):
        if section.centre == "open":
            ways[ports.node(section.port_p)].add(ports.node(section.port_n))
    return ways


def _reaches_tank(ways: dict[int, set[int]], start: int) -> bool:
    seen, waiting = {start}, [start]
    while waiting:
        for node in ways[waiting.pop()] - seen:
            seen.add(node)
            waiting.append(node)
    return 0 in seen
