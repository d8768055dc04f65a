from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest
from openpyxl import load_workbook

from heataudit.report.charts import write_charts
from heataudit.report.words import CAUTIONS
from heataudit.report.workbook import ORDER, write_workbook
from heataudit.report.workbook.phases import MOST_PHASES, shown_phases
from tests.report.fixture import audit


def book_of(made, folder, system="SI", charts=False):
    pictures = write_charts(made, folder, system) if charts else {}
    write_workbook(made, folder / "report.xlsx", pictures, system)
    return load_workbook(folder / "report.xlsx")


@pytest.fixture(scope="module")
def book(tmp_path_factory):
    return book_of(audit(), tmp_path_factory.mktemp("report"), charts=True)


def cells(sheet):
    return [cell for row in sheet.iter_rows() for cell in row if cell.value is not None]


def table(sheet):
    """Rows of the first native table as dicts."""
    ref = next(iter(sheet.tables.values())).ref
    head, *rows = sheet[ref]
    return [dict(zip([c.value for c in head], [c.value for c in row], strict=True)) for row in rows]


def text(sheet):
    return " ".join(str(cell.value) for cell in cells(sheet))


def test_sheets_stand_in_order_and_the_answer_is_open(book):
    assert book.sheetnames == list(ORDER)
    assert book.active.title == "Answer"


def test_answer_is_one_page_with_the_three_questions_and_the_energy_flow(book):
    sheet = book["Answer"]
    assert (sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight) == (1, 1)
    assert sheet.page_setup.paperSize == 9  # A4
    assert sheet.print_area
    for question in ("1. Where does the energy go?", "2. What would help?", "3. Which cooler?"):
        assert question in text(sheet)
    assert len(sheet._images) == 1
    assert "8.17 kW" in text(sheet)  # mean heat of the hand-made audit, 441.25 kJ in 54 s
    assert "3.1 kW must be taken away to hold 60 °C." in text(sheet)


def test_tables_have_filters_units_and_frozen_headers(book):
    for title in ("Losses", "Phases", "Lines", "Valves and sections", "Pumps", "Actuators", "Inputs used", "Findings"):
        sheet = book[title]
        native = next(iter(sheet.tables.values()))
        assert native.autoFilter is not None
        assert sheet.freeze_panes
        assert sheet.print_title_rows
    heads = list(table(book["Losses"])[0])
    assert heads == ["Component", "What it is", "Kind of loss", "Heat in a cycle [kJ]", "Of the heat",
                     "Heat in a year [kWh]", "Cost in a year [EUR]"]  # fmt: skip


def test_tables_hold_the_audit(book):
    made = audit()
    losses = table(book["Losses"])
    assert sum(row["Heat in a cycle [kJ]"] for row in losses) == pytest.approx(made.cycle.heat_energy_kJ)
    phases = table(book["Phases"])
    assert [row["Phase"] for row in phases] == made.phases["phase"].tolist()
    assert [row["Heat [kW]"] for row in phases] == pytest.approx(made.phases["heat_kW"].tolist())
    kinds = {row["Source"] for row in table(book["Inputs used"])}
    assert kinds == {"typed", "default", "estimate"}
    assert len(table(book["Inputs used"])) == len(made.machine.inputs) + len(made.machine.defaults)


def test_numbers_show_about_three_figures(book):
    for sheet in book:
        for cell in cells(sheet):
            if cell.data_type == "n" and cell.number_format == "General":
                assert len(f"{cell.value:g}") <= 5, (sheet.title, cell.coordinate)
    for sheet in book:
        assert not re.search(r"\d\.\d{7,}", " ".join(c.value for c in cells(sheet) if isinstance(c.value, str)))


def test_no_name_of_the_program_is_shown(book):
    for sheet in book:
        for cell in cells(sheet):
            if isinstance(cell.value, str) and sheet.title != "Inputs used":
                assert not re.search(r"[a-z]_[a-zA-Z]", cell.value), (sheet.title, cell.value)


def test_findings_lead_to_rows_of_their_component(book):
    sheet = book["Findings"]
    links = {cell.value: cell.hyperlink.location or cell.hyperlink.target for cell in cells(sheet) if cell.hyperlink}
    assert {"Main relief", "Feed 1", "Oil"} <= set(links)
    for name, target in links.items():
        title, address = re.fullmatch(r"#?'(.+)'!(.+)", target).groups()
        row = [str(cell.value) for cell in book[title][book[title][address].row]]
        assert name == "Oil" or name in row
    assert [cell.value for cell in sheet["A"][4:7]] == ["Danger", "Warning", "Note"]


def test_cautions_are_there(book):
    for caution in CAUTIONS:
        assert caution in text(book["Method and cautions"])


class Words(str):
    """A text that stays itself in a product: Python works out both sides of an IF."""

    def __mul__(self, other):
        return self


def live_value(sheet, address):
    """Value of a cell by its formulas, worked out with Python's own arithmetic."""
    value = sheet[address].value
    if not isinstance(value, str):
        return np.float64(value)
    if not value.startswith("="):
        return value
    body = re.sub(r"B\d+", lambda found: f"v('{found[0]}')", value[1:])
    scope = {
        "v": lambda a: live_value(sheet, a),
        "MAX": max,
        "IF": lambda condition, yes, no: yes if condition else Words(no) if isinstance(no, str) else no,
        "ISNUMBER": lambda value: isinstance(value, float),
    }
    with np.errstate(divide="ignore"):  # Python works out both sides of an IF
        return eval(body, scope)


@pytest.mark.parametrize(("system", "kilowatt", "per_kelvin"), [
    ("SI", 1.0, 1.0),
    # exact arithmetic: 1 hp = 0.745699872 kW; 1 kW/K = 3412.142 Btu/h / 1.8 °F (NIST SP 811)
    ("US", 1 / 0.745699872, 3412.142 / 1.8),
])  # fmt: skip
def test_what_if_gives_the_audits_own_answer(tmp_path, system, kilowatt, per_kelvin):
    sheet = book_of(audit(), tmp_path, system)["What if"]
    rows = {cell.value: cell.row for cell in sheet["A"] if cell.value}
    cooler = audit().cooler
    assert live_value(sheet, f"B{rows['To be taken away']}") == pytest.approx(cooler.required_kW * kilowatt, rel=1e-6)
    capacity = live_value(sheet, f"B{rows['Capacity with the reserve']}")
    assert capacity == pytest.approx(cooler.required_kW_K * per_kelvin * 1.1, rel=1e-6)
    bill = live_value(sheet, f"B{rows['Energy bill in a year']}")
    assert bill == pytest.approx(audit().annual.energy_cost, rel=1e-9)


def test_what_if_follows_its_inputs(tmp_path):
    sheet = book_of(audit(), tmp_path)["What if"]
    rows = {cell.value: cell.row for cell in sheet["A"] if cell.value}
    sheet[f"B{rows['Design ambient temperature']}"].value = 45.0
    # by hand: the tank gives 1.5 kW x 15/25 = 0.9 kW, 3.7 kW are left, over 15 K with 10 % on top
    assert live_value(sheet, f"B{rows['To be taken away']}") == pytest.approx(3.7)
    assert live_value(sheet, f"B{rows['Capacity with the reserve']}") == pytest.approx(3.7 / 15 * 1.1)
    sheet[f"B{rows['Design ambient temperature']}"].value = 60.0
    assert live_value(sheet, f"B{rows['Capacity with the reserve']}") == "no cooler can"


def test_only_what_if_has_formulas_and_names_are_texts(tmp_path):
    book = book_of(audit(6, 4, "@SUM(1)+"), tmp_path)
    for sheet in book:
        kinds = {cell.data_type for cell in cells(sheet)}
        assert ("f" in kinds) == (sheet.title == "What if"), sheet.title
    component = next(cell for cell in cells(book["Losses"]) if str(cell.value).endswith("Main relief"))
    assert component.value == "@SUM(1)+Main relief"
    assert component.quotePrefix


def test_a_text_stays_a_text(tmp_path):
    from openpyxl import Workbook

    from heataudit.report.workbook.page import put

    book = Workbook()
    for row, text_ in enumerate(("=1+1", "-8", "#N/A", "+A\x00"), 1):
        put(book.active, row, 1, text_)
    book.save(tmp_path / "texts.xlsx")
    column = load_workbook(tmp_path / "texts.xlsx").active["A"]
    assert [(cell.value, cell.data_type) for cell in column] == [("=1+1", "s"), ("-8", "s"), ("#N/A", "s"), ("+A", "s")]
    assert [bool(cell.quotePrefix) for cell in column] == [True, True, False, True]


def test_us_units_in_headers_and_values(tmp_path):
    made = audit()
    book = book_of(made, tmp_path, "US")
    lines = table(book["Lines"])
    assert lines[1]["Drop [psi]"] == pytest.approx(1.2 * 14.503774, rel=1e-6)  # NIST SP 811
    assert "80 °C" not in text(book["Findings"])
    assert "The oil reaches 176 °F, above the 140 °F that it may have." in text(book["Findings"])


def test_a_long_cycle_is_shortened_and_says_so(tmp_path):
    made = audit(1000)
    book = book_of(made, tmp_path)
    assert len(table(book["Phases"])) == MOST_PHASES
    assert "The 200 of 1,000 phases with the most heat; phases.csv has everything." in text(book["Phases"])
    heat = (made.phases["heat_kW"] * made.phases["duration_s"] * made.phases["repeats"]).to_numpy()
    shown = shown_phases(made)
    assert heat[shown].min() >= np.delete(heat, shown).max()
    assert (np.diff(shown) > 0).all()


def test_nothing_is_cut_off(tmp_path):
    from heataudit.report.workbook.page import characters

    book = book_of(audit(12, 6, "Rather long name of a station on the shop floor, "), tmp_path)
    for sheet in book:
        for native in sheet.tables.values():
            for row in sheet[native.ref]:
                for cell in row:
                    if isinstance(cell.value, str):
                        width = sheet.column_dimensions[cell.column_letter].width
                        height = sheet.row_dimensions[cell.row].height or 15.0
                        assert characters(cell.value, bool(cell.font.b)) <= width * max(1, int(height / 13.5)), cell


def test_no_price_no_money_and_no_cooler_list_no_options(tmp_path):
    made = audit()
    cooler = replace(made.cooler, options=made.cooler.options.iloc[:0], choice=None, drop_hot_bar=None)
    made = replace(
        made, cooler=cooler, findings=(), lines=made.lines.iloc[:0],
        annual=replace(made.annual, energy_cost=None, price_per_kWh_loss=None, drive_input_kWh=None),
    )  # fmt: skip
    book = book_of(made, tmp_path)
    assert not any("Cost" in head for head in table(book["Losses"])[0])
    assert "Money" not in text(book["What if"])
    assert "Nothing was found" in text(book["Findings"])
    assert "Nothing was found" in text(book["Answer"])
