"""Cells of one row, or of two sheets, that cannot both be right."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np

from heataudit.machine.ports import TANK
from heataudit.machine.sheet import Sheet
from heataudit.machine.sizes import inside_diameter, path_flow
from heataudit.machine.tables.readings import QUANTITIES
from heataudit.machine.units import is_unit
from heataudit.machine.values import folded

Sheets = Mapping[str, Sheet]


def check_contradictions(sheets: Sheets) -> None:
    """Note every pair of cells that contradict, and sizes that cannot be read."""
    _check_sizes(sheets["lines"], inside_diameter)
    _check_sizes(sheets["sections"], path_flow)
    _check_lines(sheets["lines"])
    for key in ("lines", "valves"):
        _check_ends(sheets[key])
    _check_pumps(sheets["pumps"])
    _check_banks(sheets["sections"])
    _check_feeds(sheets["sections"])
    _check_actuators(sheets["actuators"])
    _check_oil(sheets["oil"])
    _check_reservoir(sheets["reservoir"])
    _check_drives(sheets["drives"], sheets["pumps"])
    _check_readings(sheets["readings"])


def _check_sizes(sheet: Sheet, read: Callable[[str], float]) -> None:
    for row in np.flatnonzero(sheet.is_typed("size")):
        try:
            read(sheet.frame["size"].iloc[row])
        except ValueError as error:
            sheet.complain("size", [row], f'is "{sheet.frame["size"].iloc[row]}"; {error}')


def _check_lines(sheet: Sheet) -> None:
    both = np.flatnonzero(sheet.is_typed("size") & sheet.is_typed("inside_diameter"))
    sheet.complain("inside_diameter", both, "and Size are both given; leave one of the two blank")


def _check_ends(sheet: Sheet) -> None:
    """A line or valve joins two different ports."""
    ends = zip(sheet.frame["from_"], sheet.frame["to"], strict=True)
    same = [row for row, (start, end) in enumerate(ends) if start and folded(start) == folded(end)]
    sheet.complain(
        "to", same, lambda row: f'is "{sheet.frame["to"].iloc[row]}", as From is; it must be another port label'
    )


def _check_pumps(sheet: Sheet) -> None:
    """Slip comes from an efficiency or from one whole measurement; a closed loop has two sides."""
    tested = sheet.is_typed("test_flow")
    part = tested & ~(sheet.is_typed("test_pressure") & sheet.is_typed("test_speed"))
    text = "is given without Test pressure and Test speed; give all three"
    sheet.complain("test_flow", np.flatnonzero(part), text)
    both = tested & sheet.is_typed("volumetric_efficiency")
    text = "and Volumetric efficiency are both given; leave one of the two blank"
    sheet.complain("test_flow", np.flatnonzero(both), text)
    ideal = (sheet.frame["displacement"] * sheet.frame["test_speed"]).to_numpy(float)
    above = tested & (sheet.frame["test_flow"].to_numpy(float) >= ideal)
    sheet.complain("test_flow", np.flatnonzero(above), lambda row: (
        f"is {sheet.shown('test_flow', row)}; it must be less than Displacement x Test speed, "
        f"{ideal[row] * 60e3:.4g} L/min"
    ))  # fmt: skip
    open_loop = (sheet.frame["control"] == "set displacement") & (sheet.frame["suction"].map(folded) == folded(TANK))
    text = f'is "{TANK}"; the pump of a closed loop needs the port label of the loop\'s other side'
    sheet.complain("suction", np.flatnonzero(open_loop.to_numpy(bool)), text)


def _check_feeds(sheet: Sheet) -> None:
    """A section in series stands in the gallery."""
    closed = (sheet.frame["feed"] == "series") & (sheet.frame["centre"] == "closed")
    text = 'is "series", and Centre is "closed"; a section fed in series has an open centre'
    sheet.complain("feed", np.flatnonzero(closed.to_numpy(bool)), text)


def _check_banks(sheet: Sheet) -> None:
    """The sections of a bank share one gallery: one feed, one end."""
    frame = sheet.frame
    opened = frame["centre"] == "open"
    for _, rows in frame[opened].groupby(frame["bank"].map(folded)[opened]):
        for key in ("port_p", "port_n"):
            labels = rows[key].map(folded)
            other = rows.index[labels != labels.iloc[0]]
            text = (
                f"differs from that of the section before; the open-centre gallery of bank {rows['bank'].iloc[0]!s} "
                f'has one {sheet.columns[key].header}: give "{rows[key].iloc[0]!s}" in every row'
            )
            sheet.complain(key, other, text)


def _check_actuators(sheet: Sheet) -> None:
    frame = sheet.frame
    thick = (frame["kind"].isin(["cylinder", "double rod"]) & (frame["rod"] >= frame["bore"])).to_numpy(bool)
    sheet.complain("rod", np.flatnonzero(thick), lambda row: (
        f"is {sheet.shown('rod', row)}; it must be less than the Bore, {sheet.shown('bore', row)} "
        f"{sheet.units['bore'].name}"
    ))  # fmt: skip


def _check_oil(sheet: Sheet) -> None:
    """Oil is thinner when it is hotter."""
    oil = sheet.frame.iloc[0]
    warm = oil["viscosity_grade"] * 1e-6 if np.isnan(oil["viscosity_at_40"]) else oil["viscosity_at_40"]
    if sheet.is_typed("viscosity_at_100")[0] and oil["viscosity_at_100"] >= warm:
        typed = f"{sheet.shown('viscosity_at_100', 0)} {sheet.units['viscosity_at_100'].name}"
        text = f"is {typed}; it must be less than at 40 °C, {warm * 1e6:.5g} mm²/s"
        sheet.complain("viscosity_at_100", [0], text)


def _check_reservoir(sheet: Sheet) -> None:
    """The tank has all three sides or none, holds its oil, and its cooler has one flow."""
    sides = [key for key in ("length", "width", "height") if sheet.is_typed(key)[0]]
    if sides and len(sides) < 3:
        sheet.complain(sides[0], [0], "needs all of Length, Width and Height; give all three or none")
    tank = sheet.frame.iloc[0]
    if len(sides) == 3 and tank["oil_volume"] > tank["length"] * tank["width"] * tank["height"] * (1 + 1e-9):
        litres = tank["length"] * tank["width"] * tank["height"] * 1e3
        typed = f"{sheet.shown('oil_volume', 0)} {sheet.units['oil_volume'].name}"
        sheet.complain("oil_volume", [0], f"is {typed}; Length x Width x Height hold only {litres:.4g} L")
    if sheet.is_typed("cooler_oil_flow")[0] and tank["cooler_flow_from"] != "offline":
        source = tank["cooler_flow_from"]
        text = f'and Cooler flow from "{source}" are both given; the flow is that of {source}, leave this one blank'
        sheet.complain("cooler_oil_flow", [0], text)


def _check_drives(drives: Sheet, pumps: Sheet) -> None:
    """A drive is either electric or diesel over the whole machine: energy has one price."""
    kinds = drives.frame["kind"]
    electric_pumps = bool((pumps.frame["drive"] == "").any())
    if (kinds == "diesel").any() and ((kinds == "electric").any() or electric_pumps):
        row = int(np.flatnonzero(kinds == "diesel")[0])
        other = "a pump has no Drive, so it has an electric motor" if electric_pumps else "another drive is electric"
        text = f"is diesel, and {other}; Energy price and CO2 factor can only hold for one of the two"
        drives.complain("kind", [row], text, warn=True)


def _check_readings(sheet: Sheet) -> None:
    """A reading's unit measures its quantity."""
    for row in np.flatnonzero(sheet.is_typed("unit")):
        quantity, text = sheet.frame["quantity"].iloc[row], sheet.frame["unit"].iloc[row]
        dimensions = QUANTITIES.get(quantity, ())
        if dimensions and not any(is_unit(text, dimension) for dimension in dimensions):
            sheet.complain("unit", [row], f'is "{text}", which is not a unit of {quantity}')
