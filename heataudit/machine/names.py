"""Names of components: unique over the workbook, and those that other cells refer to."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from heataudit.machine.ports import TANK
from heataudit.machine.sheet import Sheet, nearest
from heataudit.machine.units import one_of
from heataudit.machine.values import folded

Sheets = Mapping[str, Sheet]


def check_names(sheets: Sheets) -> None:
    """Note names that are used twice, or that stand for something else."""
    first_use: dict[str, tuple[str, str]] = {folded(TANK): ("", "")}
    for sheet in sheets.values():
        if not sheet.table.components:
            continue
        here: dict[str, str] = {}
        for row, name in enumerate(sheet.frame["name"]):
            if not name:
                continue
            cell = sheet.cell("name", row)
            own_curve = sheet.table.key == "coolers" and folded(name) in here
            used = first_use.get(folded(name))
            if used is not None and not own_curve:
                text = (
                    f'is "{name}", the name of the reservoir; choose another name' if not used[0]
                    else f'is "{name}", a name that {used[0]}!{used[1]} has already; choose another name'
                )  # fmt: skip
                sheet.complain("name", [row], text)
            else:
                here.setdefault(folded(name), cell)
                first_use.setdefault(folded(name), (sheet.title, cell))
    _check_banks(sheets, first_use)


def _check_banks(sheets: Sheets, first_use: Mapping[str, tuple[str, str]]) -> None:
    """Note banks that carry the name of a component other than one of their own sections."""
    sheet = sheets["sections"]
    for row, bank in enumerate(sheet.frame["bank"]):
        if not sheet.is_typed("bank")[row] or folded(bank) not in first_use:
            continue
        owners = sheet.frame["name"][sheet.frame["bank"].map(folded) == folded(bank)]
        if folded(bank) not in {folded(owner) for owner in owners}:
            used = first_use[folded(bank)]
            where = f"{used[0]}!{used[1]} has" if used[0] else "the reservoir has"
            sheet.complain("bank", [row], f'is "{bank}", a name that {where} already; choose another name')


def resolve_references(sheets: Sheets) -> None:
    """Give references the spelling of the names that they mean, and note those that mean none."""
    banks = sheets["sections"].frame["bank"]
    spelling = {folded(bank): bank for bank in reversed(banks.tolist())}
    sheets["sections"].frame["bank"] = banks.map(lambda bank: spelling[folded(bank)]).astype(object)
    for sheet in sheets.values():
        for key, column in sheet.columns.items():
            if not column.refers_to or key not in sheet.raw:
                continue
            names = {folded(name): name for of in column.refers_to for name in sheets[of].frame["name"] if name}
            known = {**names, **{folded(word): word for word in column.words}}
            cells = sheet.frame[key]
            sheet.frame[key] = cells.map(lambda cell, known=known: known.get(folded(cell), cell)).astype(object)
            unknown = [row for row, cell in enumerate(cells) if cell and folded(cell) not in known]
            where = one_of([sheets[of].table.sheet for of in column.refers_to])
            for row in unknown:
                close = nearest(cells.iloc[row], known.values())
                sheet.complain(key, [row], f'is "{cells.iloc[row]}", which is not on the sheet {where}{close}')


def row_of(sheet: Sheet, name: str) -> int | None:
    """Row of a component, None where there is none of this name."""
    rows = np.flatnonzero([folded(other) == folded(name) for other in sheet.frame["name"]])
    return int(rows[0]) if len(rows) else None
