from __future__ import annotations

from pathlib import Path

import pytest

from heataudit.report import write
from heataudit.report.charts import chart_files
from heataudit.report.write import ResultsExist, write_report
from tests.report.fixture import audit

FILES = {"report.xlsx", "results.json", "phases.csv", *(f"charts/{name}" for name in chart_files())}


def files(folder):
    return {str(path.relative_to(folder)) for path in folder.rglob("*") if path.is_file()}


@pytest.fixture
def quick(monkeypatch):
    """Charts and workbook as one byte each, so that moving files is what is tested."""

    def charts(audit, folder, system, tell):
        for name in chart_files():
            (folder / name).write_text("new")
        return {}

    monkeypatch.setattr(write, "write_charts", charts)
    monkeypatch.setattr(write, "write_workbook", lambda audit, path, pictures, system: path.write_text("new"))


def test_all_files_are_there_and_nothing_else(tmp_path):
    folder = write_report(audit(), tmp_path / "new" / "rig-audit")
    assert files(tmp_path) == {f"new/rig-audit/{name}" for name in FILES}
    assert folder == tmp_path / "new" / "rig-audit"


@pytest.mark.usefixtures("quick")
def test_an_existing_folder_is_left_as_it_is(tmp_path):
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "report.xlsx").write_text("mine")
    with pytest.raises(ResultsExist, match="exists already"):
        write_report(audit(), tmp_path / "out")
    assert files(tmp_path) == {"out/report.xlsx"}
    assert (tmp_path / "out" / "report.xlsx").read_text() == "mine"


@pytest.mark.usefixtures("quick")
def test_a_file_of_that_name_is_never_replaced(tmp_path):
    (tmp_path / "out").write_text("mine")
    with pytest.raises(ResultsExist, match="is a file"):
        write_report(audit(), tmp_path / "out", replace=True)
    assert (tmp_path / "out").read_text() == "mine"


@pytest.mark.usefixtures("quick")
def test_a_folder_cannot_lie_in_a_file(tmp_path):
    (tmp_path / "out").write_text("mine")
    with pytest.raises(ResultsExist, match="out is a file; choose another folder"):
        write_report(audit(), tmp_path / "out" / "deep" / "here")
    assert files(tmp_path) == {"out"}


@pytest.mark.usefixtures("quick")
def test_replacing_keeps_what_others_wrote_and_drops_stale_charts(tmp_path, monkeypatch):
    out = tmp_path / "out"
    write_report(audit(), out)
    (out / "notes.txt").write_text("mine")
    (out / "charts" / "photo.png").write_text("mine")
    (out / "report.xlsx").write_text("old")
    monkeypatch.setattr(write, "write_charts", lambda *given: {})
    write_report(audit(), out, replace=True)
    assert files(out) == {"report.xlsx", "results.json", "phases.csv", "notes.txt", "charts/photo.png"}
    assert (out / "report.xlsx").read_text() == "new"
    assert (out / "notes.txt").read_text() == "mine"


@pytest.mark.usefixtures("quick")
@pytest.mark.parametrize("existing", [False, True])
def test_a_failure_while_writing_leaves_everything_as_it_was(tmp_path, monkeypatch, existing):
    out = tmp_path / "deep" / "out"
    if existing:
        out.mkdir(parents=True)
        (out / "report.xlsx").write_text("old")

    def full(*given):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(write, "write_phases", full)
    with pytest.raises(OSError, match="No space left"):
        write_report(audit(), out, replace=existing)
    assert files(tmp_path) == ({"deep/out/report.xlsx"} if existing else set())
    assert list(tmp_path.iterdir()) == ([tmp_path / "deep"] if existing else [])


@pytest.mark.usefixtures("quick")
def test_a_failure_while_moving_puts_the_old_files_back(tmp_path, monkeypatch):
    out = tmp_path / "out"
    write_report(audit(), out)
    for name in FILES:
        (out / name).write_text("old")
    rename, count = Path.rename, []

    def failing(self, target):
        count.append(target)
        if len(count) == 8:
            raise PermissionError(13, "Permission denied", str(target))
        return rename(self, target)

    monkeypatch.setattr(Path, "rename", failing)
    with pytest.raises(PermissionError):
        write_report(audit(), out, replace=True)
    assert files(tmp_path) == {f"out/{name}" for name in FILES}
    assert {(out / name).read_text() for name in FILES} == {"old"}
