"""Dates as people and spreadsheets write them, and which number comes first."""

from __future__ import annotations

from datetime import datetime

import pytest
from hypothesis import given
from hypothesis import strategies as st

from reliability_app.session.dates import DayOrder, decide_order, in_doubt, looks_like_date, read_date, written

PLAIN_DATES = (
    *("2025-04-03", "2025/4/3", "2025.04.03", "03.04.2025", "3.4.25", "3 Apr 2025", "3. April 2025", "3-Apr-25"),
    *("April 3, 2025", "Apr 3 2025", "3rd April 2025", "3 avril 2025", "3 de abril de 2025", "3 aprile 2025"),
)
NO_DATES = (
    *("", "812", "53.2", "200-400", "1500+", "12-11-10", "31/02/2025", "13/13/2025", "2025-13-01", "2025-04-03 25:00"),
    *("soon", "3 Foo 2025", "0001-01-01T00:00+14:00", "9999-12-31T23:00-14:00", "٠٣/٠٤/٢٠٢٥", "2025-04-03" * 9),
)
DAY_FIRST, MONTH_FIRST, AMBIGUOUS = DayOrder.DAY_FIRST, DayOrder.MONTH_FIRST, DayOrder.AMBIGUOUS


@pytest.mark.parametrize(
    "text",
    [
        "2025-04-03",
        "2025/4/3",
        "2025.04.03",
        "03.04.2025",
        "3.4.25",
        "3 Apr 2025",
        "3. April 2025",
        "3-Apr-25",
        "April 3, 2025",
        "Apr 3 2025",
        "3rd April 2025",
        "3 avril 2025",
        "3 de abril de 2025",
        "3 aprile 2025",
    ],
)
def test_a_date_that_leaves_no_doubt_is_read_at_once(text: str) -> None:
    assert read_date(text) == datetime(2025, 4, 3)


@pytest.mark.parametrize(
    ("text", "hour", "minute", "second"),
    [
        ("2025-04-03 14:30", 14, 30, 0),
        ("2025-04-03T14:30:15", 14, 30, 15),
        ("2025-04-03T14:30:15.25Z", 14, 30, 15),
        ("2025-04-03T16:30+02:00", 14, 30, 0),
        ("03.04.2025 14:30:15", 14, 30, 15),
        ("Apr 3, 2025 2:30 PM", 14, 30, 0),
        ("Apr 3, 2025 12:05 a.m.", 0, 5, 0),
    ],
)
def test_the_time_of_day_is_read_with_its_date(text: str, hour: int, minute: int, second: int) -> None:
    assert read_date(text) == datetime(2025, 4, 3, hour, minute, second)


@pytest.mark.parametrize(
    "text",
    [
        "",
        "812",
        "53.2",
        "200-400",
        "1500+",
        "12-11-10",
        "31/02/2025",
        "13/13/2025",
        "2025-13-01",
        "2025-04-03 25:00",
        "soon",
        "3 Foo 2025",
        "0001-01-01T00:00+14:00",
        "9999-12-31T23:00-14:00",
        "٠٣/٠٤/٢٠٢٥",
        "2025-04-03 and much more that no date would hold",
    ],
)
def test_what_is_no_date_is_none(text: str) -> None:
    assert read_date(text) is None
    assert not looks_like_date(text)


def test_a_date_that_may_be_two_is_read_only_when_the_order_is_known() -> None:
    assert read_date("03/04/2025") is None
    assert in_doubt("03/04/2025")
    assert read_date("03/04/2025", DAY_FIRST) == datetime(2025, 4, 3)
    assert read_date("03/04/2025", MONTH_FIRST) == datetime(2025, 3, 4)
    assert read_date("04/04/2025") == datetime(2025, 4, 4)
    assert read_date("13/04/2025", MONTH_FIRST) is None


@pytest.mark.parametrize(
    ("cells", "order"),
    [
        (["03/04/2025", "13/04/2025"], DAY_FIRST),
        (["03/04/2025", "04/13/2025"], MONTH_FIRST),
        (["13/04/2025", "04/13/2025"], AMBIGUOUS),
        (["03/04/2025", "2025-04-13", "13 Apr 2025"], None),
        (["03.04.2025"], DAY_FIRST),
        (["04.13.2025"], MONTH_FIRST),
    ],
)
def test_one_date_can_prove_the_order_of_all(cells: list[str], order: DayOrder | None) -> None:
    assert decide_order(cells) is order


@given(st.datetimes(datetime(1970, 1, 1), datetime(2068, 12, 31)).map(lambda moment: moment.replace(microsecond=0)))
def test_a_date_written_is_read_back(moment: datetime) -> None:
    assert read_date(written(moment)) == moment
    assert read_date(f"{moment:%d/%m/%Y %H:%M:%S}", DAY_FIRST) == moment
    assert read_date(f"{moment:%m/%d/%y %I:%M:%S %p}", MONTH_FIRST) == moment


@given(st.text(max_size=50))
def test_any_text_is_taken_without_an_error(text: str) -> None:
    assert looks_like_date(text) == (read_date(text, DAY_FIRST) is not None or read_date(text, MONTH_FIRST) is not None)
