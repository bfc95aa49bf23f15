"""Sets as wholes: coloured, hidden, moved, copied and split by a column, each one step that is taken back exactly."""

from collections.abc import Callable

import pytest

from reliability_app.session.document import Basis, Change, Session, UnitSet
from reliability_app.session.edit import Edit
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.set_edits import HideSet, MoveSet, RecolourSet, first_free, free_name, twin_of
from reliability_app.session.splitting import MOST_PARTS, CannotSplit, split_columns, split_set
from reliability_app.session.unit_table import UnitTable

# Invented: pumps of two lots, one unit of neither, one whose life cannot be read.
ROWS = [
    {"unit": "P-1", "life": "812", "state": "failed", "Lot": "B7"},
    {"unit": "P-2", "life": "1500", "state": "running", "quantity": "3", "Lot": "A2"},
    {"unit": "P-3", "life": "n/a", "state": "failed", "Lot": "B7 "},
    {"unit": "P-4", "life": "900", "state": "failed"},
    {"unit": "P-5", "life": "400", "until": "600", "state": "found failed", "Lot": "A2"},
]


def session_of_three() -> Session:
    pumps = UnitSet("Pumps", UnitTable.from_rows(ROWS, ("Lot",)), Basis(family="weibull"), colour=0)
    return Session(sets=[pumps, UnitSet("Fans", colour=1), UnitSet("Seals", colour=2)])


def content(session: Session) -> list[object]:
    return [(one.name, one.colour, one.hidden, one.basis, one.table.columns, one.table.rows()) for one in session.sets]


EDITS: dict[str, Callable[[Session], Edit]] = {
    "colour": lambda session: RecolourSet(0, session.sets[0].colour, 5),
    "hide": lambda _: HideSet(1, True),
    "move down": lambda _: MoveSet(0, 2),
    "move up": lambda _: MoveSet(2, 1),
    "split": lambda session: split_set(session, 0, "Lot"),
}


@pytest.mark.parametrize("name", EDITS)
def test_an_edit_taken_back_leaves_what_was_there_and_done_again_what_came_after(name: str) -> None:
    session = session_of_three()
    before = content(session)
    edit = EDITS[name](session)
    told: list[Change] = []
    session.listen(told.append)
    edit.apply(session)
    after = content(session)
    assert after != before
    edit.revert(session)
    assert content(session) == before
    edit.apply(session)
    assert content(session) == after
    assert [change.kind for change in told] == ["sets"] * 3
    assert all(change.set_index is not None and change.set_index < 3 for change in told)


def test_a_split_gives_every_unit_to_one_part_and_leaves_the_whole_hidden() -> None:
    session = session_of_three()
    whole = session.sets[0].table.rows()
    split_set(session, 0, "Lot").apply(session)
    assert [one.name for one in session.sets] == [
        "Pumps",
        "Pumps, B7",
        "Pumps, A2",
        "Pumps, without Lot",
        "Fans",
        "Seals",
    ]
    assert [one.hidden for one in session.sets] == [True, False, False, False, False, False]
    parts = session.sets[1:4]
    assert session.sets[0].table.rows() == whole
    assert [[row["unit"] for row in one.table.rows()] for one in parts] == [["P-1", "P-3"], ["P-2", "P-5"], ["P-4"]]
    assert sorted((row for one in parts for row in one.table.rows()), key=lambda row: row["unit"]) == whole
    assert all(one.basis == Basis(family="weibull") for one in parts)
    assert len({one.colour for one in session.sets}) == 6
    assert parts[0].table.counts().unread == 1


def test_a_set_is_split_by_what_a_unit_is_and_not_by_how_it_ended() -> None:
    rows = [{**row, "cause": "wear", "note": "hot"} for row in ROWS]
    assert split_columns(UnitTable.from_rows(rows, ("Lot", "Empty"))) == ("note", "Lot")


def test_a_column_with_one_value_splits_nothing() -> None:
    rows = [{"life": "5", "state": "failed", "Lot": "A"}] * 2
    session = Session(sets=[UnitSet("Pumps", UnitTable.from_rows(rows, ("Lot",)))])
    with pytest.raises(CannotSplit, match="holds only 'A'"):
        split_set(session, 0, "Lot")


def test_a_column_with_very_many_values_is_refused_with_what_to_do() -> None:
    rows = [{"life": "5", "state": "failed", "Serial": str(at)} for at in range(MOST_PARTS + 1)]
    session = Session(sets=[UnitSet("Pumps", UnitTable.from_rows(rows, ("Serial",)))])
    with pytest.raises(CannotSplit, match=r"21 values.*choose a column with fewer"):
        split_set(session, 0, "Serial")


def test_a_twin_goes_its_own_way() -> None:
    first = session_of_three().sets[0]
    twin = twin_of(first, name="Pumps copy", colour=3)
    assert twin.table.rows() == first.table.rows()
    twin.table.delete_rows([0])
    assert first.table.row_count == 5
    assert twin.table.row_count == 4


def test_names_and_colours_are_not_given_twice() -> None:
    session = session_of_three()
    assert free_name(session, "Fans", taken=["Fans 2"]) == "Fans 3"
    assert first_free([0, 1, 3]) == 2


def test_a_hidden_set_is_hidden_when_it_comes_back_and_others_are_written_as_before() -> None:
    session = session_of_three()
    plain = to_text(session)
    assert "hidden" not in plain
    session.sets[1].hidden = True
    again = from_text(to_text(session))
    assert [one.hidden for one in again.sets] == [False, True, False]
    again.sets[1].hidden = False
    assert to_text(again) == plain
