"""Lines: friction, bends, drop and slope, lift, velocities."""

from typing import Any

import numpy as np
import pytest
import scipy.constants as sc
from fluids import Churchill_1977, Hooper2K, friction_laminar, one_phase_dP
from fluids.fittings import entrance_sharp
from fluids.friction import Blasius, Colebrook, oregon_fd_smooth, oregon_Res, von_Karman
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal

from heataudit.physics import lines

L_MIN = 1e-3 / 60
BARE: dict[str, Any] = {"roughness": 0.0, "bends_k1": 0.0, "bends_kinf": 0.0, "minor_k": 0.0, "parallel": 1.0}
FITTED: dict[str, Any] = {"roughness": 1e-5, "bends_k1": 1600.0, "bends_kinf": 0.9, "minor_k": 1.0, "parallel": 1.0}


def line_drop(flow: Any, *, viscosity: Any, density: Any, **shape: Any) -> tuple[Any, Any]:
    """Drop and slope of a line by the names of its numbers."""
    return lines.line_drop(flow, lines.LineShape(**shape), viscosity, density)


def bare_drop(flow: float, **other: Any) -> float:
    return float(line_drop(flow, **{**BARE, **other})[0])


def library_drop(flow: float, diameter: float, length: float, viscosity: float, density: float, roughness: float = 0.0
                 ) -> float:  # fmt: skip
    """fluids.one_phase_dP: Hagen and Poiseuille in laminar flow, Colebrook's equation in turbulent flow."""
    return float(one_phase_dP(m=flow * density, rho=density, mu=density * viscosity, D=diameter, roughness=roughness,
                              L=length))  # fmt: skip


REYNOLDS, ROUGHNESS = np.meshgrid(np.geomspace(1, 1e8, 81), [0.0, 1e-5, 1e-4, 1e-3, 1e-2, 5e-2])


def test_friction_is_churchills() -> None:
    # fluids.friction.Churchill_1977, called here
    library = np.vectorize(Churchill_1977)(REYNOLDS, ROUGHNESS)
    assert_allclose(lines.churchill_friction(REYNOLDS, ROUGHNESS), library, rtol=2e-14)


def test_friction_is_near_colebrooks_in_turbulent_flow() -> None:
    reynolds, roughness = REYNOLDS[REYNOLDS >= 4000], ROUGHNESS[REYNOLDS >= 4000]
    # fluids.friction.Colebrook, called here; the two publications differ by up to 3 % at Re 4000 and rough walls
    expected = [Colebrook(re, rough) for re, rough in zip(reynolds.tolist(), roughness.tolist(), strict=True)]
    assert_allclose(lines.churchill_friction(reynolds, roughness), expected, rtol=0.035)


def test_friction_is_near_blasius_in_smooth_pipes() -> None:
    reynolds = np.geomspace(1e4, 1e5, 20)
    # fluids.friction.Blasius, called here: within 3 % of Colebrook's equation, which leaves 1 % to Churchill's
    assert_allclose(lines.churchill_friction(reynolds, 0.0), [Blasius(re) for re in reynolds], rtol=0.03)


def test_friction_is_near_the_measured() -> None:
    # smooth pipes measured at Oregon (Swanson 2002, McKeon 2004), carried by fluids.friction
    measured = np.array(oregon_Res) > 4000
    reynolds = np.array(oregon_Res)[measured]
    assert_allclose(lines.churchill_friction(reynolds, 0.0), np.array(oregon_fd_smooth)[measured], rtol=0.05)


def test_laminar_friction_is_exact() -> None:
    reynolds = np.array([1e-3, 1.0, 100, 700])
    # 64/Re, exact (Hagen and Poiseuille); fluids.friction.friction_laminar, called here
    assert_allclose(lines.churchill_friction(reynolds, 0.01), [friction_laminar(re) for re in reynolds], rtol=1e-15)
    assert_array_equal(lines.friction_times_reynolds(np.array([0.0, 1e-300, 1.0]), 0.01), 64.0)
    assert lines.churchill_friction(0.0, 0.0) == np.inf


def test_friction_between_laminar_and_turbulent() -> None:
    # Churchill 1977, evaluated apart, smooth: Re 2000, 2300, 2500, 3000, 3500
    expected = [0.03204331743, 0.0308400984, 0.03514509163, 0.04297465632, 0.04226232424]
    assert_allclose(lines.churchill_friction(np.array([2000.0, 2300, 2500, 3000, 3500]), 0.0), expected, rtol=1e-9)


def test_fully_rough_friction() -> None:
    # fluids.friction.von_Karman, called here; Churchill's own rough limit is 0.05 % off
    assert lines.churchill_friction(1e10, 1e-3) == pytest.approx(von_Karman(1e-3), rel=1e-3)


def test_friction_far_outside_its_range_makes_no_noise() -> None:
    assert np.all(np.isfinite(lines.friction_times_reynolds(np.array([0.0, 5e-324, 1e15, 1e30, np.inf]), 0.05)))


# flow [L/min], diameter [mm], length [m], viscosity [mm²/s], density
@pytest.mark.parametrize(
    ("flow", "diameter", "length", "viscosity", "density", "expected"),
    [
        (40, 12.5, 2, 46, 870, 89050.3982),  # Hagen-Poiseuille 128 mu L Q/(pi D^4), exact; Re 1476
        (20, 10, 1, 400, 880, 478059.0077),  # the same; Re 106
        (100, 38, 1.5, 150, 875, 6411.579494),  # the same; Re 372
    ],
)
def test_laminar_drop(
    flow: float, diameter: float, length: float, viscosity: float, density: float, expected: float
) -> None:
    drop = bare_drop(
        flow * L_MIN, diameter=diameter / 1e3, length=length, viscosity=viscosity * 1e-6, density=density
    )  # fmt: skip
    # Churchill's formula joins the branches smoothly: 3e-6 above 64/Re at Re 1476, nothing at the others
    assert drop == pytest.approx(expected, rel=1e-5)


@pytest.mark.parametrize(
    ("flow", "diameter", "length", "viscosity", "density", "roughness"),
    [(60, 12, 5, 20, 855, 1.5), (150, 19, 3, 30, 860, 0), (200, 25, 10, 15, 850, 30)],
)
def test_turbulent_drop(
    flow: float, diameter: float, length: float, viscosity: float, density: float, roughness: float
) -> None:
    line: dict[str, float] = {
        "diameter": diameter / 1e3, "length": length, "viscosity": viscosity * 1e-6, "density": density,
        "roughness": roughness * 1e-6,
    }  # fmt: skip
    # fluids.one_phase_dP with Colebrook's equation, called here; Churchill's formula is within 3 %
    assert bare_drop(flow * L_MIN, **line) == pytest.approx(library_drop(flow * L_MIN, **line), rel=0.03)


def test_esposito_laminar_oil_line() -> None:
    # Esposito, Fluid Power with Applications, Example 4-3: 10 ft/s, 1 in, 100 ft, 100 cSt, SG 0.9: 60 psi
    diameter = sc.inch
    flow = 10 * sc.foot * np.pi / 4 * diameter**2
    drop = bare_drop(flow, diameter=diameter, length=100 * sc.foot, viscosity=100e-6, density=900.0)
    assert drop / sc.psi == pytest.approx(60.150, rel=1e-4)
    assert lines.reynolds_number(10 * sc.foot, diameter, 100e-6) == pytest.approx(774, abs=1)


def test_esposito_laminar_oil_line_in_si() -> None:
    # Esposito, Example 4-4: 5 m/s, 50 mm, 50 m, 0.001 m²/s, g = 9.80: Re 250 and 326 m of oil
    flow = 5 * np.pi / 4 * 0.05**2
    drop = bare_drop(flow, diameter=0.05, length=50.0, viscosity=1e-3, density=900.0)
    assert drop / (900 * 9.80) == pytest.approx(326, rel=0.003)


def test_esposito_moody_reading() -> None:
    # Esposito, Example 4-5: Re 6192, relative roughness 0.0018: the chart gives 0.036. Colebrook's equation gives
    # 0.03734 (a chart is read to 4 %), Churchill's formula may differ from it by 2 % here.
    assert lines.churchill_friction(6192.0, 0.0018) == pytest.approx(0.036, rel=0.06)


def test_white_oil_in_rough_pipe() -> None:
    # White, Fluid Mechanics, Example 6.7: 0.2 m³/s, 0.2 m, 500 m, 1e-5 m²/s, 0.26 mm: 117 m (from memory)
    drop = bare_drop(0.2, diameter=0.2, length=500.0, viscosity=1e-5, density=900.0, roughness=0.26e-3)
    assert drop / (900 * 9.81) == pytest.approx(117, rel=0.02)


def test_esposito_circuit_from_pump_to_motor() -> None:
    # Esposito, Example 4-9: 5 hp to 30 gpm, SG 0.9 (62.4 lb/ft³), 1 in pipe, 21 ft, one elbow K = 0.9, 20 ft lift,
    # 100 cSt; tank level to motor inlet: 260 psi. The velocity head is no loss.
    flow, diameter = 30 * sc.gallon / 60, sc.inch
    density = 0.9 * 62.4 * sc.lb / sc.foot**3
    drop = bare_drop(flow, diameter=diameter, length=21 * sc.foot, viscosity=100e-6, density=density, minor_k=0.9)
    head = density * float(lines.velocity(flow, diameter)) ** 2 / 2
    inlet = 5 * sc.hp / flow - drop - head - float(lines.lift_pressure(density, 20 * sc.foot))
    assert inlet / sc.psi == pytest.approx(260, rel=0.01)


def test_velocity_and_reynolds_constants() -> None:
    # continuity, exact: v [m/s] = 21.2206590789 Q [L/min] / d² [mm²], Re = 21220.6590789 Q / (d nu [mm²/s])
    speed = lines.velocity(L_MIN, 1e-3)
    assert speed == pytest.approx(21.220659079, rel=1e-9)
    assert lines.reynolds_number(speed, 1e-3, 1e-6) == pytest.approx(21220.659079, rel=1e-9)
    # continuity, exact: 100 L/min at 3 m/s need 26.59615203 mm
    assert lines.velocity(100 * L_MIN, 26.59615203e-3) == pytest.approx(3.0, rel=1e-8)


# Hooper 1981, exact: bend type, diameter [in], Re, K
@pytest.mark.parametrize(
    ("bend_type", "inches", "reynolds", "expected"),
    [("elbow", 0.5, 100, 9.2), ("elbow", 0.5, 1000, 2.0), ("elbow", 1, 5000, 0.96), ("swept", 1, 2000, 0.8),
     ("elbow", 12.5 / 25.4, 1000, 2.0128)],
)  # fmt: skip
def test_bends(bend_type: str, inches: float, reynolds: float, expected: float) -> None:
    k1, kinf = lines.bend_coefficients(bend_type, inches * sc.inch)
    assert lines.loss_coefficient(reynolds, k1, kinf, 0.0) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("bend_type", "name"),
    [("swept", "Elbow, 90°, Long-radius (R/D = 1.5), All types"), ("elbow", "Elbow, 90°, Standard (R/D = 1), Screwed"),
     ("drilled", "Elbow, 90°, Mitered (R/D = 1.5), 1 weld (90° angle)")],
)  # fmt: skip
def test_bends_are_the_librarys(bend_type: str, name: str) -> None:
    k1, kinf = lines.bend_coefficients(bend_type, 19e-3)
    # fluids.fittings.Hooper2K, called here; it takes the diameter in inches
    expected = Hooper2K(Di=19e-3 / sc.inch, Re=850.0, name=name)
    assert lines.loss_coefficient(850.0, k1, kinf, 0.0) == pytest.approx(expected, rel=1e-12)


def test_the_loss_of_an_end_is_a_sharp_entrance() -> None:
    # Crane TP-410: 0.5; fluids.fittings.entrance_sharp, called here
    assert entrance_sharp(method="Crane") == lines.END_LOSS


def test_a_loss_coefficient_costs_dynamic_pressure() -> None:
    # K rho v²/2, exact: 0.5 x 870 x 4²/2 = 3480 Pa
    flow = 4.0 * np.pi / 4 * 0.02**2
    drop = bare_drop(flow, diameter=0.02, length=0.0, viscosity=46e-6, density=870.0, minor_k=0.5)
    assert drop == pytest.approx(3480.0, rel=1e-12)


def test_bends_and_ends_add_to_the_pipe() -> None:
    flow, diameter, viscosity, density = 60 * L_MIN, 16e-3, 40e-6, 860.0
    k1, kinf = lines.bend_coefficients("swept", diameter)
    both = bare_drop(flow, diameter=diameter, length=3.0, viscosity=viscosity, density=density, bends_k1=2 * k1,
                     bends_kinf=2 * kinf, minor_k=1.0)  # fmt: skip
    reynolds = float(lines.reynolds_number(lines.velocity(flow, diameter), diameter, viscosity))
    # fluids.fittings.Hooper2K (diameter in inches) and fluids.friction.Churchill_1977, called here
    bends = 2 * Hooper2K(Di=diameter / sc.inch, Re=reynolds, K1=800.0, Kinfty=0.20) + 1.0
    pipe = Churchill_1977(reynolds, 0.0) * 3.0 / diameter
    assert both == pytest.approx((pipe + bends) * density * float(lines.velocity(flow, diameter)) ** 2 / 2, rel=1e-12)


def test_at_rest_drop_is_nil_and_slope_is_laminar() -> None:
    diameter, viscosity, density = 0.02, 46e-6, 870.0
    drop, slope = line_drop(0.0, diameter=diameter, length=2.0, viscosity=viscosity, density=density, **FITTED)
    # exact: (64 L/D + K1) rho nu v / (2 D), v = Q / (pi D² / 4)
    expected = (64 * 2.0 / diameter + 1600) * density * viscosity / (2 * diameter) / (np.pi / 4 * diameter**2)
    assert drop == 0.0
    assert slope == pytest.approx(expected, rel=1e-14)


def test_slope_is_the_derivative() -> None:
    reynolds, roughness = np.meshgrid(np.geomspace(1e-3, 1e6, 1801), [0.0, 1e-5, 1e-4])
    diameter, viscosity = 0.02, 46e-6
    flow = reynolds * viscosity * np.pi / 4 * diameter
    other = {**FITTED, "roughness": roughness, "diameter": diameter, "viscosity": viscosity, "length": 4.0,
             "density": 870.0}  # fmt: skip

    def drop(factor: float) -> np.ndarray:
        return line_drop(flow * factor, **other)[0]

    h = 1e-4
    # finite difference of fourth order: its own error is below 1e-9 here
    difference = (8 * (drop(1 + h) - drop(1 - h)) - drop(1 + 2 * h) + drop(1 - 2 * h)) / (12 * h * flow)
    assert_allclose(line_drop(flow, **other)[1], difference, rtol=1e-8)


def test_equal_lines_share_the_flow() -> None:
    line = {**FITTED, "diameter": 0.02, "length": 4.0, "viscosity": 46e-6, "density": 870.0}
    one_drop, one_slope = line_drop(1e-3, **line)
    drop, slope = line_drop(3e-3, **{**line, "parallel": 3.0})
    assert drop == pytest.approx(float(one_drop), rel=1e-14)  # exact: each carries a third
    assert slope == pytest.approx(float(one_slope) / 3, rel=1e-14)


def test_a_batch_is_its_lines_one_by_one() -> None:
    random = np.random.default_rng(20250301)
    shape = (7, 3000)  # more than one block
    flow = random.normal(0, 2e-3, shape)
    diameter = random.uniform(6e-3, 40e-3, (7, 1))
    viscosity = random.uniform(10e-6, 400e-6, (1, 3000))
    other = {"length": 2.0, "density": 860.0, **FITTED}
    drop, slope = line_drop(flow, diameter=diameter, viscosity=viscosity, **other)
    assert drop.shape == slope.shape == shape
    for row, column in [(0, 0), (3, 1234), (6, 2999)]:
        one = line_drop(
            flow[row, column], diameter=diameter[row, 0], viscosity=viscosity[0, column], **other
        )  # fmt: skip
        assert one == (drop[row, column], slope[row, column])


def test_an_empty_batch_gives_an_empty_answer() -> None:
    drop, slope = line_drop(np.zeros((0, 5)), diameter=0.02, length=1.0, viscosity=46e-6, density=870.0, **BARE)
    assert drop.shape == slope.shape == (0, 5)


FLOWS = st.floats(1e-9, 0.1)
LINES = st.fixed_dictionaries({
    "diameter": st.floats(4e-3, 0.1), "length": st.floats(0.01, 50), "roughness": st.floats(0, 5e-5),
    "bends_k1": st.floats(0, 8000), "bends_kinf": st.floats(0, 10), "minor_k": st.floats(0, 10),
    "parallel": st.integers(1, 4), "viscosity": st.floats(2e-6, 5e-3), "density": st.floats(780, 950),
})  # fmt: skip


@given(flow=FLOWS, line=LINES)
def test_drop_is_odd(flow: float, line: dict[str, float]) -> None:
    forward, backward = line_drop(flow, **line), line_drop(-flow, **line)
    assert forward[0] == -backward[0]
    assert forward[1] == backward[1]


@given(flow=FLOWS, more=st.floats(1.001, 3), line=LINES)
def test_drop_rises_with_flow(flow: float, more: float, line: dict[str, float]) -> None:
    drop, slope = line_drop(flow, **line)
    assert line_drop(flow * more, **line)[0] > drop
    assert slope > 0
    # from laminar to fully rough the drop grows at least as the flow
    assert slope * flow >= drop * (1 - 1e-12)


def test_lift() -> None:
    # rho g h, exact with g = 9.80665 m/s² (scipy.constants.g, called here)
    assert lines.lift_pressure(870.0, 2.5) == pytest.approx(870 * sc.g * 2.5, rel=1e-15)


def test_guideline_velocities() -> None:
    # common practice: suction 1, drain 2, return 3, pressure 5 m/s, 6 m/s above 210 bar
    assert [float(lines.guideline_velocity(service, 250e5)) for service in ("suction", "drain", "return")] == [1, 2, 3]
    assert_array_equal(lines.guideline_velocity("pressure", np.array([0, 210e5, 211e5])), [5, 5, 6])
