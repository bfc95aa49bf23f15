"""Tables out: full precision in files, the digits shown on the clipboard, and never a formula."""

import csv
import io
from pathlib import Path

import openpyxl
import pytest

from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.candidate_table import compare_quickly
from reliability_app.session.document import Basis, ReliabilityAsk, Session, UnitSet
from reliability_app.session.opening import open_file
from reliability_app.session.table_contents import (
    NO_TEST_OF_DIFFERENCE,
    candidates_table,
    readings_table,
    side_by_side_table,
    units_table,
)
from reliability_app.session.table_saving import save_table
from reliability_app.session.tables_out import (
    NumberCell,
    TableNotWritten,
    TableOut,
    as_csv,
    as_html,
    as_tab_separated,
    as_xlsx,
)
from reliability_app.session.unit_table import UnitTable

# What a spreadsheet would carry out: common practice names = + - @, tab and line break at the start of a cell.
HOSTILE = ("=1+1", "+cmd", "-2+3", "@SUM(A1)", "\t=1+1", "\r=1", "\n=1", "  =1+1", "\uff1d1+1")
# Invented: hours of two designs of pump.
LIVES = ("12040.5", "15100", "18750", "21000", "24400", "30200")


def two_sets(bound: str = "likelihood") -> Session:
    rows = [{"unit": f"P-{at}", "life": life, "state": "failed"} for at, life in enumerate(LIVES)]
    rows.append({"unit": "P-9", "life": "31000", "state": "running", "quantity": "2"})
    later = [{**row, "life": str(2.5 * float(row["life"]))} for row in rows]
    sets = [
        UnitSet("Design A", UnitTable.from_rows(rows), Basis(bound=bound)),
        UnitSet("Design B", UnitTable.from_rows(later), Basis(family="weibull", bound=bound, side="two")),
    ]
    return Session(sets=sets)


def analyses(session: Session) -> list[SetAnalysis]:
    return [analyse(Question.about(session, place)) for place in range(len(session.sets))]


def rows_of_csv(table: TableOut) -> list[list[str]]:
    return list(csv.reader(io.StringIO(as_csv(table).decode("utf-8-sig"), newline="")))


def sheet_of(table: TableOut) -> list[tuple[openpyxl.cell.cell.Cell, ...]]:
    return list(openpyxl.load_workbook(io.BytesIO(as_xlsx(table))).active.iter_rows())


@pytest.mark.parametrize("text", HOSTILE)
def test_no_text_becomes_a_formula(text: str) -> None:
    table = TableOut("T", (text, "x"), ((text, NumberCell(-2.5, "-2.5")),), (("Caution", text),))
    rows = rows_of_csv(table)
    harmless = "'" + text.replace("\r", "\n")
    assert [rows[0][0], rows[1][0], rows[-1][1]] == [harmless] * 3
    assert rows[1][1] == "-2.5"
    shown = list(csv.reader(io.StringIO(as_tab_separated(table), newline=""), delimiter="\t"))
    assert [shown[0][0], shown[1][0], shown[-1][1]] == [harmless] * 3
    assert "<td>&#x27;" in as_html(table)
    cells = sheet_of(table)
    assert [cells[0][0].data_type, cells[1][0].data_type, cells[-1][1].data_type] == ["s"] * 3
    assert cells[1][0].value.lstrip() == text.lstrip()
    assert (cells[1][1].data_type, cells[1][1].value) == ("n", -2.5)


def test_files_hold_all_digits_and_the_clipboard_those_shown() -> None:
    analysis = analyses(two_sets())[0]
    table, main = readings_table(analysis), analysis.readings[0]
    assert main.lower is not None
    row = rows_of_csv(table)[1]
    assert float(row[2]) == main.estimate
    assert float(row[3]) == main.lower
    assert sheet_of(table)[1][2].value == pytest.approx(main.estimate, rel=1e-15)  # openpyxl writes 16 digits
    estimate, lower = as_tab_separated(table).splitlines()[1].split("\t")[2:4]
    # Three digits, a lower bound downwards, without unit and thousands mark so that it is a number.
    assert float(estimate) == pytest.approx(main.estimate, rel=5e-3)
    assert len(estimate.strip("0")) <= 3
    assert main.lower * 0.99 < float(lower) <= main.lower


def test_what_it_rests_on_and_every_caution_stand_below() -> None:
    analysis = analyses(two_sets())[0]
    notes = readings_table(analysis).notes
    assert notes[0][0] == "Basis"
    assert "Lognormal, maximum likelihood, 6 failed of 8" in notes[0][1]
    assert "95 %, lower bound" in notes[0][1]
    said = [text for kind, text in notes if kind == "Caution"]
    assert {caution.text for caution in analysis.cautions} <= set(said)
    assert said[-1].startswith("A decision that can hurt people")
    assert said == [row[1] for row in rows_of_csv(readings_table(analysis)) if row and row[0] == "Caution"]


def test_sets_side_by_side_have_columns_each_and_claim_no_test() -> None:
    session = two_sets()
    session.asks = (*session.asks, ReliabilityAsk(10000.0))
    both = analyses(session)
    table = side_by_side_table(both)
    assert table.headings == (
        "Reading",
        "Design A: estimate",
        "Design A: lower",
        "Design B: estimate",
        "Design B: lower",
        "Design B: upper",
    )
    assert table.rows[0][0] == "B10 life (h)"
    assert table.rows[-1][0] == "Reliability at 10\u202f000 h"
    for place, analysis in ((1, both[0]), (3, both[1])):
        cells = [row[place] for row in table.rows]
        assert [cell.value for cell in cells] == [reading.estimate for reading in analysis.readings]
    kinds = dict(table.notes)
    assert "95 %, lower bound" in kinds["Basis of Design A"]
    assert "95 %, both bounds" in kinds["Basis of Design B"]
    assert ("Note", NO_TEST_OF_DIFFERENCE) in table.notes
    assert NO_TEST_OF_DIFFERENCE not in str(side_by_side_table(both[:1]).notes)


@pytest.mark.parametrize("suffix", [".csv", ".xlsx"])
def test_units_come_back_from_a_saved_table(tmp_path: Path, suffix: str) -> None:
    rows = [
        {"unit": "P-1", "life": "1401.40", "state": "failed", "Rig": "4", "Code": "0012"},
        {"unit": "P-2", "life": "1500", "state": "running", "quantity": "3", "Rig": "-5.5", "Code": "1200"},
    ]
    session = Session(sets=[UnitSet("Pumps", UnitTable.from_rows(rows, ("Rig", "Code")))])
    table = units_table(session, 0)
    assert [type(cell) for cell in table.rows[1][-2:]] == [NumberCell, str]  # codes keep their zeros
    save_table(table, tmp_path / f"units{suffix}")
    back = open_file(tmp_path / f"units{suffix}").session.sets[0].table
    assert back.counts() == session.sets[0].table.counts()
    assert [float(text) for text in back.texts("life")] == [1401.4, 1500.0]
    assert list(back.texts("Code")) == ["0012", "1200"]
    assert [float(text) for text in back.texts("Rig")] == [4.0, -5.5]


def test_candidates_go_out_with_their_verdict() -> None:
    compared = compare_quickly(analyses(two_sets())[0])
    assert compared is not None
    table = candidates_table(compared)
    first = compared.candidates[0]
    assert table.rows[0][0] == first.title
    assert table.rows[0][2].value == first.aicc
    assert "B10 life (h)" in table.headings
    assert ("Comparison", compared.sentence) in table.notes


def test_what_cannot_be_written_is_said_and_leaves_the_file_as_it_was(tmp_path: Path) -> None:
    table = TableOut("T", ("a",), (("x" * 40_000,),))
    there = tmp_path / "there.xlsx"
    there.write_bytes(b"earlier")
    with pytest.raises(TableNotWritten, match=r"40,000 characters in one cell.*save it as CSV"):
        save_table(table, there)
    assert there.read_bytes() == b"earlier"
    with pytest.raises(TableNotWritten, match=r"\.csv or \.xlsx"):
        save_table(table, tmp_path / "table.ods")
    with pytest.raises(TableNotWritten, match="no such file or folder"):
        save_table(table, tmp_path / "no folder" / "table.csv")
