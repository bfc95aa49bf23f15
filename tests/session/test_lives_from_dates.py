"""Two columns of dates become a life in an exact unit, with nothing guessed that the table does not tell."""

from __future__ import annotations

import pytest

from reliability_app.session.date_columns import END_DATE, START_DATE
from reliability_app.session.dates import DayOrder
from reliability_app.session.pasted_text import reread, understand
from reliability_app.session.understanding import Understanding

TABLE = "Unit\tInstalled\tFailed on\nP-1\t2024-01-01\t2024-03-01\nP-2\t2024-02-01\t\nP-3\t2024-01-11\t2024-06-30\n"
ASKED = "Unit,Start,End,State\nP-1,03/04/2025,05/06/2025,failed\nP-2,04/05/2025,,running\n"


def lives(understood: Understanding) -> list[str]:
    return [row.get("life", "") for row in understood.rows]


def states(understood: Understanding) -> list[str]:
    return [row.get("state", "") for row in understood.rows]


def test_two_dates_make_a_life_and_are_kept_beside() -> None:
    understood = understand(TABLE)
    # 2024 is a leap year: 31 + 29 days; from 1 February to 30 June 150; from 11 January to 30 June 171.
    assert lives(understood) == ["60", "150", "171"]
    assert states(understood) == ["failed", "running", "failed"]
    assert understood.life_unit == "days"
    assert understood.rows[1]["Installed"] == "2024-02-01"
    assert understood.extra_columns == ("Installed", "Failed on")
    assert "life in days from the dates in column 2 ('Installed') to column 3 ('Failed on')" in understood.sentence
    assert understood.faulty == 0
    assert [understood.meaning(place) for place in range(3)] == ["unit", START_DATE, END_DATE]


def test_a_unit_without_an_end_runs_until_the_latest_date_or_the_one_given() -> None:
    understood = understand(TABLE)
    assert any("running until 2024-06-30, the latest date in the table" in note for note in understood.notes)
    again = reread(understood, data_date="2024-07-10")
    assert lives(again) == ["60", "160", "171"]
    assert any("running until 2024-07-10, the date given" in note for note in again.notes)
    assert lives(reread(again, data_date="")) == lives(understood)


@pytest.mark.parametrize(
    ("unit", "expected"),
    [("h", "1440"), ("days", "60"), ("weeks", "8.571428571"), ("years", "0.1642710472"), ("min", "86400")],
)
def test_lives_are_counted_in_the_unit_of_the_session(unit: str, expected: str) -> None:
    # 60 days: 60 / 7 weeks, 60 / 365.25 years, to ten digits.
    understood = understand(TABLE, session_unit=unit)
    assert lives(understood)[0] == expected
    assert understood.life_unit == unit


def test_a_unit_of_no_fixed_length_is_not_used() -> None:
    months = understand(TABLE, session_unit="months")
    assert months.life_unit == "days"
    assert any("Months differ in length" in note for note in months.notes)
    assert understand(TABLE, session_unit="cycles").life_unit == "days"
    assert reread(months, date_unit="weeks").life_unit == "weeks"


def test_times_of_day_make_hours() -> None:
    understood = understand("P-1\t2024-01-01 08:00\t2024-01-02 20:30\nP-2\t2024-01-01\t2024-01-03 06:00\n")
    assert lives(understood) == ["36.5", "54"]
    assert understood.life_unit == "h"


def test_an_ambiguous_order_is_asked_and_the_rows_stay_unread_until_then() -> None:
    understood = understand(ASKED)
    assert understood.faulty == 2
    assert lives(understood) == ["03/04/2025 to 05/06/2025", "since 04/05/2025"]
    (question,) = understood.questions
    assert "'03/04/2025' may be 3 April 2025 or 4 March 2025" in question.sentence
    assert [option.label for option in question.options] == ["Day first", "Month first"]
    day_first, month_first = (reread(understood, **option.choice) for option in question.options)
    # 3 April to 5 June: 63 days; 4 March to 6 May: 63; 4 May or 5 April until the latest: 32 and 31.
    assert lives(day_first) == ["63", "32"]
    assert lives(month_first) == ["63", "31"]
    assert not day_first.questions
    assert not month_first.faulty


@pytest.mark.parametrize(("proof", "first"), [("13/05/2025", "40"), ("05/13/2025", "70")])
def test_a_cell_that_can_be_read_in_one_way_decides_all(proof: str, first: str) -> None:
    understood = understand(f"Start,End\n03/04/2025,{proof}\n06/04/2025,{proof}\n")
    assert lives(understood)[0] == first
    assert not understood.questions
    assert any("'03/04/2025' were read with the" in note for note in understood.notes)


def test_an_order_in_which_units_would_end_before_they_start_is_ruled_out_and_said() -> None:
    understood = understand("Start,End\n03/04/2025,05/03/2025\n01/02/2025,03/04/2025\n")
    assert lives(understood)[0] == "60"  # 4 March to 3 May
    assert any("the other way 1 row ends before the start" in note for note in understood.notes)


def test_contradicting_dates_are_asked_for_and_none_is_guessed() -> None:
    understood = understand("Start,End,State\n13/04/2025,06/05/2025,failed\n04/13/2025,05/06/2025,failed\n")
    assert understood.questions
    assert any("write them like 2025-04-03" in note for note in understood.notes)
    assert not any(life.isdigit() for life in lives(understood))


def test_failures_and_inspections_in_columns_of_their_own_say_the_state() -> None:
    text = "Serial,Sold,Last inspection,Failure date\n7,2024-01-01,2024-08-01,2024-03-01\n8,2024-01-01,2024-08-01,\n"
    understood = understand(text)
    assert lives(understood) == ["60", "213"]
    assert states(understood) == ["failed", "running"]


def test_an_end_of_unknown_kind_is_read_as_a_failure_which_is_said_and_can_be_changed() -> None:
    understood = understand("Begin\tEnd\n2024-01-01\t2024-01-11\n")
    assert states(understood) == ["failed"]
    assert any("an end date was read as a failure" in note for note in understood.notes)
    assert states(reread(understood, end_means="running")) == ["running"]


def test_a_state_column_decides_and_a_failed_unit_without_an_end_is_not_given_one() -> None:
    understood = understand("Start\tEnd\tState\n2024-01-01\t\tfailed\n2024-01-01\t2024-01-11\tok\n2024-01-01\t\t\n")
    assert lives(understood) == ["", "10", "10"]
    assert states(understood) == ["failed", "running", "running"]
    assert understood.faulty == 1
    assert any("1 failed unit has no end date" in note for note in understood.notes)


def test_odd_dates_leave_their_rows_unread_and_are_named() -> None:
    understood = understand("Start\tFailed on\nsoon\t2024-01-11\n2024-02-01\t2024-01-11\n2024-01-01\twhenever\n")
    assert understood.faulty == 3
    assert any("2 dates could not be read (soon, row 1)" in note for note in understood.notes)
    assert any(
        "1 row ends before the start (2024-01-11 is before 2024-02-01, row 2)" in note for note in understood.notes
    )


@pytest.mark.parametrize("sign", ["-", "n/a", "still running", "today", "in service"])
def test_words_for_no_end_are_no_dates(sign: str) -> None:
    understood = understand(f"Start\tRemoved\n2024-01-01\t{sign}\n2024-01-01\t2024-01-11\n")
    assert lives(understood) == ["10", "10"]
    assert understood.faulty == 0


def test_a_column_of_lives_goes_before_dates_unless_dates_are_chosen() -> None:
    understood = understand("Unit\tLife (h)\tInstalled\tFailed\nP-1\t812\t2024-01-01\t2024-03-01\n")
    assert lives(understood) == ["812"]
    assert understood.plan is None
    chosen = reread(understood, columns={2: START_DATE, 3: END_DATE})
    assert lives(chosen) == ["60"]
    assert "Life (h)" in chosen.extra_columns
    assert lives(reread(chosen, columns={1: "life"})) == ["812"]


def test_a_number_beside_dates_is_no_life_below_headings() -> None:
    understood = understand("Unit,Installed,Failed on,Temp\nP-1,2024-01-01,2024-02-01,80\nP-2,2024-01-01,,85\n")
    assert lives(understood) == ["31", "31"]
    assert understood.rows[0]["Temp"] == "80"


def test_without_headings_the_earlier_column_is_the_start() -> None:
    understood = understand("P-1\t2024-03-01\t2024-01-01\tok\nP-2\t2024-06-30\t2024-02-01\tfailed\n")
    assert lives(understood) == ["60", "150"]


def test_eight_digits_are_dates_only_below_a_heading_for_dates() -> None:
    assert lives(understand("Unit\tInstalled\tRemoved\nP-1\t20240101\t20240301\n")) == ["60"]
    assert lives(understand("Unit\tCycles\tState\nP-1\t20240101\tfailed\n")) == ["20240101"]


def test_the_order_chosen_by_hand_goes_before_everything() -> None:
    understood = reread(understand("Start,End\n03/04/2025,13/05/2025\n"), day_order=DayOrder.MONTH_FIRST)
    assert understood.faulty == 1
    assert lives(understood) == ["03/04/2025 to 13/05/2025"]


@pytest.mark.parametrize("none", ["", "-", "still running"])
@pytest.mark.parametrize("heading", ["Failed", "Failed on", "End"])
def test_a_test_without_any_failure_yet_has_an_end_column_all_the_same(heading: str, none: str) -> None:
    understood = understand(f"Unit\tStart\t{heading}\nP-1\t2024-01-01\t{none}\nP-2\t2024-01-11\t{none}\n")
    again = reread(understood, data_date="2024-01-31")
    assert lives(again) == ["30", "20"]
    assert states(again) == ["running", "running"]


def test_a_column_of_yes_and_no_is_no_column_of_dates() -> None:
    understood = understand("Unit\tStart\tEnd\tFailed\nP-1\t2024-01-01\t2024-01-31\tyes\nP-2\t2024-01-11\t\tno\n")
    assert states(understood) == ["failed", "running"]
    assert lives(understood) == ["30", "20"]
