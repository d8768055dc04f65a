from __future__ import annotations

import json
from dataclasses import fields, replace

import numpy as np
import pytest

from heataudit.report import chunks
from heataudit.report.results_json import write_results
from tests.report.fixture import audit

TOP = [
    "format", "heataudit", "workbook", "machine", "conditions", "cycle", "phases", "losses", "loss_groups", "thermal",
    "cooler", "annual", "upgrades", "uncertainty", "readings", "findings",
]  # fmt: skip
KEYS = {  # the promise to other programs, written out so that a change of it fails here
    "conditions": "oil_temperature_C oil_temperature_basis ambient_temperature_C design_ambient_temperature_C "
    "viscosity_mm2_s density_kg_m3",
    "cycle": "duration_s shaft_energy_kJ useful_energy_kJ returned_energy_kJ lifting_energy_kJ heat_energy_kJ "
    "mean_heat_kW peak_heat_kW efficiency balance_error_kJ",
    "loss_groups": "pump idle bypass metering lines overflow lowering actuators other",
    "thermal": "mean_heat_kW tank_dissipation_kW equilibrium_C equilibrium_without_cooler_C warm_up_min ripple_K",
    "cooler": "needed design_heat_kW oil_inlet_C coolant_inlet_C oil_flow_L_min required_kW required_kW_K "
    "reserve_percent choice choice_oil_temperature_C existing_margin_percent",
    "annual": "shaft_kWh drive_input_kWh loss_kWh energy_cost co2_kg",
}


def refuse(text):
    raise AssertionError(f"{text} is no JSON number")


def written(made, path):
    write_results(made, path)
    return json.loads(path.read_text(encoding="utf-8"), parse_constant=refuse)


@pytest.fixture(scope="module")
def results(tmp_path_factory):
    return written(audit(), tmp_path_factory.mktemp("results") / "results.json")


def test_keys_are_the_promised_ones_in_order(results):
    assert list(results) == TOP
    for part, keys in KEYS.items():
        assert list(results[part]) == keys.split(), part
    assert list(results["losses"][0]) == ["component", "kind", "heat_kJ", "share", "annual_kWh"]
    assert list(results["findings"][0]) == ["code", "severity", "where", "phase", "text"]
    assert (results["format"], results["upgrades"], results["uncertainty"], results["readings"]) == (1, [], None, [])


def test_a_phase_names_everything_in_it(results):
    phase = results["phases"][0]
    assert list(phase) == [
        "phase", "duration_s", "repeats", "heat_kW", "shaft_power_kW", "useful_power_kW", "pumps", "actuators",
        "components", "ports",
    ]  # fmt: skip
    assert list(phase["pumps"]["Main pump"]) == ["pressure_bar", "flow_L_min", "shaft_power_kW"]
    assert list(phase["actuators"]["Drum"]) == [
        "state", "flow_L_min", "speed_rpm", "inlet_bar", "outlet_bar", "opening_percent",
    ]  # fmt: skip
    assert list(phase["actuators"]["Ram"])[2] == "speed_mm_s"
    assert list(phase["components"]["Feed 1"]) == ["flow_L_min", "drop_bar", "heat_kW", "velocity_m_s"]
    assert list(phase["components"]["Lift spool"]) == ["flow_L_min", "drop_bar", "heat_kW"]
    assert "Block gallery" in phase["components"]
    assert phase["components"]["Pilot relief"] == {"flow_L_min": 0.0, "drop_bar": 0.0, "heat_kW": 0.0}
    assert phase["ports"]["Tank"] == 0.0
    assert None in phase["ports"].values()  # a node to which nothing is connected


def test_heat_of_the_components_is_the_heat_of_the_phase_and_groups_are_the_whole(results):
    for phase in results["phases"]:
        total = sum(component["heat_kW"] for component in phase["components"].values())
        assert total == pytest.approx(phase["heat_kW"], rel=1e-12)
    assert sum(results["loss_groups"].values()) == pytest.approx(results["cycle"]["heat_energy_kJ"], rel=1e-12)
    losses = results["losses"]
    assert sum(loss["heat_kJ"] for loss in losses) == pytest.approx(results["cycle"]["heat_energy_kJ"], rel=1e-12)
    assert [loss["heat_kJ"] for loss in losses] == sorted((loss["heat_kJ"] for loss in losses), reverse=True)
    assert len({loss["component"] for loss in losses}) == len(losses)


def test_numbers_keep_all_their_digits(results):
    made = audit()
    assert results["cycle"]["shaft_energy_kJ"] == made.cycle.shaft_energy_kJ
    flow = made.solution.pumps.flow[0, 0] * 60e3
    assert results["phases"][0]["pumps"]["Main pump"]["flow_L_min"] == pytest.approx(flow, rel=1e-15)


def test_same_audit_same_bytes_in_one_piece_or_in_many(tmp_path, monkeypatch):
    made = audit()
    write_results(made, tmp_path / "one")
    monkeypatch.setattr(chunks, "CELLS", 1)
    write_results(made, tmp_path / "many")
    assert (tmp_path / "one").read_bytes() == (tmp_path / "many").read_bytes()


def test_what_is_no_number_is_null(tmp_path):
    made = audit()
    made = replace(
        made,
        cooler=replace(made.cooler, required_kW_K=np.inf, oil_flow_L_min=None),
        thermal=replace(made.thermal, equilibrium_C=None, warm_up_min=None, ripple_K=np.nan),
    )
    results = written(made, tmp_path / "results.json")
    assert results["cooler"]["required_kW_K"] is None
    assert results["thermal"]["equilibrium_C"] is None
    assert results["thermal"]["ripple_K"] is None


def test_a_machine_may_have_no_actuators(tmp_path, monkeypatch):
    monkeypatch.setattr(chunks, "CELLS", 60)  # also in pieces
    made = audit()
    actuators = made.solution.actuators
    none = replace(actuators, **{field.name: getattr(actuators, field.name)[:0] for field in fields(actuators)})
    made = replace(made, solution=replace(made.solution, actuators=none))
    results = written(made, tmp_path / "results.json")
    assert [phase["actuators"] for phase in results["phases"]] == [{}] * 6
    assert "Main pump" in results["phases"][5]["components"]
    assert "Ram" not in results["phases"][5]["components"]


def test_diesel_has_litres_and_electric_has_kilowatt_hours(tmp_path):
    made = audit()
    diesel = replace(made, annual=replace(made.annual, drive_input_kWh=None, fuel_L=812.5))
    keys = list(written(diesel, tmp_path / "results.json")["annual"])
    assert keys == ["shaft_kWh", "fuel_L", "loss_kWh", "energy_cost", "co2_kg"]
