"""What a machine is: the workbook's sheets, units, reading it, writing a blank one."""

from __future__ import annotations

from heataudit.machine.blank import write_blank
from heataudit.machine.model import Cycle, Machine, Move, Problem, WorkbookError, rows
from heataudit.machine.ports import TANK, Ports, connect
from heataudit.machine.read import read_machine

__all__ = [
    "TANK", "Cycle", "Machine", "Move", "Ports", "Problem", "WorkbookError", "connect", "read_machine", "rows",
    "write_blank",
]  # fmt: skip
