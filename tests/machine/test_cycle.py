"""Duty cycles: moves, loads in three ways, logs from CSV and Parquet."""

from __future__ import annotations

import importlib
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest

from heataudit.machine import Machine, Move, WorkbookError, read_machine
from tests.machine.test_read import assert_same_cycle
from tests.workbooks import PRESS, Sheets, changed, write

ACTUATORS: Sheets = {
    **PRESS,
    "Directional valves": [["Section", "Size", "Centre", "Port P", "Port T"], ["Press", "NG10", "open"],
                           ["Turn", "NG6", "closed", "P1", "Tank"], ["Lift", "NG6", "closed", "P1", "Tank"]],
    "Actuators": [
        ["Actuator", "Kind", "Section", "Bore [mm]", "Rod [mm]", "Displacement [cm³/rev]", "Port A", "Port B"],
        ["Ram", "cylinder", "Press", 80, 45], ["Spindle", "motor", "Turn", None, None, 100],
        ["Table", "plunger", "Lift", 60], ["Clamp", "constant pressure", None, None, None, None, "P1", "Tank"],
    ],
    "Duty cycle": [
        ["Phase", "Duration [s]", "Repeats", "Ram move", "Ram load [kN]", "Ram load [bar]", "Spindle move",
         "Spindle load [N·m]", "Spindle travel [rev]", "Table move", "Table inlet [bar]", "Clamp move", "Clamp load"],
        ["One", 5, 3, "press", None, None, "forward", 80, 12, "extend", 90, "on", 100],
        ["Two", 5, None, "extend", None, -20, "reverse", 0, None, "hold", None, None, None],
        ["Three", 5, 1, "retract", 5, None, None, None, None, None, None, None, None],
    ],
}  # fmt: skip


def read(tmp_path: Path, sheets: Sheets, **more: Any) -> Machine:
    return read_machine(write(tmp_path / "machine.xlsx", sheets), **more)


def test_moves_and_loads(tmp_path: Path) -> None:
    cycle = read(tmp_path, ACTUATORS).cycle
    assert cycle.moves["Ram"].tolist() == [Move.PRESS, Move.EXTEND, Move.RETRACT]
    assert cycle.moves["Spindle"].tolist() == [Move.FORWARD, Move.REVERSE, Move.HOLD]
    assert cycle.moves["Table"].tolist() == [Move.EXTEND, Move.HOLD, Move.HOLD]
    assert cycle.moves["Clamp"].tolist() == [Move.ON, Move.HOLD, Move.HOLD]
    nan = np.nan
    np.testing.assert_array_equal(cycle.value("Ram", "load"), [nan, nan, 5e3])
    np.testing.assert_array_equal(cycle.value("Ram", "load_pressure"), [nan, -2e6, nan])
    np.testing.assert_array_equal(cycle.value("Spindle", "load"), [80, 0, nan])
    np.testing.assert_array_equal(cycle.value("Spindle", "travel"), [12, nan, nan])
    np.testing.assert_array_equal(cycle.value("Table", "inlet"), [9e6, nan, nan])
    np.testing.assert_array_equal(cycle.value("Clamp", "load_pressure"), [1e7, nan, nan])
    np.testing.assert_array_equal(cycle.repeats, [3, 1, 1])
    assert len(cycle) == 3


@pytest.mark.parametrize(
    ("header", "values", "expected"),
    [
        ("Ram load [psi]", [1000, 0], [6894757.293168, 0]),  # exact: 0.45359237 x 9.80665 / 0.0254² Pa
        ("Ram load [MPa]", [3, -1], [3e6, -1e6]),
        ("Ram load [bar]", [30, 0], [3e6, 0]),
    ],
)
def test_a_load_as_a_pressure(tmp_path: Path, header: str, values: list[float], expected: list[float]) -> None:
    cells = {("Duty cycle", "D1"): header, ("Duty cycle", "D2"): values[0], ("Duty cycle", "D3"): values[1]}
    cycle = read(tmp_path, changed(PRESS, cells)).cycle
    np.testing.assert_allclose(cycle.value("Ram", "load_pressure")[:2], expected, rtol=1e-12)
    assert np.isnan(cycle.value("Ram", "load")).all()


def test_columns_of_pumps_drives_and_valves(tmp_path: Path) -> None:
    cells = {
        ("Pumps", "C2"): "pressure compensated", ("Pumps", "G1"): "Setting [bar]", ("Pumps", "G2"): 180,
        ("Valves", "A3"): "Shut-off", ("Valves", "B3"): "throttle", ("Valves", "C3"): "P1", ("Valves", "D3"): "Tank",
        ("Valves", "E3"): 50, ("Duty cycle", "F1"): "Pump 1 setting [bar]", ("Duty cycle", "F2"): 120,
        ("Duty cycle", "G1"): "Pump 1 speed [rpm]", ("Duty cycle", "G2"): 0,
        ("Duty cycle", "H1"): "Shut-off opening [%]", ("Duty cycle", "H2"): 40,
        ("Duty cycle", "I1"): "Main relief setting [bar]", ("Duty cycle", "I2"): 90,
    }  # fmt: skip
    cycle = read(tmp_path, changed(PRESS, cells)).cycle
    given = {key: values[0] for key, values in cycle.values.items() if key[0] != "Ram"}
    assert given == {
        ("Pump 1", "setting"): pytest.approx(12e6), ("Pump 1", "speed"): 0.0, ("Shut-off", "opening"): 0.4,
        ("Main relief", "setting"): pytest.approx(9e6),
    }  # fmt: skip


WITHOUT_CYCLE: Sheets = {title: rows for title, rows in PRESS.items() if title != "Duty cycle"}
LOG = PRESS["Duty cycle"]


def as_text(separator: str, decimal: str) -> str:
    rows = [[*row] for row in LOG]
    rows[1][4] = 50.5
    return "\n".join(
        separator.join("" if cell is None else str(cell).replace(".", decimal) for cell in row) for row in rows
    )


@pytest.mark.parametrize(("separator", "decimal"), [(",", "."), (";", ","), (";", ".")])
def test_a_csv_log_is_as_good_as_the_sheet(tmp_path: Path, separator: str, decimal: str) -> None:
    log = tmp_path / "log.csv"
    log.write_text("\ufeff# logger 7\n\n" + as_text(separator, decimal) + "\n\n# end\n", encoding="utf-8")
    in_sheet = read(tmp_path, changed(PRESS, {("Duty cycle", "E2"): 50.5}))
    assert_same_cycle(read(tmp_path, WITHOUT_CYCLE, cycle=log), in_sheet)


def test_a_parquet_log_is_as_good_as_the_sheet(tmp_path: Path) -> None:
    pytest.importorskip("pyarrow")
    log = tmp_path / "log.parquet"
    pd.DataFrame(LOG[1:], columns=LOG[0]).to_parquet(log)
    assert_same_cycle(read(tmp_path, WITHOUT_CYCLE, cycle=log), read(tmp_path, PRESS))


def test_parquet_without_pyarrow(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    found = importlib.import_module

    def without_pyarrow(name: str, package: str | None = None) -> Any:
        if name == "pyarrow":
            raise ImportError(name)
        return found(name, package)

    (tmp_path / "log.parquet").write_bytes(b"PAR1")
    monkeypatch.setattr(importlib, "import_module", without_pyarrow)
    with pytest.raises(WorkbookError) as caught:
        read(tmp_path, WITHOUT_CYCLE, cycle=tmp_path / "log.parquet")
    assert str(caught.value) == (
        "log.parquet: reading Parquet needs the package pyarrow; install it (pip install pyarrow) or export the log as "
        "CSV"
    )


def test_times_of_a_log(tmp_path: Path) -> None:
    log = tmp_path / "log.csv"
    log.write_text("Time [s],Ram move,Ram load [kN]\n10,extend,3\n10.5,extend,4\n12,,\n", encoding="utf-8")
    cycle = read(tmp_path, WITHOUT_CYCLE, cycle=log).cycle
    assert cycle.duration.tolist() == [0.5, 1.5, 1.5]
    assert cycle.phase.tolist() == ["1", "2", "3"]


def test_mistakes_in_a_log_name_its_file(tmp_path: Path) -> None:
    log = tmp_path / "log.csv"
    log.write_text("Duration [s],Ram move,Ram load [kN]\n1,extend,3\n-2,extnd,x\n3,extend,\n", encoding="utf-8")
    with pytest.raises(WorkbookError) as caught:
        read(tmp_path, WITHOUT_CYCLE, cycle=log)
    assert str(caught.value).splitlines() == [
        "log.csv!A3: Duration is -2; it must be greater than 0 s",
        'log.csv!B3: Ram move is "extnd"; it must be "hold", "extend", "retract", "press" or "float"; '
        'did you mean "extend"?',
        'log.csv!C3: Ram load is "x"; it must be a number',
        'log.csv!B4: Ram move is "extend" without a load; give "Ram load", 0 where there is none',
    ]


def test_the_log_replaces_the_sheet(tmp_path: Path) -> None:
    log = tmp_path / "log.csv"
    log.write_text("Phase,Duration [s]\nRest,7\n", encoding="utf-8")
    machine = read(tmp_path, PRESS, cycle=log)
    assert machine.cycle.phase.tolist() == ["Rest"]
    assert machine.checksum != read(tmp_path, PRESS).checksum


def test_a_long_log_is_read_in_whole_columns(tmp_path: Path) -> None:
    count = 100_000
    log = tmp_path / "log.csv"
    moves = np.resize(["extend", "retract", "hold", ""], count)
    pd.DataFrame({"Time [s]": np.arange(count) / 8, "Ram move": moves, "Ram load [kN]": 2.0}).to_csv(log, index=False)
    cycle = read(tmp_path, WITHOUT_CYCLE, cycle=log).cycle
    assert (len(cycle), cycle.duration.min(), cycle.duration.max()) == (count, 0.125, 0.125)  # exact binary fractions
    assert np.bincount(cycle.moves["Ram"]).tolist() == [count // 2, count // 4, count // 4]
