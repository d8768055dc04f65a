"""Units: factors, spellings, display."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from heataudit.machine.units import UnknownUnit, shown, unit, units_of

DIMENSIONS = [
    "share", "length", "area", "volume", "mass", "time", "pressure", "inverse pressure", "flow", "displacement",
    "force", "torque", "power", "energy", "temperature", "temperature difference", "temperature rate", "viscosity",
    "density", "speed", "rotational speed", "specific heat", "conductance", "heat transfer coefficient",
    "specific fuel consumption",
]  # fmt: skip
EVERY_UNIT = [known for dimension in DIMENSIONS for known in units_of(dimension).values()]


@pytest.mark.parametrize(
    ("text", "dimension", "value", "expected"),
    [
        # exact by definition: inch 0.0254 m, pound 0.45359237 kg, US gallon 231 in³, g 9.80665 m/s²
        ("in", "length", 1.0, 0.0254),
        ("ft", "length", 1.0, 0.3048),
        ("psi", "pressure", 1.0, 0.45359237 * 9.80665 / 0.0254**2),
        ("gpm", "flow", 1.0, 231 * 0.0254**3 / 60),
        ("gal", "volume", 1.0, 231 * 0.0254**3),
        ("in³/rev", "displacement", 1.0, 0.0254**3),
        ("lbf", "force", 1.0, 0.45359237 * 9.80665),
        ("lbf·ft", "torque", 1.0, 0.45359237 * 9.80665 * 0.3048),
        ("hp", "power", 1.0, 550 * 0.3048 * 0.45359237 * 9.80665),
        ("lb", "mass", 1.0, 0.45359237),
        ("L/min", "flow", 60.0, 1e-3),
        ("m³/h", "flow", 3600.0, 1.0),
        ("rpm", "rotational speed", 1500.0, 25.0),
        ("%", "share", 92.0, 0.92),
        ("cSt", "viscosity", 46.0, 46e-6),
        ("1/GPa", "inverse pressure", 20.0, 20e-9),
        ("°C", "temperature", 60.0, 333.15),
        ("°F", "temperature", 140.0, 333.15),  # exact: (140 - 32) / 1.8 = 60 °C
        ("°F", "temperature difference", 18.0, 10.0),
        ("Btu/(h·ft²·°F)", "heat transfer coefficient", 1.0, 5.678263341),  # exact definitions, international Btu
        ("g/kWh", "specific fuel consumption", 230.0, 0.230 / 3.6e6),
    ],
)
def test_factors_follow_from_definitions(text: str, dimension: str, value: float, expected: float) -> None:
    assert unit(text, dimension).to_si(value) == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize(
    ("text", "dimension", "name"),
    [
        ("m3", "volume", "m³"), ("mm2/s", "viscosity", "mm²/s"), ("in3/rev", "displacement", "in³/rev"),
        ("Nm", "torque", "N·m"), ("N*m", "torque", "N·m"), ("N m", "torque", "N·m"), ("N∙m", "torque", "N·m"),
        ("l/min", "flow", "L/min"), ("L / MIN", "flow", "L/min"), ("degC", "temperature", "°C"),
        ("deg F", "temperature", "°F"), ("℃", "temperature", "°C"), ("C", "temperature", "°C"),
        ("BAR", "pressure", "bar"), ("Mpa", "pressure", "MPa"), ("mpa", "pressure", "MPa"), ("PSI", "pressure", "psi"),
        ("min⁻¹", "rotational speed", "rpm"), ("kJ/kg K", "specific heat", "kJ/(kg·K)"),
        ("W/m²K", "heat transfer coefficient", "W/(m²·K)"), ("ft-lb", "torque", "lbf·ft"), ("", "number", "-"),
        ("mm^2/s", "viscosity", "mm²/s"), ("kW/°C", "conductance", "kW/K"), ("USgpm", "flow", "gpm"),
    ],
)  # fmt: skip
def test_spellings(text: str, dimension: str, name: str) -> None:
    assert unit(text, dimension).name == name


@pytest.mark.parametrize(
    ("text", "dimension", "message"),
    [
        ("mPa", "pressure", '"mPa" is not a unit of pressure; use bar, MPa, kPa, psi, GPa or Pa'),
        ("bar", "length", '"bar" is not a unit of length; use mm, cm, m, in or ft'),
        ("Mm", "length", '"Mm" is not a unit of length; use mm, cm, m, in or ft'),
        ("furlong", "revolutions", '"furlong" is not a unit of revolutions; use rev'),
    ],
)
def test_what_is_no_unit_is_refused(text: str, dimension: str, message: str) -> None:
    with pytest.raises(UnknownUnit) as caught:
        unit(text, dimension)
    assert str(caught.value) == message


@given(st.sampled_from(EVERY_UNIT), st.floats(-1e6, 1e6))
def test_there_and_back(known: object, value: float) -> None:
    back = known.from_si(known.to_si(value))  # type: ignore[attr-defined]
    assert back == pytest.approx(value, rel=1e-12, abs=1e-9)  # rounding of the shift of temperature scales


@given(st.sampled_from(EVERY_UNIT))
def test_arrays_and_numbers_convert_alike(known: object) -> None:
    values = np.array([-3.0, 0.0, 250.0])
    assert known.to_si(values).tolist() == [known.to_si(float(v)) for v in values]  # type: ignore[attr-defined]


@given(st.sampled_from(["mm", "bar", "L/min", "kW", "°C", "K", "kW/K", "m/s"]), st.floats(-100, 1000))
def test_the_us_report_shows_the_same_quantity(name: str, value: float) -> None:
    dimension = {"°C": "temperature", "K": "temperature difference", "kW/K": "conductance", "m/s": "speed"}.get(
        name, {"mm": "length", "bar": "pressure", "L/min": "flow", "kW": "power"}.get(name, "")
    )
    us = shown(name, "US")
    assert unit(us.unit, dimension).to_si(value * us.factor + us.shift) == pytest.approx(
        unit(name, dimension).to_si(value), rel=1e-12, abs=1e-9
    )


def test_units_that_both_systems_share_stay() -> None:
    assert (shown("rpm", "US").unit, shown("rpm", "US").factor, shown("rpm", "US").shift) == ("rpm", 1.0, 0.0)
