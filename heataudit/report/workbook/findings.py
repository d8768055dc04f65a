"""Sheet Findings: what to look at, with a link to the place."""

from __future__ import annotations

import pandas as pd
from openpyxl.styles import Font

from heataudit.report.charts.palette import HEAT
from heataudit.report.quantities import restate
from heataudit.report.words import findings_in_order
from heataudit.report.workbook.page import FONT, Report, colour_of, put
from heataudit.report.workbook.table import Field, Plan, write_table

TOPICS = {
    "relief-flowing": "Oil over a relief valve", "line-velocity": "Fast oil in a line",
    "speed-missed": "Speed not reached", "stalled": "Actuator stands still", "cavitation-risk": "Risk of cavitation",
    "oil-too-hot": "Oil too hot", "viscosity-low": "Oil too thin", "viscosity-high": "Oil too thick",
    "throttling": "Throttling", "idle-loss": "Losses while nothing moves", "return-pressure": "Pressure in the return",
    "cold-start": "Cold start", "pump-overload": "Drive or pump overloaded", "balance-error": "Bookkeeping is off",
    "not-converged": "Phase not solved",
}  # fmt: skip
"""Codes of findings in words."""

LINK = "1F5C99"


def write_findings(report: Report) -> None:
    """Write the sheet; the other tables must be written, since it links to their rows.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    found = findings_in_order(report.audit)
    sheet = report.sheet("Findings", "What to look at", "The gravest first; a name in blue leads to its row.")
    table = pd.DataFrame(
        [
            (f.severity.capitalize(), TOPICS.get(f.code, f.code.replace("-", " ")), f.where, f.phase,
             restate(f.text, report.system, (f.where, f.phase)))
            for f in found
        ],
        columns=["severity", "topic", "where", "phase", "text"], dtype=object,
    )  # fmt: skip
    fields = [
        Field("severity", "Severity"), Field("topic", "Topic"), Field("where", "Where"), Field("phase", "Worst phase"),
        Field("text", "What, and what helps"),
    ]  # fmt: skip
    sheet.column_dimensions["E"].width = 90
    write_table(report, sheet, 4, table, Plan("FindingsOfAudit", fields))
    for row, finding in enumerate(found, 5):
        for column, name in ((3, finding.where), (4, finding.phase)):
            place = report.places.get(name)
            if place is not None and name:
                cell = sheet.cell(row, column)
                cell.hyperlink = f"#'{place[0]}'!A{place[1]}"
                cell.font = Font(name=FONT, size=10, underline="single", color=LINK)
        if finding.severity == "danger":
            sheet.cell(row, 1).font = Font(name=FONT, size=10, bold=True, color=colour_of(HEAT))
    if not found:
        put(sheet, 4, 1, "Nothing was found that calls for a look.")
