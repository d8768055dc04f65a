"""Sheet Answer: one printed page with the three questions."""

from __future__ import annotations

from openpyxl.styles import Border, PatternFill, Side
from openpyxl.worksheet.worksheet import Worksheet

from heataudit.audit.model import Audit, Finding
from heataudit.report.charts.palette import BAND, HEAT, INK, QUIET
from heataudit.report.quantities import System, grouped, quantity, restate
from heataudit.report.words import GROUP_NAMES, finding_text, findings_in_order, oil_sentence, ranked_groups, share_text
from heataudit.report.workbook.page import LINE, Look, Report, colour_of, paragraph, picture, put, set_widths

COLUMNS, COLUMN_WIDTH, PICTURE_WIDTH = 6, 16.0, 7.0
MOST_FINDINGS, MOST_LOSSES = 4, 5


def write_answer(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit = report.audit
    sheet = report.sheet("Answer", audit.machine.general["machine"], landscape=False)
    set_widths(sheet, [COLUMN_WIDTH] * COLUMNS)
    row = paragraph(sheet, 2, _conditions(audit, report.system), COLUMNS)
    row = _key_numbers(sheet, row + 1, audit, report.system)
    row = _question(sheet, row, "1. Where does the energy go?")
    row = paragraph(sheet, row, _energy_sentence(audit, report.system), COLUMNS)
    row = picture(report, sheet, row, "energy-flow", PICTURE_WIDTH)
    row = _top_losses(sheet, row, report)
    row = _question(sheet, row + 1, "2. What would help?")
    row = _top_findings(sheet, row, audit, report.system)
    row = _question(sheet, row, "3. Which cooler?")
    names = [str(name) for name in audit.cooler.options["cooler"]]
    row = paragraph(sheet, row, restate(audit.cooler.verdict, report.system, names), COLUMNS)
    row = paragraph(sheet, row, oil_sentence(audit, report.system), COLUMNS)
    row = paragraph(sheet, row + 1, _footing(audit), COLUMNS, size=8)
    sheet.print_area = f"A1:F{row - 1}"
    sheet.page_setup.fitToHeight = 1
    sheet.print_options.horizontalCentered = True


def _conditions(audit: Audit, system: System) -> str:
    general, state = audit.machine.general, audit.conditions
    basis = "in balance" if state.oil_temperature_basis == "equilibrium" else "given"
    if audit.thermal.equilibrium_C is None and general["oil_temperature"] is None:
        basis = "the highest allowed; there is no balance"
    parts = [
        "Heat and energy audit", str(general["site"] or ""),
        f"prepared by {general['prepared_by']}" if general["prepared_by"] else "",
        f"oil at {quantity(state.oil_temperature_C, '°C', system)} ({basis})",
        f"{quantity(state.ambient_temperature_C, '°C', system)} ambient, "
        f"{quantity(state.design_ambient_temperature_C, '°C', system)} on the hottest day",
        f"{len(audit.phases):,} phases in {quantity(audit.cycle.duration_s, 's', system)}",
        f"{grouped(audit.annual.operating_hours)} h a year",
    ]  # fmt: skip
    return "; ".join(part for part in parts if part)


def key_numbers(audit: Audit, system: System) -> list[tuple[str, str]]:
    """Numbers at the top of the page with what they are.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    cycle, annual, cooler = audit.cycle, audit.annual, audit.cooler
    loss_cost = None if annual.price_per_kWh_loss is None else annual.price_per_kWh_loss * annual.loss_kWh
    money = (f"{quantity(loss_cost, '', system)} {annual.currency}", "what the losses cost a year")
    if loss_cost is None:
        money = (quantity(cycle.peak_heat_kW, "kW", system), "peak heat of a phase")
    return [
        (quantity(cycle.mean_heat_kW, "kW", system), "mean heat of the losses"),
        (share_text(cycle.efficiency), "of the shaft energy is useful work"),
        (quantity(annual.loss_kWh, "kWh", system), "lost in a year"),
        money,
        (quantity(audit.thermal.equilibrium_C, "°C", system), "oil temperature in balance"),
        (quantity(cooler.required_kW, "kW", system), "to be taken away on the hottest day"),
    ]


def _key_numbers(sheet: Worksheet, row: int, audit: Audit, system: System) -> int:
    hot = audit.thermal.equilibrium_C is None or audit.thermal.equilibrium_C > audit.thermal.highest_temperature_C
    for column, (number, words) in enumerate(key_numbers(audit, system), 1):
        colour = HEAT if column == 5 and hot else INK
        top = put(sheet, row, column, number, Look(bold=True, size=13, colour=colour, across="center"))
        low = put(sheet, row + 1, column, words, Look(size=8, colour=QUIET, wrapped=True, across="center"))
        for cell in (top, low):
            cell.fill = PatternFill("solid", fgColor=colour_of(BAND))
        top.border = low.border = Border(left=Side(style="medium", color="FFFFFF"))
    sheet.row_dimensions[row].height = 24
    sheet.row_dimensions[row + 1].height = 2 * LINE
    return row + 3


def _question(sheet: Worksheet, row: int, text: str) -> int:
    put(sheet, row, 1, text, Look(bold=True, size=12))
    for column in range(1, COLUMNS + 1):
        sheet.cell(row, column).border = Border(bottom=Side(style="thin", color=colour_of(INK)))
    sheet.row_dimensions[row].height = 18
    return row + 1


def _energy_sentence(audit: Audit, system: System) -> str:
    cycle, groups = audit.cycle, ranked_groups(audit)
    if not groups or cycle.shaft_energy_kJ <= 0:
        return "No energy comes from the pump shafts in this cycle."
    shares = [f"{GROUP_NAMES[g].lower()} {share_text(e / cycle.shaft_energy_kJ)}" for g, e in groups[:3]]
    return (
        f"Of {quantity(cycle.shaft_energy_kJ, 'kJ', system)} at the pump shafts in each cycle "
        f"{quantity(cycle.useful_energy_kJ, 'kJ', system)} become useful work and "
        f"{quantity(cycle.heat_energy_kJ, 'kJ', system)} heat. The largest losses are {', '.join(shares)}."
    )


def _top_losses(sheet: Worksheet, row: int, report: Report) -> int:
    """The largest losses, in a few rows."""
    audit = report.audit
    top = audit.losses[audit.losses["heat_kJ"] > 0].head(MOST_LOSSES)
    money = audit.annual.price_per_kWh_loss is not None
    heads = ["Largest losses", "", "Kind", "Of the heat", "kWh a year", f"{audit.annual.currency} a year"]
    for column, head in enumerate(heads if money else heads[:-1], 1):
        cell = put(sheet, row, column, head, Look(bold=True, size=9, across="right" if column > 3 else None))
        cell.border = Border(bottom=Side(style="hair", color=colour_of(INK)))
    for number, loss in enumerate(top.to_dict("records"), row + 1):
        put(sheet, number, 1, str(loss["component"]), Look(size=9))
        sheet.merge_cells(start_row=number, start_column=1, end_row=number, end_column=2)
        put(sheet, number, 3, GROUP_NAMES[loss["group"]], Look(size=9))
        put(sheet, number, 4, share_text(float(loss["share"])), Look(size=9, across="right"))
        put(sheet, number, 5, grouped(float(loss["annual_kWh"])), Look(size=9, across="right"))
        if money:
            put(sheet, number, 6, grouped(float(loss["annual_cost"])), Look(size=9, across="right"))
    return row + 1 + len(top)


def helpful(audit: Audit) -> list[Finding]:
    """Findings that say what to mend: the gravest first, one of a kind before the second of it.

    Parameters
    ----------
    audit
        The answers.
    """
    seen: dict[str, int] = {}
    ranked = []
    for place, finding in enumerate(findings_in_order(audit)):
        seen[finding.code] = seen.get(finding.code, 0) + 1
        ranked.append((seen[finding.code], place, finding))
    return [finding for _, _, finding in sorted(ranked, key=lambda entry: entry[:2])]


def _top_findings(sheet: Worksheet, row: int, audit: Audit, system: System) -> int:
    findings = helpful(audit)
    if not findings:
        return paragraph(sheet, row, "Nothing was found that calls for mending.", COLUMNS) + 1
    for finding in findings[:MOST_FINDINGS]:
        row = paragraph(sheet, row, f"• {finding_text(finding, system)}", COLUMNS, size=9)
    if len(findings) > MOST_FINDINGS:
        more = f"{len(findings) - MOST_FINDINGS} more on the sheet Findings."
        put(sheet, row, 1, more, Look(size=9, colour=QUIET))
        row += 1
    return row + 1


def _footing(audit: Audit) -> str:
    estimates = int(audit.machine.defaults["estimate"].sum())
    return (
        f"An estimate from {len(audit.machine.inputs):,} typed inputs and {len(audit.machine.defaults):,} defaults, "
        f"{estimates:,} of them estimates (sheet Inputs used): confirm it by measurement. Before any work on the "
        "machine read the cautions on the last sheet: oil under pressure, stored energy, hot surfaces, raised loads."
    )
