"""Nominal sizes."""

from __future__ import annotations

import pytest

from heataudit.machine.sizes import inside_diameter, path_flow


@pytest.mark.parametrize(
    ("size", "millimetres"),
    [
        ("-8", 12.7), ("- 16", 25.4), ("-8.0", 12.7),  # exact: sixteenths of an inch
        ("DN20", 19.05), ("dn 25", 25.4),  # exact: the dash sizes 12 and 16 that they stand for
        ("DN60", 60.0),  # no dash size: n mm
        ("25x3", 19.0), ("30 x 2,5", 25.0), ("25×3", 19.0), ("25X3", 19.0),  # exact: outside less two walls
    ],
)  # fmt: skip
def test_inside_diameters(size: str, millimetres: float) -> None:
    assert inside_diameter(size) * 1e3 == pytest.approx(millimetres, rel=1e-12)


@pytest.mark.parametrize("size", ["8", "20 mm", "25x", "DN", "NG10", "25x13"])
def test_other_texts_are_no_sizes(size: str) -> None:
    with pytest.raises(ValueError, match=r"it must be a dash size|it leaves no bore"):
        inside_diameter(size)


@pytest.mark.parametrize(("size", "flow_L_min"), [("NG6", 60), ("ng 10", 120), ("16", 300), ("NG25", 650)])
def test_flows_of_directional_valves(size: str, flow_L_min: float) -> None:
    # the workbook's own table of sizes
    assert path_flow(size) * 60e3 == pytest.approx(flow_L_min, rel=1e-12)


def test_an_unknown_size_of_a_directional_valve() -> None:
    with pytest.raises(ValueError, match="one of NG6, NG10, NG16, NG25"):
        path_flow("NG32")
