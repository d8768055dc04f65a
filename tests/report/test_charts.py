"""Every chart in odd cases: no text overlaps another or is cut off."""

from __future__ import annotations

from dataclasses import replace
from importlib import import_module

import numpy as np
import pandas as pd
import pytest
from PIL import Image

from heataudit.report import charts
from heataudit.report.charts import CHARTS, chart_files, write_charts
from heataudit.report.charts.boxes import clipped, overlaps, text_boxes
from heataudit.report.charts.energy_flow import streams
from heataudit.report.charts.losses_ranked import MOST, ranked
from heataudit.report.charts.style import chart_style, spread, text_size, wrap
from tests.report.fixture import audit

LONG = "Rather long name of a station on the shop floor, "


def without_loss():
    made = audit()
    zero = made.losses.assign(heat_kJ=0.0, share=0.0, annual_kWh=0.0)
    phases = made.phases.assign(**{key: 0.0 for key in made.phases if key.endswith("_kW")})
    cycle = replace(made.cycle, shaft_energy_kJ=0.0, useful_energy_kJ=0.0, heat_energy_kJ=0.0, efficiency=None)
    groups = dict.fromkeys(made.loss_groups, 0.0)
    return replace(
        made, losses=zero, phases=phases, cycle=cycle, loss_groups=groups, rectangles=made.rectangles.iloc[:0],
        lines=made.lines.iloc[:0],
    )  # fmt: skip


def without_balance():
    made = audit(cooler_kW_K=0.03)
    none = {"equilibrium_C": None, "equilibrium_without_cooler_C": None, "warm_up_min": None, "ripple_K": None}
    return replace(made, thermal=replace(made.thermal, **none))


def uncoolable():
    made = audit()
    return replace(made, cooler=replace(made.cooler, required_kW_K=np.inf, choice=None, oil_flow_L_min=None))


CASES = {
    "usual": audit, "one phase": lambda: audit(1), "forty phases": lambda: audit(40),
    "hundred lines": lambda: audit(6, 100), "long names": lambda: audit(12, 4, LONG),
    "odd names": lambda: audit(6, 4, "$x^2 \\frac{ <&> 油 "), "thousands of phases": lambda: audit(4000),
    "with a cooler": lambda: audit(cooler_kW_K=0.08), "with a large cooler": lambda: audit(cooler_kW_K=2.0),
    "no loss": without_loss, "no balance": without_balance,
    "uncoolable": uncoolable,
}  # fmt: skip


@pytest.fixture(scope="module", params=[(case, "SI") for case in CASES] + [("usual", "US"), ("long names", "US")],
                ids=" ".join)  # fmt: skip
def shown(request):
    """An audit and the units of its report."""
    case, system = request.param
    return CASES[case](), system


@pytest.mark.parametrize("name", CHARTS)
def test_no_text_overlaps_another_or_is_cut_off(shown, name):
    made, system = shown
    with chart_style():
        figure = import_module(f"heataudit.report.charts.{name.replace('-', '_')}").draw(made, system)
        if figure is not None:
            assert text_boxes(figure)
            assert overlaps(figure) == []
            assert clipped(figure) == []


def test_overlapping_and_clipped_texts_are_found():
    from matplotlib.figure import Figure

    figure = Figure(figsize=(2, 2))
    for text, x in (("first", 0.1), ("second", 0.15), ("beyond", 0.95)):
        figure.text(x, 0.5, text)
    assert overlaps(figure) == [("first", "second")]
    assert clipped(figure) == ["beyond"]


def test_files_are_pictures_and_drawings(tmp_path):
    pictures = write_charts(audit(), tmp_path, "SI")
    assert set(pictures) == set(CHARTS)
    assert {path.name for path in tmp_path.iterdir()} == set(chart_files())
    with Image.open(pictures["energy-flow"]) as image:
        assert image.info["dpi"] == pytest.approx((200, 200), rel=1e-3)
        assert image.width == 1500  # 7.5 in at 200 dpi
    assert (tmp_path / "warm-up.svg").read_text(encoding="utf-8").lstrip().startswith("<?xml")


def test_same_audit_same_pictures(tmp_path, monkeypatch):
    monkeypatch.setattr(charts, "CHARTS", ("energy-flow",))
    for name in ("one", "two"):
        (tmp_path / name).mkdir()
        write_charts(audit(), tmp_path / name, "SI")
    for name in ("energy-flow.png", "energy-flow.svg"):
        assert (tmp_path / "one" / name).read_bytes() == (tmp_path / "two" / name).read_bytes()


def test_what_comes_in_goes_out():
    made = audit()
    coming, going = streams(made)
    assert sum(s.energy for s in coming) == pytest.approx(sum(s.energy for s in going), rel=1e-9)
    assert [s.name for s in coming] == ["Pump shafts"]


def test_a_pump_that_is_driven_gives_energy_back():
    made = audit()
    cycle = replace(made.cycle, shaft_energy_kJ=-100.0, returned_energy_kJ=made.cycle.heat_energy_kJ + 100.0,
                    useful_energy_kJ=0.0, lifting_energy_kJ=0.0)  # fmt: skip
    coming, going = streams(replace(made, cycle=cycle))
    assert [s.name for s in coming] == ["Driving loads"]
    assert "Pump shafts" in [s.name for s in going]
    assert sum(s.energy for s in coming) == pytest.approx(sum(s.energy for s in going), rel=1e-9)


def test_ranking_keeps_all_heat():
    losses = audit(6, 100).losses
    table, rest = ranked(losses)
    assert len(table) == MOST
    assert table.to_numpy().sum() + rest.sum() == pytest.approx(losses["heat_kJ"].sum(), rel=1e-12)
    assert table.sum(axis=1).is_monotonic_decreasing
    assert rest.max() <= table.sum(axis=1).min()


def test_ranking_of_nothing_is_empty():
    table, rest = ranked(pd.DataFrame({"component": ["A"], "group": ["lines"], "heat_kJ": [0.0]}))
    assert len(table) == len(rest) == 0


def test_spread_labels_do_not_touch_and_stay_inside():
    rng = np.random.default_rng(5)
    for _ in range(50):
        wanted, sizes = rng.uniform(0, 10, 8), rng.uniform(0.2, 1.2, 8)
        placed = np.array(spread(wanted.tolist(), sizes.tolist(), 0.0, 10.0))
        order = np.argsort(placed)
        low, high = placed - sizes / 2, placed + sizes / 2
        assert low.min() >= -1e-9
        assert high.max() <= 10 + 1e-9
        assert (low[order][1:] >= high[order][:-1] - 1e-9).all()
    assert spread([1.0, 5.0], [1.0, 1.0], 0.0, 10.0) == [1.0, 5.0]  # nothing to do


def test_wrapped_text_is_no_wider_than_asked():
    text = wrap("Supercalifragilistic valve of the second press line 10 kW", 1.0, lines=3)
    assert all(text_size(line)[0] <= 1.0 for line in text.split("\n"))
    assert text.count("\n") <= 2
