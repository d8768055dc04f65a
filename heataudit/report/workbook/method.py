"""Sheet Method and cautions: how the answers came about, what they are worth, what to beware of."""

from __future__ import annotations

import numpy as np

from heataudit.audit.model import Audit
from heataudit.report.quantities import System, grouped, quantity, restate
from heataudit.report.words import CAUTIONS
from heataudit.report.workbook.page import Look, Report, paragraph, put, set_widths

METHOD = (
    "Every phase of the duty cycle is solved as a network of pumps, lines, valves and actuators in a steady state: "
    "flows balance at every port, and pressures agree along every way.",
    "Pumps: displacement flow less slip, torque with friction, from efficiencies at rated conditions. Lines: laminar "
    "and turbulent friction with bends and ends. Valves: orifice and setting laws from rated flow and drop. Actuators: "
    "areas, displacements and efficiencies.",
    "The heat of a component is its flow times its drop; that of a pump or actuator is power in less power out. Loads "
    "that drive give power back; trapped oil that is let down makes heat once for each time.",
    "Oil: viscosity over temperature by the grade and index given, over pressure in lines, density and specific heat "
    "over temperature.",
    "The tank gives off heat by its walls to the air. The oil's temperature is the one at which as much heat goes out "
    "as comes in, mean of the cycle; the cycle is solved anew at each temperature.",
    "The cooler is sized for the hottest stretch of the cycle that is as long as a time constant of the tank, with oil "
    "at the highest temperature and air at the design ambient.",
)  # fmt: skip
"""How it is calculated, in a practitioner's words."""

COLUMNS = 2


def write_method(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit, system = report.audit, report.system
    sheet = report.sheet("Method and cautions", "Method and cautions", landscape=False)
    set_widths(sheet, [30, 80])
    row = 3
    for heading, texts in (
        ("Cautions", [restate(text, system) for text in CAUTIONS]),
        ("How it is calculated", METHOD),
        ("How good it is", quality(audit, system)),
        ("Where it comes from", provenance(audit)),
    ):
        put(sheet, row, 1, heading, Look(bold=True, size=12))
        row += 1
        for text in texts:
            row = paragraph(sheet, row, f"• {text}", COLUMNS)
        row += 1
    sheet.print_area = f"A1:B{row}"


def quality(audit: Audit, system: System) -> list[str]:
    """Sentences on the solution and on what it rests.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    """
    solution, cycle = audit.solution, audit.cycle
    solved, phases = int(solution.converged.sum()), solution.phases
    worst = float(np.nanmax(solution.residual)) if phases else 0.0
    estimates = int(audit.machine.defaults["estimate"].sum())
    return [
        f"{solved:,} of {phases:,} phases were solved, in {int(solution.iterations.max())} steps at most; the worst "
        f"residual is {worst:.1e} of the pump flow or of {quantity(100.0, 'bar', system)}.",
        f"Bookkeeping error: power in and power out differ by {cycle.balance_error_kJ:.1e} kJ in a cycle of "
        f"{grouped(cycle.shaft_energy_kJ)} kJ shaft energy. That proves the sums, not the inputs.",
        f"{estimates:,} inputs are estimates with the plus-minus on the sheet Inputs used; the answers can be no "
        "better than they are. Measured pressures, flows and temperatures are the best check.",
    ]  # fmt: skip


def provenance(audit: Audit) -> list[str]:
    """Sentences on program and input.

    Parameters
    ----------
    audit
        The answers.
    """
    machine = audit.machine
    lines = [
        f"heataudit, version {audit.version}.",
        f"Workbook {machine.source.name}, SHA-256 {machine.checksum}.",
    ]
    lines += [f"Warning on reading: {warning}" for warning in machine.warnings[:20]]
    if len(machine.warnings) > 20:
        lines.append(f"{len(machine.warnings) - 20} more warnings on reading.")
    return lines
