from __future__ import annotations

import tracemalloc

import pandas as pd
import pytest

from heataudit.report import chunks
from heataudit.report.phases_csv import COLUMNS, write_phases
from heataudit.report.results_json import write_results
from tests.report.fixture import audit


def test_every_phase_and_component_has_its_row(tmp_path):
    made = audit()
    write_phases(made, tmp_path / "phases.csv")
    table = pd.read_csv(tmp_path / "phases.csv")
    state = made.solution
    names = {*state.components.name, *state.pumps.name, *state.actuators.name}
    assert list(table.columns) == list(COLUMNS)
    assert len(table) == 6 * len(names)
    assert set(table["component"]) == names
    assert table["phase_number"].unique().tolist() == [1, 2, 3, 4, 5, 6]
    heat = table.groupby("phase_number")["heat_kW"].sum()
    assert heat.tolist() == pytest.approx(made.phases["heat_kW"].tolist(), rel=1e-12)
    assert table.loc[table["component"] == "Drum", "state"].tolist() == ["moving"] * 5 + ["held"]


def test_pieces_make_the_same_file(tmp_path, monkeypatch):
    made, told = audit(40), []
    write_phases(made, tmp_path / "one.csv")
    monkeypatch.setattr(chunks, "CELLS", 60)
    write_phases(made, tmp_path / "many.csv", told.append)
    assert (tmp_path / "one.csv").read_bytes() == (tmp_path / "many.csv").read_bytes()
    assert len(told) == len(list(chunks.chunks(made))) > 10
    assert told[-1] == "phases.csv: 40 of 40 phases"


def test_a_name_is_never_a_formula(tmp_path):
    made = audit(6, 4, "@SUM(1)+")
    write_phases(made, tmp_path / "phases.csv")
    text = (tmp_path / "phases.csv").read_text(encoding="utf-8")
    assert "'@SUM(1)+Main pump" in text
    assert ",@SUM" not in text
    assert "\n@SUM" not in text


@pytest.mark.parametrize("write_file", [write_phases, write_results])
def test_a_cycle_eight_times_as_long_needs_no_more_memory(tmp_path, monkeypatch, write_file):
    monkeypatch.setattr(chunks, "CELLS", 1000)
    peaks = []
    for phases in (120, 120, 960):  # the first warms caches
        made = audit(phases)
        tracemalloc.start()
        write_file(made, tmp_path / "file")
        peaks.append(tracemalloc.get_traced_memory()[1])
        tracemalloc.stop()
    # both peaks are those of one piece, so a quarter more is ample; written whole, the last would be 8 times larger
    assert peaks[2] < 1.25 * peaks[1]
