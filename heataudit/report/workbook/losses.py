"""Sheet Losses: heat by group and by component, in energy and money."""

from __future__ import annotations

import pandas as pd

from heataudit.audit.model import GROUPS, Audit
from heataudit.report.quantities import quantity
from heataudit.report.safe import printable
from heataudit.report.words import GROUP_MEANINGS, GROUP_NAMES
from heataudit.report.workbook.page import Look, Report, put
from heataudit.report.workbook.table import Field, Plan, write_table


def write_losses(report: Report) -> None:
    """Write the sheets.

    Parameters
    ----------
    report
        The answers and the workbook.
    """
    audit = report.audit
    money = money_field(audit)
    note = "Heat in one duty cycle and in a year of operating hours; what the heat costs as drive input."
    sheet = report.sheet("Losses", "Losses by component", note)
    table = audit.losses.assign(group=audit.losses["group"].map(GROUP_NAMES))
    fields = [
        Field("component", "Component"), Field("kind", "What it is"), Field("group", "Kind of loss"),
        Field("heat_kJ", "Heat in a cycle", bar=True), Field("share", "Of the heat", percent=True),
        Field("annual_kWh", "Heat in a year"), *money,
    ]  # fmt: skip
    write_table(report, sheet, 4, table, Plan("LossesByComponent", fields, places="component"))
    groups = report.sheet("Loss groups", "Losses by kind", note)
    fields = [
        Field("group", "Kind of loss"), Field("meaning", "What stands in it"),
        Field("heat_kJ", "Heat in a cycle", bar=True), Field("share", "Of the heat", percent=True),
        Field("mean_kW", "Mean heat"), Field("annual_kWh", "Heat in a year"), *money,
    ]  # fmt: skip
    row = write_table(report, groups, 4, group_table(audit), Plan("LossesByKind", fields))
    total = quantity(audit.cycle.heat_energy_kJ, "kJ", report.system)
    yearly = quantity(audit.annual.loss_kWh, "kWh", report.system)
    put(groups, row, 1, f"All kinds together: {total} in a cycle, {yearly} in a year.", Look(bold=True))


def money_field(audit: Audit) -> list[Field]:
    """The column of money, where there is a price.

    Parameters
    ----------
    audit
        The answers.
    """
    if audit.annual.price_per_kWh_loss is None:
        return []
    return [Field("annual_cost", "Cost in a year", unit=printable(audit.annual.currency))]


def group_table(audit: Audit) -> pd.DataFrame:
    """Loss groups with energy, power and money.

    Parameters
    ----------
    audit
        The answers.
    """
    heat = pd.Series({group: audit.loss_groups.get(group, 0.0) for group in GROUPS})
    by_group = audit.losses.groupby("group")[["annual_kWh"]].sum().reindex(GROUPS).fillna(0.0)
    price = audit.annual.price_per_kWh_loss
    table = pd.DataFrame({
        "group": [GROUP_NAMES[group] for group in GROUPS],
        "meaning": [GROUP_MEANINGS[group] for group in GROUPS],
        "heat_kJ": heat.to_numpy(),
        "mean_kW": heat.to_numpy() / audit.cycle.duration_s,
        "annual_kWh": by_group["annual_kWh"].to_numpy(),
    }).sort_values("heat_kJ", ascending=False, kind="stable", ignore_index=True)  # fmt: skip
    total = audit.cycle.heat_energy_kJ
    table["share"] = table["heat_kJ"] / total if total else 0.0
    table["annual_cost"] = table["annual_kWh"] * (0.0 if price is None else price)
    return table
