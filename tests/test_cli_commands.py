from __future__ import annotations

import os
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import pytest

import heataudit
from heataudit.audit.model import Finding
from heataudit.cli import main
from tests.report.fixture import audit, sheets
from tests.workbooks import changed, write

ROOT = Path(__file__).parent.parent
RESULTS = {"report.xlsx", "results.json", "phases.csv", "charts"}


@pytest.fixture
def rig(tmp_path):
    return write(tmp_path / "rig.xlsx", sheets())


@pytest.fixture
def hand_made(monkeypatch):
    """The hand-made audit in place of a real one."""
    from heataudit.audit import run

    answers = {"audit": audit()}
    monkeypatch.setattr(run, "audit", lambda machine: answers["audit"])
    return answers


def test_blank_writes_a_workbook_once(tmp_path, capsys):
    path = tmp_path / "machine.xlsx"
    assert main(["blank", str(path)]) == 0
    size = path.stat().st_size
    assert main(["blank", str(path)]) == 2
    assert path.stat().st_size == size
    assert "exists already" in capsys.readouterr().err
    assert main(["blank", str(tmp_path / "machine.csv")]) == 2
    assert main(["blank", str(tmp_path / "no" / "machine.xlsx")]) == 2


def test_check_tells_all_problems_one_a_line(tmp_path, capsys):
    path = write(tmp_path / "rig.xlsx", changed(sheets(), {("Lines", "F2"): -3, ("Pumps", "D2"): 0}))
    assert main(["check", str(path)]) == 1
    lines = capsys.readouterr().err.splitlines()
    assert lines == [
        "error: Pumps!D2: Displacement is 0; it must be greater than 0 cm³/rev",
        "error: Lines!F2: Length is -3; it must be greater than 0 m",
    ]


def test_check_of_a_good_workbook(rig, capsys):
    assert main(["check", str(rig)]) == 0
    assert capsys.readouterr().out == f"{rig}: no errors, no warnings\n"


def test_check_prints_warnings_and_still_passes(tmp_path, capsys):
    path = write(tmp_path / "rig.xlsx", sheets() | {"Notes": [["anything"]]})
    assert main(["check", str(path)]) == 0
    shown = capsys.readouterr()
    assert shown.err.startswith("warning: Notes: the sheet is not known")
    assert shown.out.endswith("no errors, 1 warning\n")


@pytest.mark.parametrize("arguments", [["check", "none.xlsx"], ["run", "none.xlsx"], [], ["walk"], ["run"],
                                       ["run", "none.xlsx", "--units", "metric"]])  # fmt: skip
def test_wrong_command_lines(arguments, capsys):
    try:
        code = main(arguments)
    except SystemExit as stopped:  # argparse's own
        code = stopped.code
    assert code == 2
    assert capsys.readouterr().err


def test_a_missing_log_is_a_wrong_command_line(rig, tmp_path, capsys):
    assert main(["check", str(rig), "--cycle", str(tmp_path / "none.csv")]) == 2
    assert "there is no such file" in capsys.readouterr().err


def test_a_file_that_is_no_workbook(tmp_path, capsys):
    path = tmp_path / "rig.xlsx"
    path.write_bytes(b"\x00\xff nonsense")
    assert main(["run", str(path)]) == 1
    assert len(capsys.readouterr().err.splitlines()) == 1
    assert list(tmp_path.iterdir()) == [path]


@pytest.mark.usefixtures("hand_made")
def test_run_writes_beside_the_workbook_and_does_not_replace(rig, capsys):
    assert main(["run", str(rig)]) == 0
    folder = rig.with_name("rig-audit")
    assert {path.name for path in folder.iterdir()} == RESULTS
    shown = capsys.readouterr()
    assert shown.out.startswith("Hand-made rig\n")
    assert f"Report: {folder / 'report.xlsx'}" in shown.out
    assert shown.err == ""
    before = (folder / "results.json").read_bytes()
    assert main(["run", str(rig)]) == 2
    assert "exists already" in capsys.readouterr().err
    assert main(["run", str(rig), "--replace", "--quiet"]) == 0
    assert capsys.readouterr().out == ""
    assert (folder / "results.json").read_bytes() == before


@pytest.mark.usefixtures("hand_made")
def test_run_into_a_folder_of_ones_own_in_us_units(rig, tmp_path):
    from openpyxl import load_workbook

    assert main(["run", str(rig), "--out", str(tmp_path / "deep" / "here"), "--units", "US", "--quiet"]) == 0
    book = load_workbook(tmp_path / "deep" / "here" / "report.xlsx", read_only=True)
    heads = [cell.value for cell in next(book["Pumps"].iter_rows(min_row=4, max_row=4))]
    book.close()
    assert "Pressure [psi]" in heads


def test_an_audit_that_is_not_sound_is_written_and_ends_with_three(rig, hand_made, capsys):
    finding = Finding("not-converged", "danger", "Hand-made rig", "Lift", "Phase 1 was not solved.")
    hand_made["audit"] = replace(audit(), findings=(finding,))
    assert main(["run", str(rig), "--quiet"]) == 3
    assert {path.name for path in rig.with_name("rig-audit").iterdir()} == RESULTS
    assert "was not solved" in capsys.readouterr().err


def test_errors_of_the_workbook_write_nothing(tmp_path, capsys):
    path = write(tmp_path / "rig.xlsx", changed(sheets(), {("Lines", "F2"): -3}))
    assert main(["run", str(path)]) == 1
    assert list(tmp_path.iterdir()) == [path]
    assert capsys.readouterr().err.startswith("error: Lines!F2: ")


@pytest.mark.usefixtures("hand_made")
def test_a_full_disk_is_one_line(rig, monkeypatch, capsys):
    from heataudit.report import write as writing

    def full(*given):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(writing, "write_phases", full)
    assert main(["run", str(rig)]) == 2
    assert capsys.readouterr().err == "heataudit: No space left on device\n"
    assert not rig.with_name("rig-audit").exists()


@pytest.mark.usefixtures("hand_made")
def test_stopping_leaves_nothing(rig, monkeypatch, capsys):
    from heataudit.report import write as writing

    def stopped(*given):
        raise KeyboardInterrupt

    monkeypatch.setattr(writing, "write_workbook", stopped)
    assert main(["run", str(rig)]) == 130
    assert capsys.readouterr().err == "heataudit: stopped\n"
    assert list(rig.parent.iterdir()) == [rig]


def test_a_folder_is_no_workbook(tmp_path, capsys):
    assert main(["run", str(tmp_path)]) == 2
    assert capsys.readouterr().err == f"heataudit: {tmp_path}: that is a folder; give the file\n"


def test_a_reader_who_stops_is_no_error(rig):
    command = [sys.executable, "-m", "heataudit", "check", str(rig)]
    environment = os.environ | {"PYTHONPATH": str(ROOT)}
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True, env=environment) as child:
        child.stdout.close()
        assert child.stderr.read() == ""
    assert child.returncode == 141


def python(*arguments):
    environment = os.environ | {"PYTHONPATH": str(ROOT)}
    return subprocess.run([sys.executable, *arguments], capture_output=True, text=True, env=environment, check=False)


def test_help_is_cheap_and_says_the_exit_codes():
    script = (
        "import resource, sys\nfrom heataudit.cli import main\n"
        "try:\n    main(['--help'])\nexcept SystemExit as stopped:\n    assert stopped.code == 0\n"
        "heavy = {'pandas', 'numpy', 'scipy', 'matplotlib', 'openpyxl', 'rich'} & set(sys.modules)\n"
        "assert not heavy, heavy\n"
        "print('CPU', resource.getrusage(resource.RUSAGE_SELF).ru_utime)\n"
    )
    shown = python("-c", script)
    assert shown.returncode == 0, shown.stderr
    assert "exit codes: 0 done" in shown.stdout
    assert float(shown.stdout.split()[-1]) < 0.5  # CPU seconds


def test_the_package_runs_as_a_module():
    shown = python("-m", "heataudit", "--version")
    assert (shown.returncode, shown.stdout) == (0, f"heataudit {heataudit.__version__}\n")


def test_the_public_face_works_in_any_order():
    script = (
        "import heataudit\nfrom heataudit.audit.model import Audit\nimport heataudit.audit.tables as tables\n"
        "assert callable(heataudit.audit) and callable(heataudit.read_machine) and callable(heataudit.write_report)\n"
        "assert tables.BAR == 1e5\nassert not hasattr(heataudit, 'nothing')\n"
    )
    shown = python("-c", script)
    assert shown.returncode == 0, shown.stderr


def test_calling_the_audit_room_audits(monkeypatch):
    from heataudit.audit import run

    monkeypatch.setattr(run, "audit", lambda machine: ("audit of", machine))
    assert heataudit.audit("rig") == ("audit of", "rig")
