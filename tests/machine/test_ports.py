"""Ports: labels that are joined, and an actuator's joint with its section."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from heataudit.machine import TANK, Ports, connect, read_machine
from tests.workbooks import PRESS, Sheets, changed, write


def ports(tmp_path: Path, sheets: Sheets) -> Ports:
    machine = read_machine(write(tmp_path / "press.xlsx", sheets))
    return connect(machine.pumps, machine.lines, machine.valves, machine.sections, machine.actuators)


def with_rows(sheet: str, *rows: list[Any]) -> Sheets:
    return {**PRESS, sheet: [*PRESS[sheet], *rows]}


def test_the_tank_is_node_0_and_labels_have_no_case(tmp_path: Path) -> None:
    joined = ports(tmp_path, changed(PRESS, {("Valves", "C2"): " p1 ", ("Valves", "D2"): "TANK"}))
    assert joined.nodes == (
        ("Tank",), ("P1",), ("Press.P",), ("Press.T",), ("Press.A", "Ram.A"), ("Press.B", "Ram.B"),
    )  # fmt: skip
    assert joined.node(TANK) == joined.node(" tank") == 0
    assert joined.node("p1") == 1
    assert "P2" not in joined
    with pytest.raises(KeyError):
        joined.node("P2")


def test_a_line_between_section_and_actuator_parts_them(tmp_path: Path) -> None:
    joined = ports(tmp_path, with_rows("Lines", ["Hose", "Press.A", "Ram.A", "-8", None, 2]))
    assert joined.node("Press.A") != joined.node("Ram.A")
    assert joined.node("Press.B") == joined.node("Ram.B")


def test_a_way_over_junctions_parts_them_too(tmp_path: Path) -> None:
    sheets = with_rows("Lines", ["Hose", "Press.A", "J", "-8", None, 2])
    sheets = {**sheets, "Valves": [*PRESS["Valves"], ["Stop", "throttle", "Ram.A", "J", 60]]}
    joined = ports(tmp_path, sheets)
    assert joined.node("Press.A") != joined.node("Ram.A")


@pytest.mark.parametrize(
    "row",
    [
        ["Port relief", "relief", "Press.A", "Tank", None, 180],
        ["Make-up", "check", "Tank", "Ram.A", 40],
        ["Crossover", "relief", "Press.A", "Press.B", None, 180],
    ],
)
def test_a_row_that_leads_elsewhere_does_not_part_them(tmp_path: Path, row: list[Any]) -> None:
    joined = ports(tmp_path, with_rows("Valves", row))
    assert joined.node("Press.A") == joined.node("Ram.A")
    assert joined.node("Press.B") == joined.node("Ram.B")


def test_ways_over_the_tank_are_no_ways(tmp_path: Path) -> None:
    rows = [["R", "relief", "Press.A", "Tank", None, 180], ["C", "check", "Tank", "Ram.A", 40]]
    joined = ports(tmp_path, with_rows("Valves", *rows))
    assert joined.node("Press.A") == joined.node("Ram.A")


def test_own_labels_of_an_actuator_and_a_section(tmp_path: Path) -> None:
    cells = {("Actuators", "F1"): "Port A", ("Actuators", "F2"): "Bottom", ("Directional valves", "D1"): "Port A",
             ("Directional valves", "D2"): "Work 1"}  # fmt: skip
    joined = ports(tmp_path, changed(PRESS, cells))
    assert joined.node("Bottom") == joined.node("Work 1")
