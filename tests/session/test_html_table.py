"""Full precision from clipboard HTML, written here in the shape that common spreadsheets give it."""

from __future__ import annotations

import pytest

from reliability_app.session.html_table import LARGEST, HtmlCell, read_html_table, with_full_precision
from reliability_app.session.pasted_text import AS_DISPLAYED, plain_block, understand

SDVAL = """<!DOCTYPE html PUBLIC "-//W3C//DTD HTML 4.0 Transitional//EN">
<html><head><meta http-equiv="content-type" content="text/html; charset=utf-8"/>
<style type="text/css"><!-- body,div,table,thead,tbody,tfoot,tr,th,td,p { font-size:x-small } --></style></head>
<body><table cellspacing="0" border="0"><colgroup span="3" width="85"></colgroup>
<tr><td height="17" align="left">Unit</td><td align="left">Life&nbsp;(h)</td><td align="left">State</td></tr>
<tr><td height="17" align="left"><font color="#000000">P-01</font></td>
<td align="right" sdval="812.34567" sdnum="1033;0;0.0">812.3</td><td align="left">failed</td></tr>
<tr><td height="17" align="left">P &amp; Q</td><td align="right" sdval="1500" sdnum="1033;">1500</td>
<td align="left">ok</td></tr></table></body></html>"""
SDVAL_TEXT = "Unit\tLife (h)\tState\nP-01\t812.3\tfailed\nP & Q\t1500\tok\n"

XNUM = """<html xmlns:v="urn:x"><body><table border=0><!--StartFragment--> <col width=64>
 <tr height=20><td height=20 class=xl65 x:num="53.21987">53,2</td><td>F</td></tr>
 <tr height=20><td x:num="1401.4">1.401,40</td><td>S</td></tr><!--EndFragment--></table></body></html>"""


def test_digits_that_the_text_has_rounded_away_come_from_the_html() -> None:
    understood = understand(SDVAL_TEXT, SDVAL)
    assert [row["life"] for row in understood.rows] == ["812.34567", "1500"]
    assert [row["unit"] for row in understood.rows] == ["P-01", "P & Q"]
    assert understood.notes == ()
    assert understand(SDVAL_TEXT).rows[0]["life"] == "812.3"


def test_other_spelling_of_values_and_decimal_commas_are_read_too() -> None:
    understood = understand("53,2\tF\r\n1.401,40\tS\r\n", XNUM)
    assert [row["life"] for row in understood.rows] == ["53.21987", "1401.4"]


def test_bare_block_has_full_precision_too() -> None:
    assert plain_block("812.3", '<table><tr><td sdval="812.34567">812.3</td></tr></table>') == [["812.34567"]]
    assert plain_block("53,2\tF\n1.401,40\tS", XNUM, columns=["life", "state"]) == [["53.21987", "F"], ["1401.4", "S"]]


@pytest.mark.parametrize(
    ("shown", "value", "taken"),
    [
        ("53.2", "53.2499", True),
        ("53.2", "53.26", False),
        ("53,2", "53.2499", True),
        ("1,234", "1234.4", True),
        ("1,234", "1.2341", True),
        ("1.2E+03", "1234", True),
        ("1.2E+03", "1266", False),
        ("812", "812.4", True),
        ("-5.0", "-5.04", True),
        ("###", "812.25", True),
        ("2024-01-05", "45296", False),
        ("12:30", "0.520833", False),
        ("53 %", "0.53", False),
        ("failed", "1", False),
        ("53.2", "abc", False),
        ("53.2", "1e999", False),
        ("", "5", False),
    ],
)
def test_value_replaces_only_the_number_that_it_rounds_to(shown: str, value: str, taken: bool) -> None:
    assert with_full_precision([[shown]], [[HtmlCell(shown, value)]]) == [[value if taken else shown]]


def test_html_that_shows_other_cells_is_not_trusted() -> None:
    understood = understand("Unit\tLife\nP-01\t999\n", SDVAL)
    assert understood.rows[0]["life"] == "999"
    assert AS_DISPLAYED in understood.notes


def test_html_too_long_to_read_is_passed_over_and_said_to_be() -> None:
    understood = understand(SDVAL_TEXT, SDVAL + " " * LARGEST)
    assert understood.rows[0]["life"] == "812.3"
    assert AS_DISPLAYED in understood.notes


def test_html_without_values_or_without_a_table_changes_nothing() -> None:
    assert understand("812\n900", "<p>812</p><p>900</p>").notes == understand("812\n900").notes
    assert understand("812\n900", "<table><tr><td>812</td></tr></table>").rows == understand("812\n900").rows


def test_table_that_comes_as_html_alone_is_read() -> None:
    understood = understand("", SDVAL)
    assert [row["life"] for row in understood.rows] == ["812.34567", "1500"]


def test_cells_spans_breaks_and_entities_are_read() -> None:
    source = "<table><tr><th colspan=2>A<br>B</th><td><b>1</b>&nbsp;&lt;2</td></tr><tr><td>x</table><table><tr><td>y"
    cells = read_html_table(source)
    assert cells == [[HtmlCell("A B"), HtmlCell(""), HtmlCell("1 <2")], [HtmlCell("x")]]
    assert read_html_table("no table") is None


@pytest.mark.parametrize("piece", ["<td ", "<td", "<table><tr><td>", "<!--", '<td sdval="', "&#", "<" * 10])
def test_broken_html_is_read_in_linear_time(piece: str) -> None:
    source = piece * (400_000 // len(piece))
    understood = understand("812\n900", source)
    assert [row["life"] for row in understood.rows] == ["812", "900"]
