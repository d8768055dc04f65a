"""Sheet What if: live formulas for the cooler and for the money."""

from __future__ import annotations

from typing import NamedTuple

from openpyxl.styles import Border, PatternFill, Protection, Side
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.audit.model import Audit
from heataudit.machine.units import shown
from heataudit.report.charts.palette import INK
from heataudit.report.quantities import System, convert
from heataudit.report.safe import printable
from heataudit.report.workbook.page import Look, Report, colour_of, paragraph, put, put_formula, set_widths

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
    put(sheet, 4, 1, "Cooler", Look(bold=True, size=12))
    row = _write(sheet, 5, cooler_lines(audit, system, 5))
    text = (
        "The machine's heat is kept as it was found at the highest oil temperature, the tank's heat follows the "
        "difference between oil and ambient. For another oil temperature run the audit again: heat changes with it."
    )
    row = paragraph(sheet, row, text, COLUMNS, size=9)
    if audit.annual.drive_input_kWh is None and audit.annual.fuel_L is None:
        return
    put(sheet, row + 1, 1, "Money", Look(bold=True, size=12))
    _write(sheet, row + 2, money_lines(audit, row + 2))


def _write(sheet: Worksheet, row: int, lines: list[Line]) -> int:
    """Rows one below the other; the row after them."""
    for number, line in enumerate(lines, row):
        put(sheet, number, 1, line.name)
        put(sheet, number, 3, line.unit, Look(across="center"))
        put(sheet, number, 4, line.remark)
        if isinstance(line.value, str):
            cell = put_formula(sheet, number, 2, line.value, Look(bold=not line.changeable))
        else:
            cell = put(sheet, number, 2, line.value, Look(across="right"))
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
    degree, per_degree, kilowatt = (shown(unit, system) for unit in ("K", "kW/K", "kW"))
    ambient, celsius = convert(state.design_ambient_temperature_C, "°C", system)
    highest = convert(thermal.highest_temperature_C, "°C", system)[0]
    above = (cooler.oil_inlet_C - thermal.highest_temperature_C) * degree.factor
    span = (thermal.highest_temperature_C - state.design_ambient_temperature_C) * degree.factor
    per_kelvin = cooler.tank_at_design_kW * kilowatt.factor / span if span else 0.0
    follows = audit.machine.reservoir["cooler_coolant_temperature"] is None
    coolant = f"=B{row}" if follows else float(convert(cooler.coolant_inlet_C, "°C", system)[0])
    b = {name: f"B{row + k}" for k, name in enumerate((
        "ambient", "highest", "reserve", "coolant", "heat", "per_degree", "above", "tank", "required", "capacity",
        "reserved", "factor",
    ))}  # fmt: skip
    inlet = f"({b['highest']}+{b['above']}-{b['coolant']})"
    factor = per_degree.factor / kilowatt.factor * degree.factor
    in_unit = f"{b['required']}*{b['factor']}" if system == "US" else b["required"]
    return [
        Line("Design ambient temperature", round(float(ambient), 6), celsius, "hottest air expected", True),
        Line("Highest oil temperature", round(float(highest), 6), celsius, "to be held", True),
        Line("Reserve", cooler.reserve_percent, "%", "for fouling", True),
        Line("Coolant temperature", coolant, celsius, "a number may be typed in its place" if follows else "", True),
        Line("Heat to be dealt with", cooler.design_heat_kW * kilowatt.factor, kilowatt.unit, "as found by the audit"),
        Line("Given off by the tank per degree", per_kelvin, f"{kilowatt.unit}/{degree.unit}", "as found by the audit"),
        Line("Oil inlet of the cooler above the tank", above, degree.unit, "as found by the audit"),
        Line("Given off by the tank", f"={b['per_degree']}*({b['highest']}-{b['ambient']})", kilowatt.unit),
        Line("To be taken away", f"=MAX(0,{b['heat']}-{b['tank']})", kilowatt.unit),
        Line("Capacity required", f'=IF({inlet}>0,{in_unit}/{inlet},"no cooler can")',
             per_degree.unit, "per degree between oil inlet and coolant inlet"),
        Line("Capacity with the reserve",
             f"=IF(ISNUMBER({b['capacity']}),{b['capacity']}*(1+{b['reserve']}/100),{b['capacity']})",
             per_degree.unit, "choose a cooler that has it"),
        *([Line(f"{per_degree.unit} in one {kilowatt.unit} per {degree.unit}", factor, "", "for the units")]
          if system == "US" else []),
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
        Line("Share of the losses", 100 * lost, "%", "heat per shaft energy, as found by the audit"),
        Line("Of the bill for losses", f"=B{row + 4}*B{row + 5}/100", currency),
    ]  # fmt: skip
