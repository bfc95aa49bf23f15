"""A newer table held against a set: matched by unit, oddities asked about, one undo step."""

import pytest

from reliability_app.session.document import Session, UnitSet
from reliability_app.session.new_results import BringIn, Happened, news_of
from reliability_app.session.unit_table import UnitTable


def table(text: str, extra=()) -> UnitTable:
    """Rows "unit life state [quantity] [until]" of invented units."""
    columns = ("unit", "life", "state", "quantity", "until", *extra)
    rows = [
        {column: cell for column, cell in zip(columns, line.split(","), strict=False) if cell}
        for line in text.splitlines()
    ]
    return UnitTable.from_rows(rows, extra)


BEFORE = "P-1,812,failed\nP-2,500,running\nP-3,500,running\nP-4,500,running\nP-5,300,failed"


def told(newer: str, before: str = BEFORE):
    return {news.unit: news.happened for news in news_of(table(before), table(newer)).units}


def test_each_unit_is_told_by_what_has_happened_to_it():
    newer = "P-1,812,failed\nP-2,640,failed\nP-3,700,running\nP-5,310,failed\nP-9,120,running"
    assert told(newer) == {
        "P-1": Happened.SAME,
        "P-2": Happened.NEWLY_FAILED,
        "P-3": Happened.OLDER,
        "P-5": Happened.CORRECTED,
        "P-9": Happened.NEW,
    }
    found = news_of(table(BEFORE), table(newer))
    assert found.missing == ("P-4",)
    assert found.sentence == (
        "1 newly failed, 1 still running and older, 1 new, 1 corrected, 1 unchanged, "
        "1 not in the newer table, left as they are (P-4)"
    )


@pytest.mark.parametrize(
    ("newer", "happened"),
    [
        ("P-1,900,running", Happened.RUNS_AGAIN),
        ("P-2,400,running", Happened.YOUNGER),
        ("P-2,400,failed", Happened.YOUNGER),
        ("P-2,300,found failed,,450", Happened.YOUNGER),
        ("P-1,0.812,failed", Happened.YOUNGER),
        ("P-1,820,failed", Happened.CORRECTED),
        ("P-2,450,found failed,,600", Happened.NEWLY_FAILED),
        ("P-2,500,failed", Happened.NEWLY_FAILED),
        ("P-2,many,failed", Happened.UNREAD),
    ],
)
def test_what_cannot_be_is_asked_about(newer, happened):
    news = news_of(table(BEFORE), table(newer)).units[0]
    assert news.happened is happened
    assert news.is_asked_about == news.sentence.endswith("?")


def test_the_sentence_of_an_oddity_says_both_states():
    news = news_of(table(BEFORE), table("P-1,900,running")).units[0]
    assert news.sentence == "P-1 was failed at 812, and is now running at 900: is that right?"


def test_a_name_that_stands_twice_is_matched_to_none():
    assert told("P-2,640,failed\nP-2,700,running") == {"P-2": Happened.TWICE}
    assert told("P-2,640,failed", BEFORE + "\nP-2,20,running") == {"P-2": Happened.TWICE}


def test_a_name_written_a_little_otherwise_is_asked_about_and_not_counted_twice():
    session = Session(sets=[UnitSet("A", table("P-08,500,running\nP-09,500,running\nQ1,5,failed"))])
    news = news_of(session.sets[0].table, table("p 8,640,failed\nP-09,700,running\nR1,3,failed"))
    first = news.units[0]
    assert first.sentence == "p 8 is named almost like P-08, which was running at 500: the same, now failed at 640?"
    assert [one.happened for one in news.units[1:]] == [Happened.OLDER, Happened.NEW]
    BringIn(0, news, taken={0}).apply(session)
    assert session.sets[0].table.row(0) == {"unit": "P-08", "life": "640", "state": "failed"}
    assert session.sets[0].table.row_count == 4


def test_a_row_without_a_name_is_added_and_never_guessed_to_be_an_old_one():
    found = news_of(table(BEFORE), table(",500,running"))
    assert found.units[0].happened is Happened.NEW
    assert found.units[0].row is None


def test_bringing_in_is_one_step_that_can_be_taken_back_exactly():
    session = Session(sets=[UnitSet("A", table(BEFORE + "\nP-6,1,running,,", extra=("Rig",)))])
    before = session.sets[0].table.rows()
    newer = table("P-2,640,failed,,,east\nP-9,120,running\nP-1,900,running\nP-3,400,running", extra=("Bench",))
    edit = BringIn(0, news_of(session.sets[0].table, newer))
    edit.apply(session)
    rows = session.sets[0].table.rows()
    assert rows[1] == {"unit": "P-2", "life": "640", "state": "failed", "Bench": "east"}
    assert rows[0]["state"] == "failed"
    assert rows[2]["life"] == "500"
    assert rows[-1] == {"unit": "P-9", "life": "120", "state": "running"}
    edit.revert(session)
    assert session.sets[0].table.rows() == before
    assert session.sets[0].table.extra_columns == ("Rig",)
    edit.apply(session)
    assert session.sets[0].table.rows() == rows


def test_an_oddity_is_written_only_if_the_user_says_that_it_is_right():
    session = Session(sets=[UnitSet("A", table(BEFORE))])
    news = news_of(session.sets[0].table, table("P-1,900,running\nP-3,400,running"))
    BringIn(0, news, taken={0}).apply(session)
    assert session.sets[0].table.row(0) == {"unit": "P-1", "life": "900", "state": "running"}
    assert session.sets[0].table.row(2)["life"] == "500"


def test_a_unit_now_failed_at_a_known_age_loses_its_older_interval_and_keeps_its_note():
    before = UnitTable.from_rows([{"unit": "P-1", "life": "100", "until": "200", "note": "east bench"}])
    session = Session(sets=[UnitSet("A", before)])
    newer = UnitTable.from_rows([{"unit": "P-1", "life": "160", "state": "failed"}])
    BringIn(0, news_of(before, newer)).apply(session)
    assert before.row(0) == {"unit": "P-1", "life": "160", "state": "failed", "note": "east bench"}


def test_the_same_table_again_changes_nothing():
    news = news_of(table(BEFORE), table(BEFORE.replace("812", "812.0")))
    assert not news.changes_anything
    assert news.sentence == "5 unchanged"
