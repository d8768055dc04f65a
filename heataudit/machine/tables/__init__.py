"""The sheets of the machine workbook, one module each."""

from __future__ import annotations

from heataudit.machine.tables.actuators import ACTUATORS
from heataudit.machine.tables.coolers import COOLERS
from heataudit.machine.tables.cycle import CYCLE
from heataudit.machine.tables.drives import DRIVES
from heataudit.machine.tables.general import GENERAL
from heataudit.machine.tables.lines import LINES
from heataudit.machine.tables.oil import OIL
from heataudit.machine.tables.pumps import PUMPS
from heataudit.machine.tables.readings import READINGS
from heataudit.machine.tables.reservoir import RESERVOIR
from heataudit.machine.tables.sections import SECTIONS
from heataudit.machine.tables.tolerances import TOLERANCES
from heataudit.machine.tables.upgrades import UPGRADES
from heataudit.machine.tables.valves import VALVES

TABLES = (
    GENERAL, OIL, RESERVOIR, DRIVES, PUMPS, LINES, VALVES, SECTIONS, ACTUATORS, CYCLE, COOLERS, UPGRADES, TOLERANCES,
    READINGS,
)  # fmt: skip
"""All sheets, in the order in which a person fills them in."""

GUIDE = "Guide"
"""Title of the sheet of a blank workbook that explains the others."""

BY_KEY = {table.key: table for table in TABLES}
"""Sheets by key."""

__all__ = [
    "ACTUATORS", "BY_KEY", "COOLERS", "CYCLE", "DRIVES", "GENERAL", "GUIDE", "LINES", "OIL", "PUMPS", "READINGS",
    "RESERVOIR", "SECTIONS", "TABLES", "TOLERANCES", "UPGRADES", "VALVES",
]  # fmt: skip
