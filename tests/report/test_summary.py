from __future__ import annotations

import io

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
    assert text.startswith(f"{prefix}Hand-made rig"[:70])


def test_summary_answers_the_questions():
    file = io.StringIO()
    print_summary(audit(), "US", file)
    text = " ".join(file.getvalue().split())
    assert "useful (23 %)" in text
    assert "Danger: The oil reaches 176 °F, above the 140 °F that it may have." in text
    assert text.index("Danger") < text.index("Warning") < text.index("Note")
    assert "Cooler: 4.16 hp must be taken away to hold 140 °F." in text  # 3.1 kW, 60 °C
