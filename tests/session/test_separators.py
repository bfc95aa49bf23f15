"""How text is split into cells."""

from __future__ import annotations

import pytest

from reliability_app.session.separators import MOST_COLUMNS, narrowed, split_text


@pytest.mark.parametrize(
    ("text", "separator", "rows"),
    [
        ("P-1\t812\tfailed\nP-2\t900\tok", "\t", [["P-1", "812", "failed"], ["P-2", "900", "ok"]]),
        ("P-1,812,failed\r\nP-2,900,ok\r\n", ",", [["P-1", "812", "failed"], ["P-2", "900", "ok"]]),
        ("P-1;812,5;failed\rP-2;900;ok", ";", [["P-1", "812,5", "failed"], ["P-2", "900", "ok"]]),
        ("P-1|812|failed\nP-2|900|ok", "|", [["P-1", "812", "failed"], ["P-2", "900", "ok"]]),
        ("812 failed\n900 ok", " ", [["812", "failed"], ["900", "ok"]]),
        ("P 1   812  failed\nP 2   900  ok", "  ", [["P 1", "812", "failed"], ["P 2", "900", "ok"]]),
        ("812 still running\n900 failed", " ", [["812", "still running"], ["900", "failed"]]),
        ('"P 1" 812 failed\n"P 2" 900 ok', " ", [["P 1", "812", "failed"], ["P 2", "900", "ok"]]),
        ("53,2\n61,8", "", [["53,2"], ["61,8"]]),
        ("Life\n53,2\n61,8", "", [["Life"], ["53,2"], ["61,8"]]),
        ("1 234,5\n2 345,6", "", [["1 234,5"], ["2 345,6"]]),
        ("812,1\n900,0\n950,1", ",", [["812", "1"], ["900", "0"], ["950", "1"]]),
        ("1,812\n2,900\n3,950", ",", [["1", "812"], ["2", "900"], ["3", "950"]]),
        ("812,5 failed\n900,1 ok", " ", [["812,5", "failed"], ["900,1", "ok"]]),
        ("812, failed\n900, ok", ",", [["812", " failed"], ["900", " ok"]]),
        ("812 h\n900 h\n950 h+", "", [["812 h"], ["900 h"], ["950 h+"]]),
        ("812 s\n900 f", " ", [["812", "s"], ["900", "f"]]),
        ("812,900,950,700", ",", [["812", "900", "950", "700"]]),
        ("sep=\t\n1\t2,5", "\t", [["1", "2,5"]]),
        ("sep=;\n1;2\n3;4", ";", [["1", "2"], ["3", "4"]]),
        ("\ufeffUnit,Life\nA,5", ",", [["Unit", "Life"], ["A", "5"]]),
        ("812\n\n900\n\n\n", "", [["812"], [""], ["900"]]),
        ("", "", []),
        (" \n \r\n", "", []),
    ],
)
def test_text_is_split_at_what_separates_its_cells(text: str, separator: str, rows: list[list[str]]) -> None:
    split = split_text(text)
    assert split.rows == rows
    assert split.separator == separator
    assert split.notes == ()


def test_quoted_cells_may_hold_separators_quotes_and_lines() -> None:
    split = split_text('Unit,Life,Note\n"P, 1",812,"left ""A"" bearing"\nP-2,900,"two\nlines"\nP-3,950,\n')
    assert split.rows[1:] == [["P, 1", "812", 'left "A" bearing'], ["P-2", "900", "two\nlines"], ["P-3", "950", ""]]
    assert split.notes == ()


def test_lone_quote_does_not_swallow_the_lines_below_it() -> None:
    lines = [f"P-{number}\t{number}00\tfailed" for number in range(1, 11)]
    lines[6] = '"' + lines[6]
    split = split_text("\n".join(lines))
    assert len(split.rows) == 10
    assert split.rows[6] == ['"P-7', "700", "failed"]
    assert split.rows[9] == ["P-10", "1000", "failed"]
    assert split.notes == ("A quotation mark in line 7 has no partner: each line was taken as one row.",)


def test_two_lone_quotes_do_not_swallow_the_lines_between_them() -> None:
    lines = [f"P-{number},{number}00,failed" for number in range(1, 21)]
    lines[2], lines[9] = '"P-3,300,failed', 'P-10,1000,"failed'
    split = split_text("\n".join(lines))
    assert len(split.rows) == 20
    assert "line 3 and 1 more" in split.notes[0]


def test_inch_marks_inside_cells_are_no_quotes() -> None:
    split = split_text('5" pump\t812\n6" pump\t900')
    assert split.rows == [['5" pump', "812"], ['6" pump', "900"]]


def test_quoted_cells_survive_beside_a_lone_quote() -> None:
    split = split_text('Unit,Life\n"A, left","1,234.5"\n"B,900\nC,950\nD,960\nE,970')
    assert split.rows[1] == ["A, left", "1,234.5"]
    assert split.rows[2:] == [['"B', "900"], ["C", "950"], ["D", "960"], ["E", "970"]]


def test_columns_beyond_the_last_are_joined_into_it() -> None:
    rows = narrowed([[f"c{number}" for number in range(1000)], ["a", "b"]])
    assert len(rows[0]) == MOST_COLUMNS
    assert rows[0][-1].split(" ")[-1] == "c999"
    assert rows[1] == ["a", "b"]
