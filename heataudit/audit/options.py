"""The coolers to choose from: what each offers in the design case, and which one does it at the least price."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

from heataudit.audit.figures import BAR, L_MIN, sig
from heataudit.audit.thermal import HeatCurve
from heataudit.physics.air import density, standard_pressure
from heataudit.physics.arrays import Array
from heataudit.physics.constants import KELVIN
from heataudit.physics.coolers import air_density_factor, exchanger_capacity, exchanger_conductance

WATER_HEAT = 4.16e6
"""Heat that a volume of cooling water carries per kelvin [J/(m³·K)] (water at 20 to 30 °C, common tables)."""

NEGLIGIBLE = 1e-9
"""Share [-] by which an oil flow may lie beside a curve, or a capacity below what is needed: rounding."""

COLUMNS = (
    "cooler", "kind", "oil_flow_L_min", "offered_kW_K", "oil_temperature_C", "pressure_drop_bar", "fan_power_kW",
    "price", "enough", "remark",
)  # fmt: skip


@dataclass(frozen=True)
class DesignCase:
    """What a cooler has to do on the hottest day.

    Parameters
    ----------
    curve
        Heat over the oil's temperature.
    temperature
        Highest oil temperature [K].
    ambient
        Design ambient temperature [K].
    coolant
        Temperature of what cools the oil [K].
    oil_flow
        Through the cooler [m³/s]; None where it is free.
    extra_heat
        What the hottest stretch of the cycle has above the mean [W].
    needed
        Capacity with its reserve [W/K].
    """

    curve: HeatCurve
    temperature: float
    ambient: float
    coolant: float
    oil_flow: float | None
    extra_heat: float
    needed: float

    def oil_rate(self, flow: Array) -> Array:
        """Heat that flows of oil carry per kelvin [W/K].

        Parameters
        ----------
        flow
            Flows [m³/s], any shape.
        """
        oil = self.curve.surroundings.oil
        return np.asarray(flow * oil.density(self.temperature) * oil.specific_heat(self.temperature))

    @property
    def air_factor(self) -> float:
        """What is left of an air cooler's capacity at this altitude and coolant temperature [-]."""
        altitude = self.curve.surroundings.machine.general["altitude"]
        return float(air_density_factor(density(standard_pressure(altitude), self.coolant)))


def capacity_offered(rows: pd.DataFrame, flow: float, case: DesignCase) -> float:
    """Heat that a cooler takes per kelvin [W/K] at an oil flow; NaN beside its curve or where no exchanger is so good.

    An air cooler's capacity is interpolated over the oil flow and corrected for thin or warm air; of a water cooler the
    conductance is interpolated, then counterflow effectiveness gives the capacity.

    Parameters
    ----------
    rows
        The cooler's curve, in the order of its oil flow.
    flow
        Oil flow [m³/s].
    case
        The design case.
    """
    flows, capacities = rows["oil_flow"].to_numpy(float), rows["capacity"].to_numpy(float)
    if not flows[0] * (1 - NEGLIGIBLE) <= flow <= flows[-1] * (1 + NEGLIGIBLE):
        return np.nan
    if rows["kind"].iloc[0] == "air":
        return float(np.interp(flow, flows, capacities)) * case.air_factor
    water = rows["water_flow"].to_numpy(float)
    conductances = exchanger_conductance(capacities, case.oil_rate(flows), water * WATER_HEAT)
    conductance = float(np.interp(flow, flows, conductances))
    water_rate = float(np.interp(flow, flows, water)) * WATER_HEAT
    return float(exchanger_capacity(conductance, float(case.oil_rate(np.asarray(flow))), water_rate))


def _own_flow(rows: pd.DataFrame, case: DesignCase) -> float:
    """The oil flow [m³/s] of a curve at which it offers most, for a circuit whose flow is free."""
    flows = rows["oil_flow"].to_numpy(float)
    offers = np.nan_to_num([capacity_offered(rows, float(flow), case) for flow in flows])
    return float(flows[int(np.argmax(offers))])


def _option(name: str, rows: pd.DataFrame, case: DesignCase) -> dict[str, Any]:
    rows = rows.sort_values("oil_flow")
    first = rows.iloc[0]
    low, high = (sig(float(rows["oil_flow"].iloc[end]) / L_MIN) for end in (0, -1))
    flow = _own_flow(rows, case) if case.oil_flow is None else case.oil_flow
    offered = capacity_offered(rows, flow, case)
    warm = None if np.isnan(offered) else case.curve.equilibrium(case.ambient, offered, case.extra_heat)
    covered = not np.isnan(offered)

    def at_flow(column: str) -> float:
        return float(np.interp(flow, rows["oil_flow"], rows[column]))

    return {
        "cooler": name, "kind": first["kind"], "oil_flow_L_min": low if low == high else f"{low} to {high}",
        "offered_kW_K": offered / 1e3, "oil_temperature_C": np.nan if warm is None else warm - KELVIN,
        "pressure_drop_bar": at_flow("pressure_drop") / BAR if covered else np.nan,
        "fan_power_kW": at_flow("fan_power") / 1e3, "price": float(first["price"]),
        "enough": bool(covered and offered >= case.needed * (1 - NEGLIGIBLE)),
        "remark": _remark(rows, flow, offered, case),
        "flow": flow,
    }  # fmt: skip


def _remark(rows: pd.DataFrame, flow: float, offered: float, case: DesignCase) -> str:
    flows = rows["oil_flow"].to_numpy(float)
    if np.isnan(offered):
        if flows[0] * (1 - NEGLIGIBLE) <= flow <= flows[-1] * (1 + NEGLIGIBLE):
            return "no exchanger can have this capacity at these flows of oil and water; check the list"
        return f"its curve does not cover {sig(flow / L_MIN)} L/min"
    if offered < case.needed * (1 - NEGLIGIBLE):
        return f"gives {sig(100 * offered / case.needed)} % of what is needed"
    return "enough"


def rank_options(coolers: pd.DataFrame, case: DesignCase) -> pd.DataFrame:
    """The list of coolers, the choice first: those that are enough by price, fan power and capacity, then the others.

    Parameters
    ----------
    coolers
        The machine's table.
    case
        The design case.

    Returns
    -------
    pandas.DataFrame
        Columns as `Cooler.options` says, and `flow`, the oil flow that counts [m³/s].
    """
    options = [_option(str(name), rows, case) for name, rows in coolers.groupby("name", sort=False)]
    table = pd.DataFrame(options, columns=[*COLUMNS, "flow"]).astype({"enough": bool})
    shortfall = (case.needed / 1e3 - table["offered_kW_K"]).where(~table["enough"], 0.0)
    return (
        table.assign(shortfall=shortfall)
        .sort_values(["shortfall", "price", "fan_power_kW", "offered_kW_K"], na_position="last", ignore_index=True)
        .drop(columns="shortfall")
    )  # fmt: skip
