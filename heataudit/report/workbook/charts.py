"""Sheet Charts: the pictures, as many to a page as it holds."""

from __future__ import annotations

from openpyxl.worksheet.pagebreak import Break

from heataudit.report.workbook.page import ROW, Report, picture, set_widths

PICTURE_WIDTH, PAGE = 6.8, 10.2
"""Width of a picture and height of a page [in]."""

HERE = ("losses-ranked", "line-velocities", "cycle-timeline", "pressure-flow-rectangles")
"""Charts on this sheet; the others stand on Answer and Cooler."""


def write_charts_sheet(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    sheet = report.sheet("Charts", "Charts", "The folder charts holds them as pictures for slides.", landscape=False)
    set_widths(sheet, [16.0] * 6)
    row, page_start = 4, 1
    for name in HERE:
        if name not in report.pictures:
            continue
        after = picture(report, sheet, row, name, PICTURE_WIDTH)
        if row > 4 and (after - page_start) * ROW / 72 > PAGE:
            sheet.row_breaks.append(Break(id=row - 1))
            page_start = row
        row = after + 1
    sheet.print_area = f"A1:F{row}"
