"""Sheet Pumps: what each pump displaces, how it is controlled, how well it works."""

from __future__ import annotations

import numpy as np
import pandas as pd

from heataudit.machine.schema import Column, Default, Table, Tables
from heataudit.machine.tables._columns import (
    displacement,
    efficiency,
    flow,
    name,
    number,
    port,
    power,
    pressure,
    reference,
    rotation,
    share,
    viscosity,
    word,
)

CONTROLS = ("fixed", "pressure compensated", "load sensing", "speed controlled", "set displacement")
PRESSURE_CONTROLLED = ("pressure compensated", "load sensing", "speed controlled", "set displacement")
MARGINS = {"load sensing": 20.0, "speed controlled": 10.0}


def _drive_speed(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    drives = tables["drives"]
    by_drive = pd.Series(drives["speed"].to_numpy(float), index=drives["name"])
    return rows["drive"].map(by_drive[~by_drive.index.duplicated()]).astype(float) * rows["speed_ratio"]


def _outlet(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["name"] + ".P"


def _rated_viscosity(rows: pd.DataFrame, tables: Tables) -> pd.Series:
    return rows["rated_viscosity"].where(rows["test_flow"].notna(), np.nan)


def _test(header: str, make: object, help: str, **more: object) -> Column:
    return make(header=header, help=help, above=0.0, **more)  # type: ignore[operator]


PUMPS = Table(
    sheet="Pumps",
    key="pumps",
    help="The pumps.",
    must=True,
    columns=(
        name("Pump", "Name of the pump."),
        word(
            header="Type", help="Gives the default efficiencies.",
            words=("gear", "vane", "piston"), must=True,
        ),
        word(
            header="Control", help="How the pump is controlled.", words=CONTROLS, must=True,
        ),
        reference(
            header="Drive", help="The drive that turns it.", refers_to=("drives",),
            default=Default("", "none given", shown="an electric motor of its own"),
        ),
        number(
            header="Speed ratio", help="Pump speed / drive speed.", above=0.0,
            default=Default(1.0, "on the drive's shaft"),
        ),
        displacement(header="Displacement", help="Oil per revolution.", above=0.0, must=True),
        rotation(
            header="Speed", help="Speed at which the efficiencies hold; it runs at it where nothing else is given.",
            above=0.0, must=True, missing="give it, or name a Drive that has a Speed",
            default=Default(_drive_speed, "the drive's speed x the speed ratio"),
        ),
        efficiency(
            header="Volumetric efficiency", help="At rated pressure, speed and viscosity (ISO 4391).", by="type",
            default={
                "gear": Default(92.0, "gear pump", 0.05), "vane": Default(88.0, "vane pump", 0.05),
                "piston": Default(95.0, "piston pump", 0.04),
            },
        ),
        efficiency(
            header="Hydromechanical efficiency", help="At rated pressure, speed and viscosity (ISO 4391).", by="type",
            default={
                "gear": Default(90.0, "gear pump", 0.05), "vane": Default(90.0, "vane pump", 0.05),
                "piston": Default(94.0, "piston pump", 0.04),
            },
        ),
        pressure(
            header="Rated pressure", help="Pressure at which the efficiencies hold.", above=0.0,
            default=Default(200.0, "common test pressure"),
        ),
        viscosity(
            header="Rated viscosity", help="Viscosity at which the efficiencies hold.", above=0.0,
            default=Default(32.0, "common test viscosity"),
        ),
        share(
            header="Viscous share", help="Share of the torque loss that comes from shearing oil.", at_least=0.0,
            at_most=100.0, default=Default(25.0, "judgement", 0.5),
        ),
        number(
            header="Viscosity exponent", help="How slip falls with viscosity: 1 for a laminar gap, 0 for none.",
            at_least=0.0, at_most=1.0, default=Default(0.5, "judgement, after measured pumps", 0.5),
        ),
        pressure(
            header="Setting", help="Highest pressure that the control allows.", above=0.0, must=True, by="control",
            only_for=PRESSURE_CONTROLLED,
        ),
        pressure(
            header="Margin", help="Pressure above the load that the control keeps.", above=0.0, by="control",
            only_for=tuple(MARGINS),
            default={control: Default(bar, "common practice", 0.25) for control, bar in MARGINS.items()},
        ),
        power(header="Power limit", help="Torque limit of a variable pump, at its speed.", above=0.0, by="control",
              only_for=("pressure compensated", "load sensing", "speed controlled")),
        port(header="Outlet", help="Port label.", default=Default(_outlet, "its own label", listed=False)),
        port(header="Suction", help="Port label.", default=Default("Tank", "usual")),
        port(header="Drain to", help="Port label.", default=Default("Tank", "usual")),
        _test("Test flow", flow, "Flow measured today, instead of the volumetric efficiency."),
        _test("Test pressure", pressure, "Pressure of that measurement."),
        _test("Test speed", rotation, "Speed of that measurement."),
        _test(
            "Test viscosity", viscosity, "Viscosity of that measurement.",
            default=Default(_rated_viscosity, "the rated viscosity"),
        ),
        pressure(
            header="Charge pressure", help="Low side of a closed loop.", above=0.0, by="control",
            only_for=("set displacement",), default={"set displacement": Default(20.0, "common practice", 0.25)},
        ),
    ),
    example={
        "name": "Main pump", "type": "gear", "control": "fixed", "displacement": 25, "speed": 1450, "outlet": "P1",
    },
)  # fmt: skip
"""Schema of the sheet Pumps."""
