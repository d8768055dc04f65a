"""Commands: parse, call, print."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Callable, Iterable, Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from heataudit.machine import Machine, WorkbookError

DONE, WORKBOOK_ERRORS, WRONG_COMMAND, UNSOUND, INTERRUPTED, UNREAD = 0, 1, 2, 3, 130, 141

EPILOG = """exit codes: 0 done; 1 the workbook has errors; 2 wrong command line, a file that is missing or cannot be
written, or results that are there already; 3 the audit is written, but a phase was not solved or a balance is off"""


class _Refused(Exception):
    """The command cannot be carried out as it was given; the text says why."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Carry out one command and return its exit code.

    Parameters
    ----------
    arguments
        The command line; None takes the process's own.
    """
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")
    options = _parser().parse_args(arguments)
    try:
        code = int(options.command(options))
        sys.stdout.flush()
        return code
    except _Refused as refused:
        return _complain(str(refused), WRONG_COMMAND)
    except BrokenPipeError:  # whoever read the output has stopped; what is left of it goes nowhere
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return UNREAD
    except OSError as error:
        return _complain(_os_text(error), WRONG_COMMAND)
    except KeyboardInterrupt:
        return _complain("stopped", INTERRUPTED)


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="heataudit", epilog=EPILOG,
        description="Heat and energy audit of oil-hydraulic machines: from a machine workbook to losses, heat and "
        "cooler size.",
    )  # fmt: skip
    parser.add_argument("--version", action=_Version, help="print the version and exit")
    commands = parser.add_subparsers(title="commands", metavar="COMMAND", required=True)
    blank = commands.add_parser("blank", help="write an empty machine workbook")
    blank.add_argument("file", type=Path, metavar="FILE.xlsx", help="a new file; one that exists is left as it is")
    blank.set_defaults(command=_blank)
    check = commands.add_parser("check", help="read a workbook and print all its problems and warnings")
    run = commands.add_parser("run", help="audit the machine in a workbook and write the report")
    for command in (check, run):
        command.add_argument("file", type=Path, metavar="FILE", help="machine workbook (.xlsx, .xlsm, .xls, .ods)")
        command.add_argument("--cycle", type=Path, metavar="LOG", help="duty cycle as CSV or Parquet, for the sheet")
    check.set_defaults(command=_check)
    run.add_argument("--out", type=Path, metavar="DIR", help="folder of the results (default: FILE-audit beside FILE)")
    run.add_argument("--replace", action="store_true", help="replace results that are there already")
    run.add_argument("--units", choices=("SI", "US"), help="units of the report (default: those that FILE asks for)")
    run.add_argument("--quiet", action="store_true", help="print nothing but errors and warnings")
    run.set_defaults(command=_run)
    return parser


class _Version(argparse.Action):
    """Looks the version up only when it is asked for."""

    def __init__(self, option_strings: Sequence[str], dest: str, help: str | None = None) -> None:
        super().__init__(option_strings, dest, nargs=0, help=help)

    def __call__(self, parser: argparse.ArgumentParser, *unused: Any) -> None:
        import heataudit

        print(f"heataudit {heataudit.__version__}")
        parser.exit()


def _blank(options: argparse.Namespace) -> int:
    from heataudit.machine import write_blank

    if options.file.suffix.lower() != ".xlsx":
        raise _Refused(f"{options.file}: the name of a machine workbook must end with .xlsx")
    try:
        write_blank(options.file)
    except FileExistsError as error:
        raise _Refused(str(error)) from error
    print(f"{options.file} is written; fill it in, then: heataudit check {options.file}")
    return DONE


def _check(options: argparse.Namespace) -> int:
    machine = _read(options)
    if machine is None:
        return WORKBOOK_ERRORS
    warnings = len(machine.warnings)
    print(f"{options.file}: no errors, {warnings or 'no'} warning{'' if warnings == 1 else 's'}")
    return DONE


def _run(options: argparse.Namespace) -> int:
    from heataudit.report.write import refuse_existing

    folder = options.out or options.file.with_name(f"{options.file.stem}-audit")
    _must_exist(options)
    refuse_existing(folder, options.replace)
    with _progress(options.quiet) as tell:
        tell("Reading the workbook")
        machine = _read(options)
        if machine is None:
            return WORKBOOK_ERRORS
        from heataudit.audit.run import audit
        from heataudit.report.write import write_report

        tell(f"Solving {len(machine.cycle):,} phases")
        answers = audit(machine)
        write_report(
            answers, folder, replace=options.replace, units=options.units, tell=lambda text: tell(f"Writing {text}")
        )
    if not options.quiet:
        from heataudit.report.summary import print_summary

        print_summary(answers, options.units or machine.general["report_units"])
        print(f"\nReport: {folder / 'report.xlsx'}")
    if answers.sound:
        return DONE
    return _complain("a phase was not solved or a balance is off; see Findings before using the results", UNSOUND)


def _must_exist(options: argparse.Namespace) -> None:
    for path in (options.file, options.cycle):
        if path is not None and path.is_dir():
            raise _Refused(f"{path}: that is a folder; give the file")
        if path is not None and not path.is_file():
            raise _Refused(f"{path}: there is no such file; check the name and the folder")


def _read(options: argparse.Namespace) -> Machine | None:
    """The machine, its warnings printed; None where the workbook has errors, all printed."""
    from heataudit.machine import WorkbookError, read_machine

    _must_exist(options)
    try:
        machine = read_machine(options.file, options.cycle)
    except WorkbookError as error:
        _print_errors(error)
        return None
    _print_lines("warning", machine.warnings)
    return machine


def _print_errors(error: WorkbookError) -> None:
    _print_lines("error", error.problems)
    _print_lines("warning", error.warnings)


def _print_lines(kind: str, problems: Iterable[object]) -> None:
    """One line each."""
    for problem in problems:
        print(f"{kind}: {' '.join(str(problem).split())}", file=sys.stderr)


def _complain(text: str, code: int) -> int:
    print(f"heataudit: {' '.join(text.split())}", file=sys.stderr)
    return code


def _os_text(error: OSError) -> str:
    if error.strerror and error.filename:
        return f"{error.filename}: {error.strerror}"
    return error.strerror or str(error)


@contextmanager
def _progress(quiet: bool) -> Iterator[Callable[[str], None]]:
    """Something to tell what is being done; shown where standard error is a terminal."""
    if quiet or not sys.stderr.isatty():
        yield lambda text: None
        return
    from rich.console import Console
    from rich.markup import escape

    with Console(stderr=True).status("Starting") as status:
        yield lambda text: status.update(escape(text))
