"""What is understood of pasted tables: every table here is invented."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from reliability_app.session.numbers import DecimalMark
from reliability_app.session.pasted_text import plain_block, reread, understand
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable


def column(understood: Understanding, key: str) -> list[str]:
    return [row.get(key, "") for row in understood.rows]


@pytest.mark.parametrize("separator", ["\t", ",", ";", "|"])
@pytest.mark.parametrize("end", ["\n", "\r\n"])
def test_table_with_headings_is_understood_whatever_separates_it(separator: str, end: str) -> None:
    lines = ["Unit,Life (h),State,Qty,Temp", "P-01,812,failed,1,150", "", "P-02,1500,ok,3,170", ""]
    understood = understand(end.join(lines).replace(",", separator))
    assert understood.rows == [
        {"unit": "P-01", "life": "812", "state": "failed", "quantity": "1", "Temp": "150"},
        {"unit": "P-02", "life": "1500", "state": "running", "quantity": "3", "Temp": "170"},
    ]
    assert understood.extra_columns == ("Temp",)
    assert understood.life_unit == "h"
    assert understood.faulty == 0
    assert understood.notes == ()
    assert understood.sentence == (
        "2 rows; unit in column 1, life in column 2 ('Life (h)'), state in column 3: 'ok' read as running, "
        "quantity in column 4, 'Temp' kept beside."
    )


def test_bare_columns_are_told_apart_by_what_they_hold() -> None:
    understood = understand("1\tP-7\t812\tbroken\n2\tP-8\t1500\tsuspended\n3\tP-9\t900\tF")
    assert understood.columns == ("unit", "Column 2", "life", "state")
    assert column(understood, "life") == ["812", "1500", "900"]
    assert column(understood, "state") == ["failed", "running", "failed"]
    assert "'broken' read as failed, 'suspended' as running, 'F' as failed" in understood.sentence


def test_life_is_not_taken_from_row_numbers_or_a_stress() -> None:
    assert understand("1\t812\tF\n2\t900\tS\n3\t700\tF").columns == ("unit", "life", "state")
    assert understand("150\t812\tF\n170\t900\tS\n150\t700\tF").columns == ("Column 1", "life", "state")


def test_whole_numbers_beside_life_and_state_count_units_only_if_they_look_like_it() -> None:
    assert understand("812\tfailed\t1\n900\trunning\t12").columns == ("life", "state", "quantity")
    assert understand("812\tfailed\t150\n900\trunning\t170").columns == ("life", "state", "Column 3")


def test_small_whole_numbers_without_a_heading_are_no_states_unless_they_are_0_and_1() -> None:
    assert understand("812\t2\n900\t1").columns == ("life", "Column 2")
    assert understand("812\t1\n900\t0").columns == ("life", "state")


def test_foreign_columns_are_not_taken_for_our_own_grid() -> None:
    assert understand("A\t150\t812\tfailed\nB\t150\t900\trunning").columns == ("unit", "Column 2", "life", "state")


def test_cells_copied_from_our_own_grid_keep_their_columns() -> None:
    text = "P-1\t812\t\tfailed\t\t\tseal\tnoisy\nP-2\t200\t400\tfound failed\t2\t\t\t"
    understood = understand(text)
    assert understood.rows == [
        {"unit": "P-1", "life": "812", "state": "failed", "cause": "seal", "note": "noisy"},
        {"unit": "P-2", "life": "200", "until": "400", "state": "found failed", "quantity": "2"},
    ]


@pytest.mark.parametrize(
    ("lives", "stored", "mark"),
    [
        (["812", "53.2"], ["812", "53.2"], DecimalMark.POINT),
        (["53,2", "812"], ["53.2", "812"], DecimalMark.COMMA),
        (["1.401,40", "1.234", "53,2"], ["1401.40", "1234", "53.2"], DecimalMark.COMMA),
        (["1,401.40", "1,234"], ["1401.40", "1234"], DecimalMark.POINT),
        (["1,234", "53,2"], ["1.234", "53.2"], DecimalMark.COMMA),
        (["1 234,5", "1\u00a0234,5"], ["1234.5", "1234.5"], DecimalMark.COMMA),
        (["1'234.5", "812"], ["1234.5", "812"], DecimalMark.POINT),
        (["1.234,5+", "1.000"], ["1234.5", "1000"], DecimalMark.COMMA),
        (["1.234-2.000,5", "1.000"], ["1234", "1000"], DecimalMark.COMMA),
        (["1,234", "2,345"], ["1,234", "2,345"], DecimalMark.AMBIGUOUS),
        (["53,2", "53.2"], ["53.2", "53.2"], DecimalMark.AMBIGUOUS),
    ],
)
def test_decimal_mark_is_decided_from_the_whole_column(lives: list[str], stored: list[str], mark: DecimalMark) -> None:
    understood = understand("Unit\tLife\n" + "\n".join(f"P-{n}\t{life}" for n, life in enumerate(lives)))
    assert column(understood, "life") == stored
    assert understood.mark is mark


def test_reading_of_commas_is_said() -> None:
    assert "Life is written with decimal commas: '53,2' was read as 53.2." in understand("53,2\n61,8\n70").notes
    assert "Life has commas between thousands: '1,234' was read as 1234." in understand('Life\n"1,234"\n812.5').notes
    mixed = understand("Life\n53,2\n53.2")
    assert "Life holds decimal commas and decimal points: '53,2' was read as 53.2." in mixed.notes
    spread = understand("Life\n200 - 400\n1500 +\n1'234")
    assert "Life has apostrophes in numbers: '1'234' was read as 1234." in spread.notes
    assert "Life has spaces between thousands: '5 812' was read as 5812." in understand("5 812\n7 900\n950").notes


def test_column_in_doubt_follows_the_other_columns_of_its_table() -> None:
    understood = understand("Life\tState\tLoad\n1,234\tF\t2,5\n2,345\tS\t3,5")
    assert column(understood, "life") == ["1.234", "2.345"]
    assert column(understood, "Load") == ["2.5", "3.5"]
    pointed = understand("Life\tState\tLoad\n1.234\tF\t2,5\n2.345\tS\t3,5")
    assert column(pointed, "life") == ["1234", "2345"]
    assert "Life is written with decimal commas: '1.234' was read as 1234." in pointed.notes


def test_doubt_that_remains_is_asked_about_and_can_be_settled() -> None:
    understood = understand("Life\tState\n1,234\tF\n2,345\tS")
    assert understood.faulty == 2
    assert "Life: '1,234' may mean 1234 or 1.234; choose how commas are to be read." in understood.notes
    as_point, as_comma = reread(understood, mark=DecimalMark.POINT), reread(understood, mark=DecimalMark.COMMA)
    assert column(as_point, "life") == ["1234", "2345"]
    assert column(as_comma, "life") == ["1.234", "2.345"]
    assert as_point.faulty == as_comma.faulty == 0


def test_points_that_part_thousands_can_be_chosen() -> None:
    understood = understand("Life\tState\n1.234\tF\n2.345\tS")
    assert column(understood, "life") == ["1.234", "2.345"]
    assert column(reread(understood, mark=DecimalMark.COMMA), "life") == ["1234", "2345"]


def test_codes_in_columns_of_the_users_own_are_left_alone() -> None:
    understood = understand("Life;State;Code;Rev\n53,2;F;0012;1,2b\n61,8;S;0300;1,3")
    assert column(understood, "Code") == ["0012", "0300"]
    assert column(understood, "Rev") == ["1,2b", "1,3"]


@pytest.mark.parametrize(
    ("heading", "cells", "states"),
    [
        ("Failed?", ["yes", "no"], ["failed", "running"]),
        ("failed", ["1", "0"], ["failed", "running"]),
        ("Censored", ["1", "0"], ["running", "failed"]),
        ("censored?", ["yes", "no"], ["running", "failed"]),
        ("Still running", ["TRUE", "FALSE"], ["running", "failed"]),
        ("status (1 = running)", ["1", "0"], ["running", "failed"]),
        ("Status", ["1", "0"], ["failed", "running"]),
        ("Zustand", ["ausgefallen", "läuft"], ["failed", "running"]),
        ("défaillant", ["oui", "non"], ["failed", "running"]),
        ("Estado", ["averiado", "en servicio"], ["failed", "running"]),
        ("Stato", ["guasto", "in funzione"], ["failed", "running"]),
        ("Failed", ["x", ""], ["failed", "running"]),
        ("Censored", ["", "x"], ["failed", "running"]),
        ("status", ["2", "1"], ["failed", "running"]),
    ],
)
def test_states_are_read_in_the_light_of_their_heading(heading: str, cells: list[str], states: list[str]) -> None:
    understood = understand(f"Hours\t{heading}\n812\t{cells[0]}\n1500\t{cells[1]}")
    assert column(understood, "state") == states
    assert understood.faulty == 0


def test_convention_that_nothing_in_the_table_proves_is_said_and_can_be_turned() -> None:
    understood = understand("time,status\n306,2\n1010,1")
    assert any("2 was read as failed and 1 as running" in note for note in understood.notes)
    marked = understand("Stunden\tdefekt\n100\tx\n200\t")
    assert "Rows without a mark in the state column were read as running." in marked.notes


def test_yes_without_a_question_stays_as_typed_until_it_is_answered() -> None:
    understood = understand("812\tyes\n1500\tno\n900\tyes")
    assert column(understood, "state") == ["yes", "no", "yes"]
    assert understood.faulty == 3
    assert "State says 'yes': choose whether yes means failed or running." in understood.notes
    assert column(reread(understood, yes_means="failed"), "state") == ["failed", "running", "failed"]
    assert column(reread(understood, yes_means="running"), "state") == ["running", "failed", "running"]


def test_state_nobody_knows_stays_as_typed() -> None:
    understood = understand("Life\tState\n812\tfailed\n900\tlimbo")
    assert column(understood, "state") == ["failed", "limbo"]
    assert understood.faulty == 1
    assert "State holds words that are not known ('limbo'): type failed or running there." in understood.notes


def test_table_without_states_is_read_as_failed_and_says_so() -> None:
    understood = understand("Life\n812\n900")
    assert column(understood, "state") == ["failed", "failed"]
    assert understood.sentence == "2 rows; life in column 1, no state column: all read as failed."
    assert "every life was read as that of a unit that failed" in understood.notes[0]


def test_textbook_list_with_plus_signs_is_understood() -> None:
    for text in ("812\n900\n1500+", "812, 900, 950, 700, 1500+", "812 900 1000 1100 1500+", "812\t" * 999 + "1500+"):
        understood = understand(text)
        assert understood.rows[-1] == {"life": "1500", "state": "running"}
        assert understood.rows[0] == {"life": "812", "state": "failed"}
        assert "no state column: the lives without a sign read as failed" in understood.sentence
        assert understood.faulty == 0


def test_sum_row_is_not_read_as_a_failed_unit() -> None:
    understood = understand("Unit\tLife\nP-1\t812\nP-2\t900\nMean\t856")
    assert column(understood, "state") == ["failed", "failed", ""]
    assert understood.faulty == 1


def test_intervals_are_understood_in_their_published_form() -> None:
    understood = understand("lower,upper\n100,200\n200,Inf\n300,300\n,50\n400,NA\nx,500")
    assert understood.rows == [
        {"life": "100", "until": "200", "state": "found failed"},
        {"life": "200", "state": "running"},
        {"life": "300", "state": "failed"},
        {"life": "0", "until": "50", "state": "found failed"},
        {"life": "400", "state": "running"},
        {"life": "x", "until": "500"},
    ]
    assert understood.faulty == 1


def test_found_failed_and_late_entry_columns_are_known_by_their_headings() -> None:
    understood = understand("Life;Found failed at;State;Entered\n200;400;;0\n812;-;failed;100")
    assert understood.rows == [
        {"life": "200", "until": "400", "entered": "0"},
        {"life": "812", "state": "failed", "entered": "100"},
    ]
    assert understood.faulty == 0
    assert "Until: '-' was read as an empty cell." in understood.notes


def test_unit_behind_each_life_is_taken_off_if_there_is_one_only() -> None:
    understood = understand("Life\tState\n812 h\tF\n1.5 hrs\tS\n900\tF")
    assert column(understood, "life") == ["812", "1.5", "900"]
    assert understood.life_unit == "h"
    mixed = understand("Life\tState\n812 h\tF\n15 days\tS")
    assert column(mixed, "life") == ["812 h", "15 days"]
    assert mixed.faulty == 2


def test_title_lines_above_the_headings_are_kept_as_rows() -> None:
    understood = understand("Rig 4 week 6\nUnit;Life;State\nA;812;failed\nB;900;running")
    assert understood.rows[0] == {"unit": "Rig 4 week 6"}
    assert column(understood, "life") == ["", "812", "900"]
    assert understood.faulty == 1
    assert "The line above the headings is kept as a row, though it is no unit." in understood.notes


def test_very_wide_table_is_kept_with_its_last_columns_joined() -> None:
    understood = understand("Life\t" + "\t".join(f"c{n}" for n in range(300)) + "\n812" + "\tx" * 300)
    assert len(understood.columns) == 200
    assert understood.headings[-1].endswith("c299")
    assert "There are more than 200 columns: the last one holds all the rest." in understood.notes


def test_first_row_of_units_is_not_taken_for_headings() -> None:
    assert len(understand("P-1\t812\tfailed\nP-2\t900\trunning").rows) == 2
    assert len(understand("failed\t812\nrunning\t900").rows) == 2
    assert len(understand("no\nyes\nno").rows) == 3
    assert len(understand("life\nlife\nlife").rows) == 3
    assert len(understand("n/a\tfailed\n900\trunning\n950\tfailed").rows) == 3
    assert understand("P-1\tn/a\tfailed\nP-2\t900\trunning\nP-3\t950\tfailed").rows[0]["life"] == "n/a"


def test_headings_can_be_refused_and_called_for() -> None:
    understood = understand("Pump\tage here\nA\t812\nB\t900")
    assert understood.headings == ("Pump", "age here")
    assert len(reread(understood, headings=False).rows) == 3
    bare = understand("failed\t812\nrunning\t900")
    assert len(reread(bare, headings=True).rows) == 1


def test_meaning_of_columns_can_be_changed_and_changes_add_up() -> None:
    understood = understand("A\t812\tF\t1,234\nB\t900\tS\t2,345")
    assert understood.columns == ("unit", "life", "state", "Column 4")
    changed = reread(understood, columns={3: "life"})
    assert changed.columns == ("unit", "Column 2", "state", "life")
    settled = reread(changed, mark=DecimalMark.POINT)
    assert column(settled, "life") == ["1234", "2345"]
    assert column(settled, "Column 2") == ["812", "900"]
    existing = UnitTable.from_rows([], ["PUMP"])
    headed = understand("Pump\tLife\tState\nA\t812\tF", existing=existing)
    assert reread(reread(headed, columns={0: "unit"}), columns={0: None}).columns[0] == "PUMP"
    assert reread(settled, columns={0: None}).columns == ("Column 1", "Column 2", "state", "life")


def test_headings_that_name_a_column_of_the_table_mean_that_column() -> None:
    existing = UnitTable.from_rows([], ["Temp", "Column 4"])
    understood = understand("Life\tState\ttemp\tLoad\n812\tF\t150\t3", existing=existing)
    assert understood.columns == ("life", "state", "Temp", "Load")
    assert understand("A\t812\tF\tnew seal", existing=existing).columns == ("unit", "life", "state", "Column 4")


def test_heading_without_doubt_is_believed_above_any_cells_and_a_vague_one_above_numbers_only() -> None:
    assert understand("Life\tState\tTemp\nabc\tF\t150\ndef\tS\t170").columns == ("life", "state", "Temp")
    vague = understand("Time\tState\tHours run\n12:30\tF\t812\n13:10\tS\t900")
    assert vague.columns == ("Time", "state", "life")


def test_two_columns_of_one_name_do_not_become_one() -> None:
    existing = UnitTable.from_rows([], ["Temp"])
    understood = understand("Life\tState\tTemp\ttemp\n812\tF\t150\t7", existing=existing)
    assert understood.rows == [{"life": "812", "state": "failed", "Temp": "150", "temp (2)": "7"}]


def test_equal_headings_give_columns_of_their_own() -> None:
    understood = understand("Life\tState\tLoad\tLoad\tNote\tUnit\tNote\n812\tF\t1\t2\ta\tb\tc")
    assert understood.extra_columns == ("Load", "Load (2)", "Note (2)")
    assert understood.rows[0]["Note (2)"] == "c"


@pytest.mark.parametrize("text", ["", "\n", " \r\n\t\t\n", '""'])
def test_empty_paste_gives_no_rows_and_says_so(text: str) -> None:
    understood = understand(text)
    assert understood.rows == []
    assert understood.faulty == 0
    assert understood.sentence == "There are no rows in the text."


def test_headings_alone_give_no_rows() -> None:
    understood = understand("Unit\tLife\tState\n")
    assert understood.rows == []
    assert understood.sentence == "There are headings but no rows below."


@pytest.mark.parametrize(
    ("text", "at_column", "columns"),
    [
        ("812\n900", None, ("life",)),
        ("812\n900", "until", ("until",)),
        ("812\n900", "unit", ("life",)),
        ("failed\nok", "life", ("state",)),
        ("seal\nbearing", "cause", ("cause",)),
        ("Life\n812", "until", ("life",)),
    ],
)
def test_single_column_goes_where_the_cursor_stands_if_it_can(
    text: str, at_column: str | None, columns: tuple[str, ...]
) -> None:
    assert understand(text, at_column=at_column).columns == columns


def test_rows_go_into_the_unit_table_as_they_are() -> None:
    text = "Unit;Life;State;Qty\nA;1.401,40;F;2\nB;abc;limbo;0\nC;1500+;;\nD;1.234+;F;2,5"
    understood = understand(text)
    table = UnitTable.from_rows(understood.rows, understood.extra_columns)
    assert table.rows() == understood.rows
    assert table.counts().unread == understood.faulty == 2


@pytest.mark.parametrize(
    ("text", "cells"),
    [
        ("812", [["812"]]),
        ("left bearing, cracked", [["left bearing, cracked"]]),
        ("812\n\n900\n", [["812"], [""], ["900"]]),
        ("812\tfailed\n900\tok", [["812", "failed"], ["900", "ok"]]),
        ("812\tfailed\n900", [["812", "failed"], ["900", ""]]),
        ("\t\n\t812\n", [["", ""], ["", "812"]]),
        ("Life", [["Life"]]),
        ("Life\n812", None),
        ("Unit\tLife\nA\t812", None),
        ("", None),
    ],
)
def test_bare_block_is_told_from_a_table(text: str, cells: list[list[str]] | None) -> None:
    assert plain_block(text) == cells


def test_bare_block_has_one_decimal_mark_per_column_of_numbers() -> None:
    text = "1,5\t1.234\n53,2\t1.401,40"
    assert plain_block(text, columns=["note", "life"]) == [["1,5", "1234"], ["53,2", "1401.40"]]
    assert plain_block(text) == [["1,5", "1.234"], ["53,2", "1.401,40"]]


def big_tab(rows: int) -> str:
    return "Unit\tLife (h)\tState\n" + "".join(f"P-{n}\t{n % 977 + 1}.5\tok\n" for n in range(rows))


def big_german(rows: int) -> str:
    return "Teil;Laufzeit (h);Zustand\n" + "".join(f"P-{n};1.{n % 900 + 100},5;defekt\n" for n in range(rows))


def big_quoted(rows: int) -> str:
    return "".join(f'"P-{n}","{n % 977 + 1}","F"\n' for n in range(rows))


@pytest.mark.parametrize("text_of", [big_tab, big_german, big_quoted])
def test_a_hundred_thousand_rows_are_understood(text_of: Callable[[int], str]) -> None:
    understood = understand(text_of(100_000))
    assert len(understood.rows) == 100_000
    assert understood.faulty == 0
    assert understood.columns == ("unit", "life", "state")
