"""Which cooler the machine needs on the hottest day, how good the existing one is, and which one to choose."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pandas as pd

from heataudit.audit.figures import L_MIN, sig
from heataudit.audit.model import Cooler
from heataudit.audit.options import COLUMNS, NEGLIGIBLE, DesignCase, rank_options
from heataudit.audit.surroundings import cycle_mean, other_heat
from heataudit.audit.thermal import HeatCurve, Sample
from heataudit.audit.window import Window, hottest_window
from heataudit.machine import Cycle
from heataudit.physics.constants import KELVIN
from heataudit.physics.coolers import capacity_per_kelvin, oil_inlet_temperature

DROP_VISCOSITY = 32e-6
"""Viscosity [m²/s] at which the pressure drop of a listed cooler is taken to hold (common test viscosity)."""


def size_cooler(curve: HeatCurve, cycle: Cycle, hot: Sample, window_length: float) -> Cooler:
    """Size the cooler that holds the highest oil temperature at design ambient, without the existing one.

    Parameters
    ----------
    curve
        Heat over the oil's temperature.
    cycle
        The phases.
    hot
        The cycle, solved at the highest oil temperature.
    window_length
        Length of the stretch whose mean heat counts [s]: a time constant of the tank.
    """
    machine = curve.surroundings.machine
    heat = hot.phase_heat + other_heat(machine, cycle)
    window = hottest_window(cycle.duration * cycle.repeats, heat, window_length)
    case, required, inlet = _design_case(curve, hot, window, window.heat - cycle_mean(cycle, heat))
    reserve = float(machine.reservoir["cooler_reserve"])
    existing = float(machine.reservoir["cooler_capacity"])
    per_kelvin = case.needed / (1.0 + reserve)
    options = rank_options(machine.coolers, case)
    needed = per_kelvin > existing * (1 + NEGLIGIBLE)
    chosen = options.iloc[0] if needed and len(options) and options["enough"].iloc[0] else None
    flow = case.oil_flow if chosen is None else float(chosen["flow"])
    hot_drop, cold_drop = _drops(curve, chosen)
    cooler = Cooler(
        needed=needed,
        design_heat_kW=window.heat / 1e3,
        tank_at_design_kW=float(curve.surroundings.tank.heat(case.temperature, case.ambient)) / 1e3,
        oil_inlet_C=inlet - KELVIN,
        coolant_inlet_C=case.coolant - KELVIN,
        oil_flow_L_min=None if flow is None else flow / L_MIN,
        required_kW=required / 1e3,
        required_kW_K=per_kelvin / 1e3,
        reserve_percent=100 * reserve,
        window_start_s=window.start,
        window_s=window.length,
        existing_kW_K=existing / 1e3,
        existing_margin_percent=100 * (existing / per_kelvin - 1) if existing > 0 and per_kelvin > 0 else None,
        choice=None if chosen is None else str(chosen["cooler"]),
        choice_oil_temperature_C=None if chosen is None else _given(chosen["oil_temperature_C"]),
        drop_hot_bar=hot_drop,
        drop_cold_bar=cold_drop,
        verdict="",
        options=options[list(COLUMNS)],
    )
    return replace(cooler, verdict=_verdict(cooler, case))


def _design_case(curve: HeatCurve, hot: Sample, window: Window, extra: float) -> tuple[DesignCase, float, float]:
    """The design case, the heat to be taken away [W] and the oil's temperature at the cooler [K]."""
    around = curve.surroundings
    highest = float(around.machine.general["highest_oil_temperature"])
    coolant = around.coolant(around.design_ambient)
    required = max(window.heat - float(around.tank.heat(highest, around.design_ambient)), 0.0)
    inlet = highest
    if around.cooler_line is not None and hot.cooler_flow > 0:
        inlet = float(oil_inlet_temperature(highest, hot.reaching, around.oil_rate(hot.cooler_flow, highest)))
    per_kelvin = float(capacity_per_kelvin(required, inlet, coolant))
    reserve = float(around.machine.reservoir["cooler_reserve"])
    flow = None if math.isinf(hot.cooler_flow) else hot.cooler_flow
    case = DesignCase(curve, highest, around.design_ambient, coolant, flow, extra, per_kelvin * (1 + reserve))
    return case, required, inlet


def _given(value: float) -> float | None:
    return None if np.isnan(value) else float(value)


def _drops(curve: HeatCurve, chosen: pd.Series | None) -> tuple[float | None, float | None]:
    """Pressure drop of the choice [bar], hot and cold: in proportion to viscosity; None where none is listed."""
    if chosen is None or not chosen["pressure_drop_bar"] > 0:
        return None, None
    oil, general = curve.surroundings.oil, curve.surroundings.machine.general
    temperatures = (general["highest_oil_temperature"], general["start_temperature"])
    hot, cold = (float(chosen["pressure_drop_bar"] * oil.viscosity(t) / DROP_VISCOSITY) for t in temperatures)
    return hot, cold


def _verdict(cooler: Cooler, case: DesignCase) -> str:
    """The answer in a sentence or two."""
    highest, ambient = f"{sig(case.temperature - KELVIN)} °C", f"{sig(case.ambient - KELVIN)} °C"
    if cooler.required_kW == 0:
        return (
            f"No cooler needed: at {highest} oil and {ambient} ambient the tank gives off "
            f"{sig(cooler.tank_at_design_kW)} kW, and the machine makes {sig(cooler.design_heat_kW)} kW."
        )
    if math.isinf(cooler.required_kW_K):
        return (
            f"{sig(cooler.required_kW)} kW must be taken away to hold {highest}, but the coolant reaches the cooler at "
            f"{sig(cooler.coolant_inlet_C)} °C, no colder than the oil: no cooler can do it. Find a colder coolant, or "
            "make less heat."
        )
    need = (
        f"{sig(cooler.required_kW)} kW must be taken away to hold {highest} at {ambient} ambient: "
        f"{sig(cooler.required_kW_K)} kW/K, {sig(case.needed / 1e3)} kW/K with {sig(cooler.reserve_percent)} % reserve"
    )
    if not cooler.needed:
        return f"The existing cooler is enough. {need}; it has {sig(cooler.existing_kW_K)} kW/K."
    existing = f", and the existing cooler has {sig(cooler.existing_kW_K)} kW/K" if cooler.existing_kW_K else ""
    if cooler.choice is not None:
        price = cooler.options["price"].iloc[0]
        best = "the cheapest that is enough" if not np.isnan(price) else "the first that is enough"
        warm = cooler.choice_oil_temperature_C
        holds = "" if warm is None else f"; the oil then stays at {sig(warm)} °C"
        return f"{need}{existing}. Of the coolers listed, {cooler.choice} is {best}{holds}."
    if len(cooler.options):
        return f"{need}{existing}. No listed cooler is enough: mend the sources of heat first, or list a larger one."
    return f"{need}{existing}. No coolers are listed to choose from."
