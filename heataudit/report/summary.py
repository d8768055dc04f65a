"""The answers in a terminal: 80 columns, plain where it is none."""

from __future__ import annotations

import sys
from collections.abc import Iterable
from typing import IO

from rich import box
from rich.console import Console
from rich.markup import escape
from rich.table import Table
from rich.text import Text

from heataudit.audit.model import Audit
from heataudit.report.quantities import System, quantity, restate
from heataudit.report.safe import printable
from heataudit.report.words import GROUP_NAMES, finding_text, findings_in_order, oil_sentence, ranked_groups, share_text

WIDTH = 80
STYLES = {"danger": "bold red", "warning": "yellow", "note": ""}
MOST_FINDINGS = 8


def print_summary(audit: Audit, system: System, file: IO[str] | None = None) -> None:
    """Print where the energy goes, how warm the oil gets, which cooler it needs and what to look at.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US".
    file
        Where to; None is standard output.
    """
    file = sys.stdout if file is None else file
    console = Console(file=file, width=WIDTH, highlight=False, emoji=False, soft_wrap=False)
    with console.capture() as captured:  # rich would end the process where nobody reads on
        _print_parts(audit, system, console)
    file.writelines(f"{line.rstrip()}\n" for line in captured.get().splitlines())


def _print_parts(audit: Audit, system: System, console: Console) -> None:
    console.print(Text(printable(audit.machine.general["machine"]), style="bold"))
    for line in _numbers(audit, system):
        console.print(Text(line))
    console.print(_losses(audit, system))
    console.print(Text(f"Oil:    {oil_sentence(audit, system)}"))
    console.print(Text(f"Cooler: {restate(audit.cooler.verdict, system, cooler_names(audit))}"))
    findings = findings_in_order(audit)
    if findings:
        console.print()
    for finding in findings[:MOST_FINDINGS]:
        text = Text(f"{finding.severity.capitalize()}: ", style=STYLES[finding.severity])
        text.append(finding_text(finding, system), style="default")
        console.print(text)
    if len(findings) > MOST_FINDINGS:
        more = len(findings) - MOST_FINDINGS
        console.print(Text(f"... and {more} more finding{'' if more == 1 else 's'} in the report."))


def cooler_names(audit: Audit) -> Iterable[str]:
    """Names of the coolers that may stand in the verdict.

    Parameters
    ----------
    audit
        The answers.
    """
    return [str(name) for name in audit.cooler.options["cooler"]]


def _numbers(audit: Audit, system: System) -> Iterable[str]:
    cycle, annual = audit.cycle, audit.annual
    yield (
        f"{len(audit.phases):,} phases, {quantity(cycle.duration_s, 's', system)} a cycle: "
        f"{quantity(cycle.shaft_energy_kJ, 'kJ', system)} at the pump shafts, "
        f"{quantity(cycle.useful_energy_kJ, 'kJ', system)} useful ({share_text(cycle.efficiency)})"
    )
    bill = f"; energy bill {quantity(annual.energy_cost, '', system)} {annual.currency}"
    yield (
        f"Heat: {quantity(cycle.mean_heat_kW, 'kW', system)} mean, {quantity(cycle.peak_heat_kW, 'kW', system)} peak; "
        f"a year: {quantity(annual.loss_kWh, 'kWh', system)} lost"
        f"{'' if annual.energy_cost is None else bill}"
    )


def _losses(audit: Audit, system: System) -> Table:
    table = Table(box=box.SIMPLE, width=WIDTH, pad_edge=False)
    table.add_column("Where the energy goes")
    table.add_column("In a cycle", justify="right")
    table.add_column("Of the heat", justify="right")
    total = audit.cycle.heat_energy_kJ
    for group, energy in ranked_groups(audit):
        share = energy / total if total else 0.0
        table.add_row(escape(GROUP_NAMES[group]), quantity(energy, "kJ", system), share_text(share))
    return table
