"""Nominal sizes."""

from __future__ import annotations

import pytest

from heataudit.machine.sizes import DASH_OF_DN, DASH_SIZES, TUBE_WALLS, inside_diameter, larger_sizes, path_flow


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


# ISO 1307:2008, hoses built on a mandrel, after a reprint of the table: dash size, least and greatest inside
# diameter [mm]
ISO_1307 = {3: (4.6, 5.4), 4: (6.2, 7.0), 5: (7.7, 8.5), 6: (9.3, 10.1), 8: (12.3, 13.5), 10: (15.5, 16.7),
            12: (18.6, 19.8), 16: (25.0, 26.4), 20: (31.4, 33.0), 24: (37.7, 39.3), 32: (50.4, 52.0)}  # fmt: skip


@pytest.mark.parametrize(("dash", "limits"), ISO_1307.items())
def test_dash_sizes_lie_within_the_hose_standard(dash: int, limits: tuple[float, float]) -> None:
    assert limits[0] <= inside_diameter(f"-{dash}") * 1e3 <= limits[1]


@pytest.mark.parametrize("size", ["-0", "DN0", "10x5", "10x6"])
def test_a_size_without_a_bore_is_refused(size: str) -> None:
    with pytest.raises(ValueError, match="leaves no bore"):
        inside_diameter(size)


ALL_SIZES = [
    *(f"-{dash}" for dash in DASH_SIZES), *(f"DN{nominal}" for nominal in DASH_OF_DN),
    *(f"{outside}x{wall:g}" for outside, walls in TUBE_WALLS.items() for wall in walls),
]  # fmt: skip


@pytest.mark.parametrize("size", ALL_SIZES)
def test_larger_sizes_climb(size: str) -> None:
    bores = [inside_diameter(size), *(inside_diameter(larger) for larger in larger_sizes(size))]
    assert bores[0] < min(bores[1:], default=1.0)


def test_larger_sizes_stay_in_the_series() -> None:
    assert larger_sizes("-20") == ("-24", "-32")  # the dash series
    assert larger_sizes("DN32") == ("DN40", "DN50")  # the DN series
    assert larger_sizes("-32") == larger_sizes("DN50") == ()


def test_a_larger_tube_bears_no_less_pressure() -> None:
    for size in ("12x1.5", "25x3", "30x4"):
        outside, wall = map(float, size.split("x"))
        steps = [tuple(map(float, larger.split("x"))) for larger in larger_sizes(size)]
        assert steps
        # thin-walled tube (Barlow): the pressure goes as wall over outside diameter
        assert all(thickness / larger >= wall / outside for larger, thickness in steps)
