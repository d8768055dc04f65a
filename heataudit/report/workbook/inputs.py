"""Sheet Inputs used: what was typed and what stands in its place where nothing was."""

from __future__ import annotations

import pandas as pd

from heataudit.audit.model import Audit
from heataudit.machine.tables import TABLES
from heataudit.report.quantities import System, restate
from heataudit.report.workbook.page import Report
from heataudit.report.workbook.table import Field, Plan, write_table


def write_inputs(report: Report) -> None:
    """Write the sheet.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    table = input_table(report.audit, report.system)
    counts = table["source"].value_counts()
    note = (
        f"{counts.get('typed', 0):,} typed, {counts.get('default', 0):,} defaults, {counts.get('estimate', 0):,} "
        "estimates: replace those that matter by data sheets or readings. The duty cycle is on the sheet Phases."
    )
    sheet = report.sheet("Inputs used", "Inputs used", note)
    fields = [
        Field("sheet", "Sheet"), Field("row", "Item or component"), Field("column", "Column"), Field("value", "Value"),
        Field("source", "Source"), Field("reason", "Reason of a default"),
        Field("plus_minus", "Plus-minus of an estimate", unit="%"),
    ]  # fmt: skip
    write_table(report, sheet, 4, table, Plan("InputsUsed", fields))


def input_table(audit: Audit, system: System) -> pd.DataFrame:
    """Typed cells and defaults in the order of the workbook.

    Parameters
    ----------
    audit
        The answers.
    system
        "SI" or "US": unit of the defaults; what was typed stays as it was typed.
    """
    typed = audit.machine.inputs.assign(source="typed", reason="", plus_minus=float("nan"))
    defaults = audit.machine.defaults
    names = audit.machine.defaults["row"].astype(str)
    filled = pd.DataFrame({
        "sheet": defaults["sheet"], "row": defaults["row"], "column": defaults["column"],
        "value": [restate(str(v), system, [n]) for v, n in zip(defaults["value"], names, strict=True)],
        "source": ["estimate" if e else "default" for e in defaults["estimate"]],
        "reason": [restate(str(r), system, [n]) for r, n in zip(defaults["reason"], names, strict=True)],
        "plus_minus": defaults["tolerance"].astype(float) * 100,
    })  # fmt: skip
    both = pd.concat([typed, filled], ignore_index=True)[list(filled.columns)]
    order = {table.sheet: k for k, table in enumerate(TABLES)}
    first = {key: k for k, key in reversed(list(enumerate(zip(both["sheet"], both["row"], strict=True))))}
    ranked = both.assign(
        a=both["sheet"].map(order).fillna(len(order)),
        b=[first[key] for key in zip(both["sheet"], both["row"], strict=True)],
    )
    return ranked.sort_values(["a", "b"], kind="stable", ignore_index=True)[list(filled.columns)]
