"""Sheet What if: live formulas for the cooler and for the money."""

from __future__ import annotations

from typing import NamedTuple

from openpyxl.styles import Border, PatternFill, Protection, Side
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.audit.model import Audit
from heataudit.machine.units import shown
from heataudit.report.charts.palette import INK
from heataudit.report.quantities import LIVE_FORMAT, System, convert
from heataudit.report.safe import printable
from heataudit.report.workbook.page import Report, colour_of, paragraph, put, put_formula, set_widths

INPUT_FILL = "FFF3CD"
COLUMNS = 4


class Line(NamedTuple):
    """A row: what it is, its number or formula, its unit, a remark, and whether it may be changed."""

    name: str
    value: float | str
    unit: str
    remark: str = ""
    changeable: bool = False


def write_what_if(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit, system = report.audit, report.system
    note = "Change a yellow cell; the results below it follow."
    sheet = report.sheet("What if", "What if?", note, landscape=False)
    set_widths(sheet, [40, 14, 14, 62])
    put(sheet, 4, 1, "Cooler", bold=True, size=12)
    row = _write(sheet, 5, cooler_lines(audit, system, 5))
    text = (
        "The machine's heat is kept as it was found at the highest oil temperature, the tank's heat follows the "
        "difference between oil and ambient. For another oil temperature run the audit again: heat changes with it."
    )
    row = paragraph(sheet, row, text, COLUMNS, size=9)
    if audit.annual.drive_input_kWh is None and audit.annual.fuel_L is None:
        return
    put(sheet, row + 1, 1, "Money", bold=True, size=12)
    _write(sheet, row + 2, money_lines(audit, row + 2))


def _write(sheet: Worksheet, row: int, lines: list[Line]) -> int:
    """Rows one below the other; the row after them."""
    for number, line in enumerate(lines, row):
        put(sheet, number, 1, line.name)
        put(sheet, number, 3, line.unit, across="center")
        put(sheet, number, 4, line.remark)
        if isinstance(line.value, str):
            cell = put_formula(sheet, number, 2, line.value, LIVE_FORMAT, bold=not line.changeable)
        else:
            cell = put(sheet, number, 2, line.value, across="right")
        if line.changeable:
            edge = Side(style="thin", color=colour_of(INK))
            cell.fill = PatternFill("solid", fgColor=INPUT_FILL)
            cell.border = Border(left=edge, right=edge, top=edge, bottom=edge)
            cell.protection = Protection(locked=False)
            if not isinstance(line.value, str):
                cell.number_format = "General"
    return row + len(lines)


def cooler_lines(audit: Audit, system: System, row: int) -> list[Line]:
    """The cooler's rows; with the audit's own inputs they give the audit's own answer.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    row
        Row of the sheet in which the first line stands.
    """
    cooler, thermal, state = audit.cooler, audit.thermal, audit.conditions
    ambient, celsius = convert(state.design_ambient_temperature_C, "°C", system)
    highest = float(convert(thermal.highest_temperature_C, "°C", system)[0])
    heat, kilowatt = convert(cooler.design_heat_kW, "kW", system)
    tank = float(convert(cooler.tank_at_design_kW, "kW", system)[0])
    degree, per_degree = shown("K", system), shown("kW/K", system)
    above = (cooler.oil_inlet_C - thermal.highest_temperature_C) * degree.factor
    follows = audit.machine.reservoir["cooler_coolant_temperature"] is None
    coolant = f"=B{row}" if follows else float(convert(cooler.coolant_inlet_C, "°C", system)[0])
    b = {name: f"B{row + k}" for k, name in enumerate((
        "ambient", "highest", "reserve", "coolant", "heat", "tank", "required", "capacity", "reserved"
    ))}  # fmt: skip
    span = highest - float(ambient)
    tank_formula = f"={tank!r}*({b['highest']}-{b['ambient']})/{span!r}" if abs(span) > 1e-9 else tank
    factor = per_degree.factor / shown("kW", system).factor * degree.factor
    inlet = f"({b['highest']}+{above!r}-{b['coolant']})"
    capacity = f'=IF({inlet}>0,{b["required"]}*{factor!r}/{inlet},"no cooler can")'
    kind = "as the design ambient" if follows else "given"
    return [
        Line("Design ambient temperature", round(float(ambient), 6), celsius, "hottest air expected", True),
        Line("Highest oil temperature", round(highest, 6), celsius, "to be held", True),
        Line("Reserve", cooler.reserve_percent, "%", "for fouling", True),
        Line("Coolant temperature", coolant, celsius, f"{kind}; a number may be typed in its place", True),
        Line("Heat to be dealt with", float(heat), kilowatt, "as found by the audit"),
        Line("Given off by the tank", tank_formula, kilowatt),
        Line("To be taken away", f"=MAX(0,{b['heat']}-{b['tank']})", kilowatt),
        Line("Capacity required", capacity, per_degree.unit, "per degree between oil inlet and coolant inlet"),
        Line("Capacity with the reserve", f'=IF(ISNUMBER({b["capacity"]}),{b["capacity"]}*(1+{b["reserve"]}/100),'
             f'{b["capacity"]})', per_degree.unit, "choose a cooler that has it"),
    ]  # fmt: skip


def money_lines(audit: Audit, row: int) -> list[Line]:
    """The money's rows.

    Parameters
    ----------
    audit
        The answers.
    row
        Row of the sheet in which the first line stands.
    """
    annual = audit.annual
    diesel = annual.drive_input_kWh is None
    taken = annual.fuel_L if annual.fuel_L is not None and diesel else annual.drive_input_kWh
    assert taken is not None
    unit = "L" if diesel else "kWh"
    currency = printable(annual.currency)
    price = audit.machine.general["energy_price"]
    lost = annual.loss_kWh / annual.shaft_kWh if annual.shaft_kWh > 0 else 0.0
    return [
        Line("Operating hours in a year", annual.operating_hours, "h", "", True),
        Line("Energy price", 0.0 if price is None else float(price), f"{currency}/{unit}",
             "not given; type one" if price is None else "", True),
        Line("Drive input in an hour", taken / annual.operating_hours, unit, "as found by the audit"),
        Line("Drive input in a year", f"=B{row}*B{row + 2}", unit),
        Line("Energy bill in a year", f"=B{row + 3}*B{row + 1}", currency),
        Line("Of it for losses", f"=B{row + 4}*{lost!r}", currency, "in proportion to heat and shaft energy"),
    ]  # fmt: skip
