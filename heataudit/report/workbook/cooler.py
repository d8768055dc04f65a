"""Sheet Cooler: what is needed, what there is, what to choose, how the oil warms up."""

from __future__ import annotations

from openpyxl.worksheet.pagebreak import Break
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.audit.model import Audit
from heataudit.report.charts.warm_up import duration_text
from heataudit.report.quantities import System, grouped, quantity, restate
from heataudit.report.safe import printable
from heataudit.report.workbook.page import CHARACTER, Look, Report, paragraph, picture, put, width_of
from heataudit.report.workbook.table import Field, Plan, write_table

COLUMNS = 10
FACTS_WIDTH = 30.0


def write_cooler(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit, system = report.audit, report.system
    sheet = report.sheet("Cooler", "Cooler and oil temperature")
    options = audit.cooler.options
    remarks = [restate(str(text), system, [str(name) for name in options["cooler"]]) for text in options["remark"]]
    fields = [
        Field("cooler", "Cooler"), Field("kind", "Kind"), Field("oil_flow_L_min", "Oil flow of its curve"),
        Field("offered_kW_K", "Capacity in the design case"), Field("oil_temperature_C", "Oil temperature with it"),
        Field("pressure_drop_bar", "Pressure drop"), Field("fan_power_kW", "Fan power"),
        Field("price", "Price", unit=printable(audit.annual.currency)), Field("enough", "Enough"),
        Field("remark", "Remark"),
    ]  # fmt: skip
    facts = cooler_facts(audit, system)
    start = 5 + len(facts)
    sheet.column_dimensions["A"].width = FACTS_WIDTH
    put(sheet, start + 1, 1, "Coolers to choose from, the best first", Look(bold=True, size=11))
    shown = options.assign(remark=remarks, oil_flow_L_min=_flows(audit, system))
    row = write_table(
        report, sheet, start + 2, shown, Plan("CoolersToChooseFrom", fields, freeze=False, places="cooler")
    )
    paragraph(sheet, 2, restate(audit.cooler.verdict, system, list(options["cooler"])), COLUMNS, bold=True)
    _write_facts(sheet, 4, facts)
    report.places.setdefault("Oil", (sheet.title, 4))
    report.places.setdefault("Cooler", (sheet.title, 4))
    sheet.row_breaks.append(Break(id=row - 2))
    half = sum(width_of(sheet, column) for column in range(1, COLUMNS + 1)) * CHARACTER / 2
    picture(report, sheet, row, "warm-up", half - 0.1, left=half)
    row = picture(report, sheet, row, "heat-balance", half - 0.1)
    picture(report, sheet, row, "cooler-drop", half - 0.1, left=half)
    row = picture(report, sheet, row, "cooler-curves", half - 0.1)
    sheet.print_area = f"A1:J{row}"


def _flows(audit: Audit, system: System) -> list[str]:
    """The flows of the curves as text, in the report's units."""
    texts = [str(text) for text in audit.cooler.options["oil_flow_L_min"]]
    if system == "SI":
        return texts
    ends = [[quantity(float(end), "L/min", system).split(" ")[0] for end in text.split(" to ")] for text in texts]
    return [" to ".join(pair) for pair in ends]


def cooler_facts(audit: Audit, system: System) -> list[tuple[str, str, str]]:
    """What is known about the cooler and the oil's temperature: name, value, remark.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    cooler, thermal, state = audit.cooler, audit.thermal, audit.conditions

    def shown(value: float | None, unit: str) -> str:
        return quantity(value, unit, system)

    design = shown(state.design_ambient_temperature_C, "°C")
    hottest = shown(thermal.highest_temperature_C, "°C")
    window = f"mean of the hottest {shown(cooler.window_s, 's')} of the cycle, oil at {hottest}"
    rows = [
        ("Heat to be dealt with", shown(cooler.design_heat_kW, "kW"), window),
        ("Given off by the tank", shown(cooler.tank_at_design_kW, "kW"), f"at {hottest} oil and {design} ambient"),
        ("To be taken away", shown(cooler.required_kW, "kW"), "heat less what the tank gives off"),
        ("Capacity required", shown(cooler.required_kW_K, "kW/K"), "per degree between oil inlet and coolant inlet"),
        ("Reserve on top", f"{cooler.reserve_percent:g} %", "for fouling"),
        ("Oil reaches the cooler at", shown(cooler.oil_inlet_C, "°C"), ""),
        ("Coolant reaches it at", shown(cooler.coolant_inlet_C, "°C"), ""),
        ("Oil flow through it", shown(cooler.oil_flow_L_min, "L/min"), ""),
        ("Existing cooler", shown(cooler.existing_kW_K, "kW/K") if cooler.existing_kW_K else "none", ""),
        ("Margin of the existing cooler", _percent(cooler.existing_margin_percent), "before the reserve"),
        ("Pressure drop of the choice", shown(cooler.drop_hot_bar, "bar"), "oil warm, at the highest temperature"),
        ("Pressure drop of the choice", shown(cooler.drop_cold_bar, "bar"), "oil cold, at the start temperature"),
        ("Fan of the choice", _fan(audit), "in a year, beside what the drives take"),
        ("Oil in balance", shown(thermal.equilibrium_C, "°C"),
         f"at {shown(state.ambient_temperature_C, '°C')} ambient, with what is fitted today"),
        ("Oil in balance without a cooler", shown(thermal.equilibrium_without_cooler_C, "°C"), ""),
        ("Swing within a cycle", shown(thermal.ripple_K, "K"), "warm, highest less lowest oil temperature"),
        ("Warm-up", "–" if thermal.warm_up_min is None else duration_text(thermal.warm_up_min),
         "to 95 % of the rise"),
        ("Time constant of the tank", duration_text(thermal.time_constant_min), "without a cooler"),
        ("Heat transfer of the tank", shown(thermal.tank_coefficient_W_m2K, "W/(m²·K)"), ""),
    ]  # fmt: skip
    return [row for row in rows if row[1] != "–" or row[0].startswith("Oil in balance")]


def _fan(audit: Audit) -> str:
    """Energy and money that the chosen cooler's fan takes in a year."""
    annual = audit.annual
    if audit.cooler.choice is None or not annual.fan_kWh > 0:
        return "–"
    money = "" if annual.fan_cost is None else f", {grouped(annual.fan_cost)} {annual.currency}"
    return f"{grouped(annual.fan_kWh)} kWh{money}"


def _percent(value: float | None) -> str:
    return "–" if value is None else f"{value:.0f} %"


def _write_facts(sheet: Worksheet, row: int, facts: list[tuple[str, str, str]]) -> None:
    for number, (name, value, remark) in enumerate(facts, row):
        put(sheet, number, 1, name)
        put(sheet, number, 2, value, Look(bold=True))
        put(sheet, number, 4, remark)
