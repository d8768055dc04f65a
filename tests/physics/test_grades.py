"""Viscosity classes and viscosity index."""

import numpy as np
import pytest
from chemicals.viscosity import VI_Hs, VI_Ls, VI_nus
from chemicals.viscosity import viscosity_index as library_index
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose, assert_array_equal

from heataudit.physics import grades
from heataudit.physics import viscosity_index_table as table

MM2_S = 1e-6


# ISO 3448:1992, table of classes: grade, least and greatest viscosity at 40 °C [mm²/s].
@pytest.mark.parametrize(
    ("grade", "least", "greatest"),
    [(15, 13.5, 16.5), (22, 19.8, 24.2), (32, 28.8, 35.2), (46, 41.4, 50.6), (68, 61.2, 74.8), (100, 90, 110),
     (150, 135, 165)],
)  # fmt: skip
def test_a_class_reaches_to_its_limits_and_no_further(grade: int, least: float, greatest: float) -> None:
    assert grades.class_midpoint(grade) == pytest.approx(grade * MM2_S)
    assert grades.viscosity_class(grade * MM2_S) == grade
    # that the limits are included: from memory
    assert grades.viscosity_class(least * MM2_S) == grade
    assert grades.viscosity_class(greatest * MM2_S) == grade
    assert grades.viscosity_class((least - 0.01) * MM2_S) != grade
    assert grades.viscosity_class((greatest + 0.01) * MM2_S) != grade


def test_between_two_classes_there_is_none() -> None:
    # ISO 3448: VG 32 ends at 35.2 mm²/s, VG 46 begins at 41.4 mm²/s
    assert grades.viscosity_class(38 * MM2_S) is None


def test_low_grades_have_their_odd_midpoints() -> None:
    # ISO 3448:1992, table of classes
    assert [grades.class_midpoint(grade) / MM2_S for grade in (2, 3, 5, 7)] == pytest.approx([2.2, 3.2, 4.6, 6.8])


def test_an_unknown_grade_is_refused() -> None:
    with pytest.raises(ValueError, match="ISO VG 40 is not a viscosity grade of ISO 3448; they are 2, 3, 5, 7, 10"):
        grades.class_midpoint(40)


def test_the_table_of_reference_oils_is_the_standards() -> None:
    # ASTM D2270, table 1, as chemicals.viscosity carries it
    assert_allclose(table.Y, VI_nus, rtol=1e-14)
    assert_array_equal(table.L, VI_Ls)
    assert_array_equal(table.H, VI_Hs)


# viscosity at 40 °C and 100 °C [mm²/s], viscosity index, tolerance
@pytest.mark.parametrize(
    ("nu40", "nu100", "index", "tolerance"),
    [
        (73.30, 8.86, 92.43, 0.01),  # ASTM D2270, 5.1.4 (1993): 92.43
        (22.83, 5.05, 156.37, 0.1),  # ASTM D2270, 6.1.4(1) (1993): 156.37, with H and N rounded
        (53.47, 7.80, 111, 0.5),  # ASTM D2270, 6.1.4(2) (1993): rounds to 111 (nu100 and answer from memory)
        (1000, 80, 157.6533, 1e-4),  # ASTM D2270, 5.1.2 polynomials and 6.1, evaluated apart
    ],
)
def test_viscosity_index_of_the_standards_examples(nu40: float, nu100: float, index: float, tolerance: float) -> None:
    assert grades.viscosity_index(nu40 * MM2_S, nu100 * MM2_S) == pytest.approx(index, abs=tolerance)


def test_viscosity_index_is_the_librarys_over_the_whole_range() -> None:
    nu100, share = np.meshgrid(np.geomspace(2.01, 300, 60), np.linspace(3, 80, 20))
    nu40 = nu100 * share
    expected = [library_index(a * MM2_S, b * MM2_S) for a, b in zip(nu40.ravel(), nu100.ravel(), strict=True)]
    # chemicals.viscosity.viscosity_index, called here
    assert_allclose(grades.viscosity_index(nu40 * MM2_S, nu100 * MM2_S).ravel(), expected, rtol=1e-9, atol=1e-9)


def test_both_procedures_meet_at_100() -> None:
    # ASTM D2270: at nu40 = H both give 100; H(8.0) = 59.60 from table 1
    assert grades.viscosity_index(59.60 * MM2_S, 8.0 * MM2_S) == pytest.approx(100, abs=1e-9)
    assert grades.viscosity_index(59.60001 * MM2_S, 8.0 * MM2_S) == pytest.approx(100, abs=1e-3)


def test_no_viscosity_index_below_2_mm2_s() -> None:
    # ASTM D2270: not defined below 2 mm²/s at 100 °C
    assert np.isnan(grades.viscosity_index(5 * MM2_S, 1.99 * MM2_S))
    assert np.isnan(grades.viscosity_100_from_index(5 * MM2_S, 100))


def test_the_inverse_of_viscosity_index_closes_with_the_library() -> None:
    nu40, index = np.meshgrid([15.0, 22, 32, 46, 68, 100, 150, 460, 1500], [0.0, 50, 95, 100, 110, 150, 200])
    nu100 = grades.viscosity_100_from_index(nu40 * MM2_S, index)
    # chemicals.viscosity.viscosity_index, called here
    back = [library_index(a * MM2_S, b) for a, b in zip(nu40.ravel(), nu100.ravel(), strict=True)]
    assert_allclose(back, index.ravel(), atol=1e-6)


@settings(deadline=None)  # the first call imports a part of scipy
@given(grade=st.sampled_from([15, 22, 32, 46, 68, 100, 150, 220, 320]), index=st.floats(0, 250))
def test_index_and_its_inverse_close(grade: int, index: float) -> None:
    nu100 = grades.viscosity_100_from_index(grade * MM2_S, index)
    assert grades.viscosity_index(grade * MM2_S, nu100) == pytest.approx(index, abs=1e-6)
