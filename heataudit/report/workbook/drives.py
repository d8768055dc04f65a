"""Sheet Drives and cold start: motors and engines over the year, pumps on cold oil."""

from __future__ import annotations

from heataudit.report.quantities import quantity
from heataudit.report.workbook.page import Look, Report, put
from heataudit.report.workbook.table import Field, Plan, write_table


def write_drives(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit = report.audit
    sheet = report.sheet("Drives and cold start", "Drives and cold start")
    put(sheet, 3, 1, "Drives", Look(bold=True, size=11))
    fields = [
        Field("drive", "Drive"), Field("kind", "Kind"), Field("peak_shaft_kW", "Highest shaft power"),
        Field("mean_shaft_kW", "Mean shaft power"), Field("power_limit_kW", "Power limit"),
        Field("annual_input_kWh", "Input in a year"), Field("annual_fuel_L", "Fuel in a year"),
    ]  # fmt: skip
    used = [field for field in fields if audit.drives[field.key].notna().any()]
    row = write_table(report, sheet, 4, audit.drives, Plan("DrivesOfMachine", used, freeze=False, places="drive"))
    start = quantity(audit.thermal.start_temperature_C, "°C", report.system)
    put(sheet, row + 1, 1, f"Pumps on oil of {start}, in their worst phase", Look(bold=True, size=11))
    fields = [
        Field("pump", "Pump"), Field("phase", "Phase"), Field("viscosity_mm2_s", "Oil viscosity"),
        Field("pressure_bar", "Outlet pressure"), Field("relief_flow_L_min", "Flow over relief valves"),
        Field("inlet_bar", "Inlet pressure, absolute"),
    ]  # fmt: skip
    write_table(report, sheet, row + 2, audit.cold_start, Plan("PumpsOnColdOil", fields, freeze=False))
