"""report.xlsx: the answer first, then the tables behind it."""

from __future__ import annotations

from pathlib import Path

from heataudit.audit.model import Audit
from heataudit.report.quantities import System

ORDER = (
    "Answer", "Findings", "Charts", "Losses", "Loss groups", "Phases", "Pumps", "Actuators", "Lines",
    "Valves and sections", "Drives and cold start", "Cooler", "What if", "Inputs used", "Method and cautions",
)  # fmt: skip
"""Sheets in order."""


def write_workbook(audit: Audit, path: Path, pictures: dict[str, Path], system: System) -> None:
    """Write report.xlsx.

    Parameters
    ----------
    audit
        The answers.
    path
        The file.
    pictures
        PNG files of the charts by name.
    system
        "SI" or "US".
    """
    from openpyxl import Workbook
    from openpyxl.styles import Font

    from heataudit.report.workbook.answer import write_answer
    from heataudit.report.workbook.charts import write_charts_sheet
    from heataudit.report.workbook.cooler import write_cooler
    from heataudit.report.workbook.drives import write_drives
    from heataudit.report.workbook.findings import write_findings
    from heataudit.report.workbook.inputs import write_inputs
    from heataudit.report.workbook.losses import write_losses
    from heataudit.report.workbook.method import write_method
    from heataudit.report.workbook.page import FONT, Report
    from heataudit.report.workbook.parts import write_components, write_lines
    from heataudit.report.workbook.phases import write_phases
    from heataudit.report.workbook.what_if import write_what_if

    book = Workbook()
    book.remove(book.worksheets[0])
    book._named_styles["Normal"].font = Font(name=FONT, size=10)  # type: ignore[attr-defined]
    book.properties.creator = f"heataudit {audit.version}"
    report = Report(book, audit, system, pictures)
    for write in (
        write_answer, write_charts_sheet, write_lines, write_components, write_phases, write_losses, write_cooler,
        write_drives, write_what_if, write_inputs, write_method, write_findings,
    ):  # fmt: skip
        write(report)
    book._sheets.sort(key=lambda sheet: ORDER.index(sheet.title))  # type: ignore[attr-defined]
    book.active = 0
    book.save(path)
