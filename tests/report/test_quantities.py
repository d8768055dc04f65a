"""Factors are those of the units' definitions (NIST SP 811): psi 6894.757 Pa, US gallon 3.785411784 L, inch 25.4 mm."""

from __future__ import annotations

import pytest

from heataudit.report.quantities import convert, number_format, quantity, restate, unit_of
from heataudit.report.safe import printable, unformula


def test_sentences_change_their_units_and_leave_names_alone():
    text = "7.98 m/s in the line Feed 2 m, where 5 m/s is the guideline; it drops 3.52 bar at 60 °C, 12 mm would do."
    assert restate(text, "US", ["Feed 2 m"]) == (
        "26.2 ft/s in the line Feed 2 m, where 16.4 ft/s is the guideline; it drops 51.1 psi at 140 °F, "
        "0.472 in would do."
    )
    assert restate(text, "SI") == text


def test_units_without_another_name_stay():
    assert restate("7.8 mm²/s, 40 %, 3 s, 215 bar: 29.8 kW", "US") == "7.8 mm²/s, 40 %, 3 s, 3120 psi: 40 hp"


def test_a_difference_of_temperature_has_no_zero():
    assert convert(10.0, "K", "US")[0] == pytest.approx(18.0)
    assert convert(10.0, "°C", "US")[0] == pytest.approx(50.0)


@pytest.mark.parametrize(("value", "shown"), [(0.0, "0 kW"), (1234.5, "1,230 kW"), (0.012345, "0.0123 kW")])
def test_three_figures(value, shown):
    assert quantity(value, "kW", "SI") == shown


@pytest.mark.parametrize(("value", "shown"), [(99.96, "#,##0"), (9.996, "0.0"), (1e-7, "0.0E+0"), (-12.3, "0.0")])
def test_number_formats_show_three_figures(value, shown):
    assert number_format(value) == shown


def test_units_are_the_ends_of_names():
    assert [unit_of(key) for key in ("required_kW_K", "speed_mm_s", "drop_bar", "tank_coefficient_W_m2K", "kind")] == [
        "kW/K", "mm/s", "bar", "W/(m²·K)", "",
    ]  # fmt: skip


@pytest.mark.parametrize("text", ["=1+1", "+A", "-8", "@SUM(A1)", "  =1", "\t=1"])
def test_formulas_are_disarmed(text):
    assert unformula(text) == f"'{text}"


def test_control_characters_go():
    assert printable("a\x00b\n c\x1b[31m") == "a b c [31m"
