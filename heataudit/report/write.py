"""The results folder: all of it or nothing, and nobody else's files."""

from __future__ import annotations

import shutil
from collections.abc import Callable, Iterator
from contextlib import contextmanager, suppress
from pathlib import Path
from uuid import uuid4

from heataudit.audit.model import Audit
from heataudit.report.charts import chart_files, write_charts
from heataudit.report.phases_csv import write_phases
from heataudit.report.quantities import System
from heataudit.report.results_json import write_results
from heataudit.report.workbook import write_workbook

REPORT, RESULTS, PHASES, CHARTS = "report.xlsx", "results.json", "phases.csv", "charts"


class ResultsExist(FileExistsError):
    """There is something of the folder's name already, and it was not to be replaced."""


def write_report(
    audit: Audit,
    folder: str | Path,
    *,
    replace: bool = False,
    units: str | None = None,
    tell: Callable[[str], None] = lambda text: None,
) -> Path:
    """Write report.xlsx, charts, results.json and phases.csv into a folder.

    The files are written aside and moved into place when all are complete. In a folder that is replaced only files
    that this program writes are touched; if one of them cannot be moved, the old ones are put back.

    Parameters
    ----------
    audit
        The answers.
    folder
        Where to write.
    replace
        Whether results that are there already may be replaced.
    units
        "SI" or "US" for people's files; None takes the machine's Report units. results.json and phases.csv name theirs.
    tell
        Hears what is being written.

    Returns
    -------
    The folder.

    Raises
    ------
    ResultsExist
        The folder exists and is not to be replaced, or its name is that of a file; it is left as it is.
    OSError
        It cannot be written; what was there before is there still.
    """
    target = Path(folder).absolute()
    refuse_existing(target, replace)
    system: System = "US" if (units or audit.machine.general["report_units"]) == "US" else "SI"
    with _aside(target) as aside:
        _write_all(audit, aside, system, tell)
        if target.exists():
            _swap(aside, target)
        else:
            aside.rename(target)
    return Path(folder)


def refuse_existing(folder: Path, replace: bool) -> None:
    """Raise `ResultsExist` where `write_report` would.

    Parameters
    ----------
    folder
        Where to write.
    replace
        Whether results that are there already may be replaced.
    """
    for place in (folder, *folder.parents):
        if place.exists() and not place.is_dir():
            raise ResultsExist(f"{place} is a file; choose another folder with --out")
    if folder.exists() and not replace:
        raise ResultsExist(f"{folder} exists already; replace its results with --replace or choose another with --out")


def _write_all(audit: Audit, folder: Path, system: System, tell: Callable[[str], None]) -> None:
    write_results(audit, folder / RESULTS, tell)
    write_phases(audit, folder / PHASES, tell)
    (folder / CHARTS).mkdir()
    pictures = write_charts(audit, folder / CHARTS, system, tell)
    tell(REPORT)
    write_workbook(audit, folder / REPORT, pictures, system)


@contextmanager
def _aside(target: Path) -> Iterator[Path]:
    """A hidden folder on the target's file system, gone afterwards; folders made on the way go with a failure."""
    made = [parent for parent in target.parents if not parent.exists()]
    home = target if target.exists() else target.parent
    home.mkdir(parents=True, exist_ok=True)
    aside = home / f".heataudit-{uuid4().hex[:12]}"
    aside.mkdir()
    try:
        yield aside
    except BaseException:
        shutil.rmtree(aside, ignore_errors=True)
        with suppress(OSError):
            for parent in made:
                parent.rmdir()
        raise
    shutil.rmtree(aside, ignore_errors=True)


def _swap(aside: Path, target: Path) -> None:
    """Move what this program wrote before out of the way and the new files into its place; undo that if it fails."""
    names = [REPORT, RESULTS, PHASES, *(f"{CHARTS}/{name}" for name in chart_files())]
    old = aside / "old"
    (old / CHARTS).mkdir(parents=True)
    moved: list[tuple[Path, Path]] = []

    def move(start: Path, end: Path) -> None:
        start.rename(end)
        moved.append((start, end))

    made_charts = not (target / CHARTS).exists()
    (target / CHARTS).mkdir(exist_ok=True)
    try:
        for name in names:
            if (target / name).is_symlink() or (target / name).exists():
                move(target / name, old / name)
            if (aside / name).exists():
                move(aside / name, target / name)
    except BaseException:
        for start, end in reversed(moved):
            end.rename(start)
        if made_charts:
            (target / CHARTS).rmdir()
        raise
