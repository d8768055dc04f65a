"""Sheets Lines, and Valves and sections: what flows through them and what it costs."""

from __future__ import annotations

import numpy as np
import pandas as pd
from openpyxl.formatting.rule import CellIsRule
from openpyxl.styles import Font
from openpyxl.utils import get_column_letter

from heataudit.audit.figures import BAR, L_MIN
from heataudit.audit.model import Audit
from heataudit.report.charts.palette import BEYOND
from heataudit.report.workbook.losses import money_field
from heataudit.report.workbook.page import Report, colour_of
from heataudit.report.workbook.table import Field, Plan, write_table


def write_lines(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit = report.audit
    note = "Velocity, flow and drop in the fastest phase; heat of the whole cycle. Faster than the guideline is red."
    sheet = report.sheet("Lines", "Lines", note)
    table = audit.lines.assign(
        over=audit.lines["velocity_m_s"].abs() / audit.lines["guideline_m_s"],
        velocity_m_s=audit.lines["velocity_m_s"].abs(), flow_L_min=audit.lines["flow_L_min"].abs(),
        drop_bar=audit.lines["drop_bar"].abs(),
    )  # fmt: skip
    fields = [
        Field("line", "Line"), Field("service", "Service"), Field("size", "Size"),
        Field("inside_diameter_mm", "Inside diameter"), Field("count", "Lines side by side"),
        Field("length_m", "Length"), Field("phase", "Fastest phase"), Field("flow_L_min", "Flow"),
        Field("velocity_m_s", "Velocity"), Field("guideline_m_s", "Guideline"),
        Field("over", "Velocity per guideline", percent=True), Field("reynolds", "Reynolds number"),
        Field("drop_bar", "Drop"), Field("mean_heat_kW", "Mean heat"), Field("heat_kJ", "Heat in a cycle", bar=True),
        Field("annual_kWh", "Heat in a year"), *money_field(audit),
    ]  # fmt: skip
    after = write_table(report, sheet, 4, table, Plan("LinesOfMachine", fields, places="line"))
    letter = get_column_letter([field.key for field in fields].index("over") + 1)
    font = Font(bold=True, color=colour_of(BEYOND))
    red = CellIsRule(operator="greaterThan", formula=["1"], font=font)  # type: ignore[no-untyped-call]
    sheet.conditional_formatting.add(f"{letter}5:{letter}{after}", red)


def write_components(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    note = "Flow, drop and heat in the phase in which a component makes the most heat; heat of the whole cycle."
    sheet = report.sheet("Valves and sections", "Valves, directional valve sections and galleries", note)
    fields = [
        Field("component", "Component"), Field("kind", "What it is"), Field("phase", "Phase with the most heat"),
        Field("flow_L_min", "Flow"), Field("drop_bar", "Drop"), Field("heat_kW", "Heat in it"),
        Field("heat_kJ", "Heat in a cycle", bar=True), Field("annual_kWh", "Heat in a year"),
        *money_field(report.audit),
    ]  # fmt: skip
    write_table(
        report, sheet, 4, component_summary(report.audit), Plan("ValvesAndSections", fields, places="component")
    )


def component_summary(audit: Audit) -> pd.DataFrame:
    """All components but lines with the phase in which they make the most heat.

    Parameters
    ----------
    audit
        The answers.
    """
    state = audit.solution.components
    kept = [k for k, kind in enumerate(state.kind) if kind not in ("line", "void")]
    worst = np.argmax(state.heat[kept], axis=1) if kept else np.array([], int)
    time = (audit.phases["duration_s"] * audit.phases["repeats"]).to_numpy(float)
    energy = state.heat[kept] @ time / 1e3
    total = audit.cycle.heat_energy_kJ
    yearly = audit.annual.loss_kWh / total if total else 0.0
    price = audit.annual.price_per_kWh_loss
    return pd.DataFrame({
        "component": [state.name[k] for k in kept],
        "kind": [state.kind[k] for k in kept],
        "phase": audit.machine.cycle.phase[worst],
        "flow_L_min": state.flow[kept, worst] / L_MIN,
        "drop_bar": state.drop[kept, worst] / BAR,
        "heat_kW": state.heat[kept, worst] / 1e3,
        "heat_kJ": energy,
        "annual_kWh": energy * yearly,
        "annual_cost": energy * yearly * (0.0 if price is None else price),
    }).sort_values("heat_kJ", ascending=False, kind="stable", ignore_index=True)  # fmt: skip
