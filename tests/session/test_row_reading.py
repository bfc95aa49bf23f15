"""The rules of one row, and their agreement with the quick reading of many rows."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reliability_app.session import bulk_reading
from reliability_app.session.bulk_reading import read_rows
from reliability_app.session.numbers import DecimalMark
from reliability_app.session.row_reading import (
    READ_COLUMNS,
    LifeEntry,
    canonical_cell,
    life_entry_of_row,
    read_life_entry,
    row_faults,
)
from reliability_app.session.states import FAILED, FOUND_FAILED, RUNNING
from reliability_app.session.unit_table import UnitTable


@pytest.mark.parametrize(
    ("typed", "entry"),
    [
        ("1500+", LifeEntry("1500", "", RUNNING)),
        ("1500 +", LifeEntry("1500", "", RUNNING)),
        (">1500", LifeEntry("1500", "", RUNNING)),
        (">= 1.500,5", LifeEntry("1500.5", "", RUNNING)),
        ("\u22651500", LifeEntry("1500", "", RUNNING)),
        ("<200", LifeEntry("0", "200", FOUND_FAILED)),
        ("\u2264 200", LifeEntry("0", "200", FOUND_FAILED)),
        ("200-400", LifeEntry("200", "400", FOUND_FAILED)),
        ("200 \u2013 400", LifeEntry("200", "400", FOUND_FAILED)),
        ("200..400", LifeEntry("200", "400", FOUND_FAILED)),
        ("200 to 400", LifeEntry("200", "400", FOUND_FAILED)),
        ("(200; 400]", LifeEntry("200", "400", FOUND_FAILED)),
        ("53,2-61,8", LifeEntry("53.2", "61.8", FOUND_FAILED)),
    ],
)
def test_life_that_says_more_than_an_age_is_taken_apart(typed: str, entry: LifeEntry) -> None:
    assert read_life_entry(typed) == entry


@pytest.mark.parametrize("typed", ["", "812", "-5", "1e-5", "+", ">", "<", "a-b", "2024-01-05", ">-5", "1,234+", "5-"])
def test_other_lives_are_not_taken_apart(typed: str) -> None:
    assert read_life_entry(typed) is None


def test_mark_of_the_column_holds_inside_an_entry() -> None:
    assert read_life_entry("1,234+", DecimalMark.COMMA) == LifeEntry("1.234", "", RUNNING)
    assert read_life_entry("1.234-2.000,5", DecimalMark.COMMA) == LifeEntry("1234", "2000.5", FOUND_FAILED)


@pytest.mark.parametrize(
    ("life", "until", "state", "is_spread"),
    [
        ("1500+", "", "", True),
        ("1500+", "", RUNNING, True),
        ("1500+", "", FAILED, False),
        ("1500+", "1600", "", False),
        ("200-400", "", "", True),
        ("200-400", "400.0", "", True),
        ("200-400", "500", "", False),
        ("200-400", "", FAILED, True),
        ("200-400", "", RUNNING, False),
        ("400-200", "", "", False),
        ("<200", "", FOUND_FAILED, True),
    ],
)
def test_entry_is_spread_only_over_cells_that_agree(life: str, until: str, state: str, is_spread: bool) -> None:
    assert (life_entry_of_row(life, until, state) is not None) == is_spread


@pytest.mark.parametrize(
    ("column", "typed", "stored"),
    [
        ("life", "53,2", "53.2"),
        ("life", "1,234", "1,234"),
        ("life", "abc", "abc"),
        ("quantity", "3", "3"),
        ("state", "OK", RUNNING),
        ("state", "who knows", "who knows"),
        ("note", "53,2", "53,2"),
        ("unit", "0012", "0012"),
        ("life", "", ""),
    ],
)
def test_cell_is_stored_in_canonical_form_or_as_typed(column: str, typed: str, stored: str) -> None:
    assert canonical_cell(column, typed) == stored


def faults(life: str = "", until: str = "", state: str = "", quantity: str = "", entered: str = "") -> dict[str, str]:
    return row_faults(life, until, state, quantity, entered)


@pytest.mark.parametrize(
    "row",
    [
        {"life": "812", "state": FAILED},
        {"life": "0.001", "state": RUNNING},
        {"life": "200", "until": "400", "state": FOUND_FAILED},
        {"life": "200", "until": "400"},
        {"life": "0", "until": "400"},
        {"life": "812", "state": FAILED, "quantity": "3.0", "entered": "100"},
        {"life": "200", "until": "400", "entered": "200"},
        {"life": "0", "until": "400", "entered": "0"},
        {"life": "0", "until": "200", "state": FOUND_FAILED, "entered": "50"},
    ],
)
def test_sound_row_has_no_fault(row: dict[str, str]) -> None:
    assert faults(**row) == {}


@pytest.mark.parametrize(
    ("row", "column", "says"),
    [
        ({"life": "NaN", "state": FAILED}, "life", "Life 'NaN' is not a number: type it in digits"),
        ({"life": "inf", "state": FAILED}, "life", "Life 'inf' is not a finite number: type an age"),
        ({"life": "1e999", "state": FAILED}, "life", "Life '1e999' is too large a number: type it in larger units."),
        ({"life": "-5", "state": FAILED}, "life", "Life '-5' is negative: type an age above 0."),
        ({"life": "0", "state": FAILED}, "life", "Life is 0: type an age above 0"),
        ({"life": "0", "state": RUNNING}, "life", "Life is 0"),
        ({"life": "abc", "state": FAILED}, "life", "Life 'abc' is not a number"),
        ({"life": "1,234", "state": FAILED}, "life", "may mean 1234 or 1.234: type it"),
        ({"life": "1500+", "state": FAILED}, "life", "means still running, but State says 'failed': correct one"),
        ({"life": "1500+", "until": "9"}, "life", "means still running, but Until says '9'"),
        ({"life": "200-400", "state": RUNNING}, "life", "failed between two ages, but State says 'running'"),
        ({"life": "400-200"}, "life", "runs backwards: type the lower age first."),
        ({"state": FAILED}, "life", "Life is empty: type the age at failure"),
        ({"until": "400"}, "life", "Life is empty: type the last age at which the unit was known to run, or 0."),
        ({"life": "812"}, "state", "State is empty: type failed or running."),
        ({"life": "812", "state": "who"}, "state", "State 'who' is not known: type failed, running or found failed."),
        ({"life": "200", "state": FOUND_FAILED}, "until", "Until is empty: type the age"),
        ({"life": "200", "until": "200"}, "until", "Until '200' is not above Life '200': type"),
        ({"life": "200", "until": "x"}, "until", "Until 'x' is not a number"),
        (
            {"life": "200", "until": "400", "state": FAILED},
            "until",
            "but State says failed: clear Until or change State",
        ),
        ({"life": "abc", "until": "-4"}, "until", "is not above 0"),
        (
            {"life": "812", "state": FAILED, "quantity": "0"},
            "quantity",
            "Qty '0' is not a whole number of units: type 1",
        ),
        ({"life": "812", "state": FAILED, "quantity": "2.5"}, "quantity", "Qty '2.5' is not a whole number"),
        ({"life": "812", "state": FAILED, "quantity": "-1"}, "quantity", "Qty '-1' is not a whole number"),
        ({"life": "812", "state": FAILED, "quantity": "two"}, "quantity", "Qty 'two' is not a number"),
        ({"life": "812", "state": FAILED, "quantity": "1e10"}, "quantity", "more than a thousand million units: check"),
        ({"life": "812", "state": FAILED, "entered": "812"}, "entered", "Entered '812' is not below Life '812': type"),
        ({"life": "812", "state": FAILED, "entered": "-1"}, "entered", "Entered '-1' is negative: type"),
        ({"life": "812", "state": FAILED, "entered": "?"}, "entered", "Entered '?' is not a number"),
        ({"life": "200", "until": "400", "entered": "300"}, "entered", "is not below Life '200'"),
        ({"life": "0", "until": "200", "entered": "200"}, "entered", "not below Until '200': a unit that had failed"),
        ({"life": "100", "until": "200", "entered": "250"}, "entered", "is not below Until '200'"),
        ({"life": "0", "state": RUNNING, "entered": "50"}, "entered", "is not below Life '0'"),
    ],
)
def test_fault_says_what_is_wrong_and_what_to_do(row: dict[str, str], column: str, says: str) -> None:
    found = faults(**row)
    assert says in found[column]
    assert found[column].endswith((".", ")."))


def test_all_faults_of_a_row_are_told_together() -> None:
    found = faults(life="abc", state="who", quantity="0", entered="x")
    assert list(found) == ["life", "state", "quantity", "entered"]


NUMBERS = st.sampled_from(
    ["", "0", "1", "812", "53.2", "-5", "1e999", "abc", "1,234", "1500+", "2-4", "2.5", "3.0", "1e10"]
)
ROWS = st.lists(
    st.tuples(NUMBERS, NUMBERS, st.sampled_from(["", FAILED, RUNNING, FOUND_FAILED, "who"]), NUMBERS, NUMBERS),
    min_size=1,
    max_size=20,
)


@settings(max_examples=400, deadline=None)
@given(ROWS)
def test_many_rows_at_once_are_read_by_the_rules_of_one_row(rows: list[tuple[str, str, str, str, str]]) -> None:
    readings = read_rows(dict(zip(READ_COLUMNS, zip(*rows, strict=True), strict=True)))
    for place, row in enumerate(rows):
        status = readings.status[place]
        if not any(row):
            assert status == bulk_reading.IS_EMPTY
        else:
            assert (status != bulk_reading.IS_UNREAD) == (not row_faults(*row))


def test_readings_are_the_intervals_in_which_lives_lie() -> None:
    cells = {
        "life": ["812", "1500", "200", "0"],
        "until": ["", "", "400", "50"],
        "state": [FAILED, RUNNING, FOUND_FAILED, ""],
        "quantity": ["", "3", "1", "2"],
        "entered": ["", "100", "", ""],
    }
    readings = read_rows(cells)
    assert readings.lower.tolist() == [812, 1500, 200, 0]
    assert readings.upper.tolist() == [812, np.inf, 400, 50]
    assert readings.quantity.tolist() == [1, 3, 1, 2]
    assert readings.entered.tolist() == [0, 100, 0, 0]
    assert readings.status.tolist() == [
        bulk_reading.IS_FAILED,
        bulk_reading.IS_RUNNING,
        bulk_reading.IS_FOUND_FAILED,
        bulk_reading.IS_FOUND_FAILED,
    ]


def test_a_unit_found_failed_that_entered_late_failed_between_its_entry_and_the_look() -> None:
    table = UnitTable()
    table.set_block(0, ("life", "entered"), [["<200", "50"], ["<200", ""], ["300+", "50"]])
    data = table.life_data()
    assert data.lower.tolist() == [50, 0, 300]
    assert data.upper.tolist() == [200, 200, np.inf]
    assert data.entered.tolist() == [50, 0, 50]
