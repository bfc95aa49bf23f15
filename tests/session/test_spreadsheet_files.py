"""Sheets of spreadsheet files: every digit, every kind of cell, the right sheet, and a sentence for what is broken."""

from __future__ import annotations

import re
import time
import zipfile
from datetime import datetime, timedelta
from pathlib import Path

import pytest
from openpyxl import load_workbook

from reliability_app.session.pasted_text import reread
from reliability_app.session.spreadsheet_files import ERRORS_UNSEEN, MERGED
from reliability_app.session.table_errors import NoSuchSheet
from reliability_app.session.table_files import TableUnreadable, read_table
from tests.session.spreadsheet_samples import compound_file, write_ods, write_xls, write_xlsx, zip_of

UNITS = [["Unit", "Life (h)", "State"], ["P-1", 812.123456789012, "failed"], ["P-2", 1500, "läuft"]]
ROWS = [
    {"unit": "P-1", "life": "812.123456789012", "state": "failed"},
    {"unit": "P-2", "life": "1500", "state": "running"},
]


@pytest.mark.parametrize("write", [write_xlsx, write_ods, write_xls])
@pytest.mark.parametrize("name", ["rig.xlsx", "rig.csv"])
def test_a_sheet_is_read_with_every_digit_whatever_its_file_is_called(write, name: str, tmp_path: Path) -> None:
    understood = read_table(write(tmp_path / f"made.{write.__name__[6:]}", {"Rig": UNITS}).rename(tmp_path / name))
    assert understood.rows == ROWS
    assert understood.life_unit == "h"
    assert understood.notes == ()


def test_the_first_sheet_that_reads_as_units_is_taken_and_the_others_are_named(tmp_path: Path) -> None:
    sheets = {"Cover": [["Fatigue test, invented"]], "Void": [], "A": UNITS, "B": [["Life"], [5], [7]]}
    path = write_xlsx(tmp_path / "rig.xlsx", sheets)
    understood = read_table(path)
    assert understood.rows == ROWS
    assert understood.sentence.startswith("Sheet 'A': 2 rows")
    assert "The file has other sheets, which were not read: 'Cover', 'B'." in understood.notes
    assert [row["life"] for row in reread(understood, sheet="B").rows] == ["5", "7"]
    assert [row["life"] for row in read_table(path, sheet="B").rows] == ["5", "7"]
    with pytest.raises(NoSuchSheet, match=r"has no sheet 'C'. Its sheets are: 'Cover', 'Void', 'A', 'B'"):
        read_table(path, sheet="C")
    with pytest.raises(TableUnreadable, match=r"Sheet 'Void' of .* holds no rows"):
        read_table(path, sheet="Void")


@pytest.mark.parametrize(("write", "seen"), [(write_xls, False), (write_ods, False), (write_xlsx, True)])
def test_a_gap_that_may_be_an_error_is_pointed_out(write, seen: bool, tmp_path: Path) -> None:
    rows = [["Unit", "Life (h)", "State"], ["P-1", 812.5, "failed"], ["P-2", "", "running"]]
    understood = read_table(write(tmp_path / f"rig.{write.__name__[6:]}", {"Rig": rows}))
    assert (ERRORS_UNSEEN in understood.notes) is not seen


def test_hidden_sheets_are_not_offered(tmp_path: Path) -> None:
    path = write_xlsx(tmp_path / "rig.xlsx", {"Hidden": UNITS, "Shown": [["Life"], [5]]})
    book = load_workbook(path)
    book["Hidden"].sheet_state = "hidden"
    book.save(path)
    understood = read_table(path)
    assert understood.source.sheet == "Shown"
    assert understood.notes[0].startswith("The table has no state column")


def test_every_kind_of_cell_says_what_it_shows(tmp_path: Path) -> None:
    rows = [
        ["Unit", "Life", "Failed?", "Begun", "Text"],
        ["P-1", timedelta(hours=812, minutes=30), True, datetime(2025, 4, 3), "0012"],
        ["P-2", timedelta(hours=5), False, datetime(2025, 4, 3, 14, 30), "A, 5"],
    ]
    path = write_xlsx(tmp_path / "rig.xlsx", {"Rig": rows})
    book = load_workbook(path)
    for cell in ("B2", "B3"):
        book["Rig"][cell].number_format = "[h]:mm"
    book.save(path)
    understood = read_table(path)
    assert understood.rows == [
        {"unit": "P-1", "life": "812.5", "state": "failed", "Begun": "2025-04-03", "Text": "0012"},
        {"unit": "P-2", "life": "5", "state": "running", "Begun": "2025-04-03 14:30:00", "Text": "A, 5"},
    ]
    assert understood.life_unit == "h"


def test_an_error_and_a_formula_without_a_value_are_no_gaps_that_go_unsaid(tmp_path: Path) -> None:
    rows = [["Unit", "Installed", "Failed on"], ["P-1", "2024-01-01", "#DIV/0!"], ["P-2", "2024-01-01", "2024-01-11"]]
    understood = read_table(write_xlsx(tmp_path / "rig.xlsx", {"Rig": rows}))
    assert understood.rows[0]["Failed on"] == "#DIV/0!"
    assert "life" not in understood.rows[0]  # an error is no sign that the unit still runs
    assert understood.faulty == 1
    understood = read_table(write_xlsx(tmp_path / "rig.xlsx", {"Rig": [["Unit", "Life"], ["P-1", "=1+1"], ["P-2", 5]]}))
    assert any(note.startswith("1 formula has no stored value") for note in understood.notes)
    assert understood.rows[0]["life"] == "=1+1"
    assert understood.faulty == 1


def test_an_empty_text_that_a_formula_gave_is_an_empty_cell(tmp_path: Path) -> None:
    rows = [["Unit", "Installed", "Failed on"], ["P-1", "2024-01-01", "EMPTY"], ["P-2", "2024-01-01", "2024-01-11"]]
    path = write_xlsx(tmp_path / "rig.xlsx", {"Rig": rows})
    with zipfile.ZipFile(path) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    sheet = "xl/worksheets/sheet1.xml"
    # As spreadsheet programs store the value of =IF(A1="","",A1): a text of no letters.
    given = re.sub(rb'<c r="C2"[^>]*>.*?</c>', b'<c r="C2" t="str"><f>IF(D2="","",D2)</f><v></v></c>', parts[sheet])
    assert given != parts[sheet]
    path.write_bytes(zip_of({**parts, sheet: given}))
    understood = read_table(path)
    assert [row["state"] for row in understood.rows] == ["running", "failed"]
    assert not any("stored value" in note for note in understood.notes)


def test_leading_space_titles_and_merged_cells(tmp_path: Path) -> None:
    rows: list[list[object]] = [[], [], [None, None, "Invented data"], []]
    rows += [[None, "Lot", "Unit", "Life (h)", "State"]]
    rows += [[None, "L1", "P-1", 5, "failed"], [None, None, "P-2", 7, "ok"], [None, "L2", "P-3", 9, "failed"]]
    path = write_xlsx(tmp_path / "rig.xlsx", {"Rig": rows})
    book = load_workbook(path)
    book["Rig"].merge_cells("B6:B7")
    book["Rig"].merge_cells("C3:E3")
    book.save(path)
    understood = read_table(path)
    assert [row.get("Lot") for row in understood.rows] == [None, "L1", "L1", "L2"]
    assert [row.get("life") for row in understood.rows] == [None, "5", "7", "9"]
    assert understood.notes[0] == MERGED
    assert any("line above the headings" in note for note in understood.notes)


def test_numbers_stay_numbers_beside_texts_with_decimal_commas(tmp_path: Path) -> None:
    # A text column proves the comma for texts; 1.234 came as a number and is not read anew.
    rows = [["Unit", "Life", "Temp"], ["P-1", 1.234, "53,25"], ["P-2", 2.345, "61,5"], ["P-3", "7,5", "1.401,40"]]
    understood = read_table(write_xlsx(tmp_path / "rig.xlsx", {"Rig": rows}))
    assert [row["life"] for row in understood.rows] == ["1.234", "2.345", "7.5"]
    assert [row["Temp"] for row in understood.rows] == ["53.25", "61.5", "1401.40"]


def test_dates_of_all_formats_become_lives(tmp_path: Path) -> None:
    expected = ["10", "20"]
    rows = [["Unit", "Start", "End"], ["P-1", "2024-01-01", "2024-01-11"], ["P-2", "2024-01-01", "2024-01-21"]]
    assert [row["life"] for row in read_table(write_ods(tmp_path / "rig.ods", {"Rig": rows})).rows] == expected
    real = [rows[0], *([name, *map(datetime.fromisoformat, dates)] for name, *dates in rows[1:])]
    path = write_xlsx(tmp_path / "rig.xlsx", {"Rig": real})
    assert [row["life"] for row in read_table(path).rows] == expected
    book = load_workbook(path)
    book.epoch = datetime(1904, 1, 1)  # the other count of days that spreadsheets use
    book.save(path)
    assert read_table(path).rows[0]["Start"] == "2024-01-01"


@pytest.mark.parametrize(
    ("name", "data", "says"),
    [
        ("rig.xlsx", b"PK\x03\x04....", "is broken, or no spreadsheet file"),
        ("rig.ods", b"PK\x03\x04....", "is broken, or no spreadsheet file"),
        ("rig.xls", b"\xd0\xcf\x11\xe0....", "is broken, or no spreadsheet file"),
        ("rig.xlsx", zip_of({"a.txt": b"no sheet"}), "is broken, or no spreadsheet file"),
        ("rig.xls", compound_file("WordDocument", b"x"), "is broken, or no spreadsheet file"),
        ("rig.xlsx", compound_file("EncryptedPackage", b"x"), "is protected by a password"),
        ("rig.xlsx", b"", "is empty"),
        ("rig.xls", b'<?xml version="1.0"?><Workbook>', "written as XML: save it as XLSX"),
    ],
)
def test_what_cannot_be_read_is_refused_with_a_sentence(tmp_path: Path, name: str, data: bytes, says: str) -> None:
    path = tmp_path / name
    path.write_bytes(data)
    with pytest.raises(TableUnreadable, match=says) as refused:
        read_table(path)
    assert str(path) in str(refused.value)
    assert str(refused.value).endswith(".")


def test_a_protected_ods_is_refused_with_a_sentence(tmp_path: Path) -> None:
    with pytest.raises(TableUnreadable, match="is protected by a password"):
        read_table(write_ods(tmp_path / "rig.ods", {"Rig": UNITS}, encrypted=True))


@pytest.mark.parametrize("name", ["rig.xlsx", "rig.txt"])
def test_text_under_the_name_of_a_spreadsheet_is_read(tmp_path: Path, name: str) -> None:
    path = tmp_path / name
    path.write_text("Unit,Life,State\nP-1,812,failed\n", encoding="utf-8")
    assert read_table(path).rows == [{"unit": "P-1", "life": "812", "state": "failed"}]
    path.write_text("<html><table><tr><td>Unit<td>Life</tr><tr><td>P-1<td>812</tr></table></html>", encoding="utf-8")
    assert read_table(path).rows == [{"unit": "P-1", "life": "812", "state": "failed"}]


def test_a_cell_at_the_far_end_of_a_sheet_does_not_take_all_memory(tmp_path: Path) -> None:
    path = write_xlsx(tmp_path / "rig.xlsx", {"Rig": UNITS})
    book = load_workbook(path)
    book["Rig"]["XFD1048576"] = 1
    book.save(path)
    with pytest.raises(TableUnreadable, match="reaches to cell XFD1048576, too far to be read"):
        read_table(path)


def test_a_torn_file_gives_its_rows_or_a_sentence_wherever_it_is_torn(tmp_path: Path) -> None:
    whole = write_xlsx(tmp_path / "whole.xlsx", {"Rig": UNITS}).read_bytes()
    path = tmp_path / "rig.xlsx"
    said = []
    for place in range(0, len(whole), 97):
        path.write_bytes(whole[:place] + bytes(40) + whole[place + 40 :])
        try:
            said.append(read_table(path).sentence)
        except TableUnreadable as refused:
            said.append(str(refused))
    assert all(sentence.endswith(".") for sentence in said)
    assert sum("is broken" in sentence for sentence in said) > 10


@pytest.mark.parametrize(
    "sheet",
    [b'<c t="e" r="A1">' * 50_000, b'<c r="A1"><f>' * 50_000, b'<c t="e"' + b' r="A1"' * 100_000, b"<c" * 100_000],
)
def test_nonsense_in_a_sheet_does_not_make_the_search_for_errors_slow(sheet: bytes, tmp_path: Path) -> None:
    with zipfile.ZipFile(write_xlsx(tmp_path / "rig.xlsx", {"Rig": UNITS})) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    path = tmp_path / "torn.xlsx"
    path.write_bytes(zip_of({**parts, "xl/worksheets/sheet1.xml": sheet}))
    start = time.perf_counter()
    with pytest.raises(TableUnreadable):
        read_table(path)
    # A tenth of a second as measured; what grows with the square of the length takes minutes.
    assert time.perf_counter() - start < 10
