from __future__ import annotations

import io
from dataclasses import replace

import pytest

from heataudit.report.summary import print_summary
from tests.report.fixture import audit


@pytest.mark.parametrize("prefix", ["", "Rather long name of a station on the shop floor, ", "[bold]x[/bold] "])
def test_summary_is_plain_and_fits(prefix):
    file = io.StringIO()
    print_summary(audit(prefix=prefix), "SI", file)
    text = file.getvalue()
    assert "\x1b" not in text
    assert max(len(line) for line in text.splitlines()) <= 80
    assert text == "".join(f"{line.rstrip()}\n" for line in text.splitlines())
    assert text.startswith(f"{prefix}Hand-made rig"[:70])


def test_summary_answers_the_questions():
    file = io.StringIO()
    print_summary(audit(), "US", file)
    text = " ".join(file.getvalue().split())
    assert "useful (23 %)" in text
    assert "Danger: The oil reaches 176 °F, above the 140 °F that it may have." in text
    assert text.index("Danger") < text.index("Warning") < text.index("Note")
    assert "Cooler: 4.16 hp must be taken away to hold 140 °F." in text  # 3.1 kW, 60 °C


@pytest.mark.parametrize(("count", "tail"), [(8, None), (9, "... and 1 more finding"), (11, "... and 3 more findings")])
def test_summary_shows_the_worst_findings_and_counts_the_rest(count, tail):
    made, file = audit(), io.StringIO()
    note, danger, _ = made.findings
    made = replace(made, findings=(*[replace(note, where=f"Feed {k}") for k in range(count - 1)], danger))
    print_summary(made, "SI", file)
    lines = file.getvalue().splitlines()
    assert sum(line.startswith(("Danger: ", "Note: ")) for line in lines) == 8
    assert sum(line.startswith("Danger: ") for line in lines) == 1
    assert lines[-1].startswith(tail if tail else "Note: ")


def test_summary_has_colours_in_a_terminal_only(monkeypatch):
    class Terminal(io.StringIO):
        def isatty(self):
            return True

    for name in ("NO_COLOR", "FORCE_COLOR", "TTY_COMPATIBLE", "COLORTERM"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setenv("TERM", "xterm-256color")
    file = Terminal()
    print_summary(audit(), "SI", file)
    assert "\x1b[1;31mDanger: \x1b[0m" in file.getvalue()  # bold, red
