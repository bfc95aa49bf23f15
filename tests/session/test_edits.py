"""Every edit, taken back, leaves exactly the session that was there before; done again, exactly the one after."""

from collections.abc import Callable

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reliability_app.session.document import Basis, Change, HazardAsk, LifeAsk, ReliabilityAsk, Session, UnitSet
from reliability_app.session.edits import (
    AddSet,
    Block,
    BlockEdit,
    BlocksEdit,
    ChangeAsks,
    ChangeBasis,
    ChangeLifeUnit,
    ChangeTitle,
    DeleteRows,
    Edit,
    InsertRows,
    PasteRows,
    RemoveColumn,
    RemoveSet,
    RenameSet,
    ReplaceRows,
    SortRows,
)
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, UnitTable

ROWS = [
    {"unit": "P-10", "life": "812", "state": "failed"},
    {"unit": "P-2", "life": "1500", "state": "running", "quantity": "3"},
    {"unit": "P-1", "life": "n/a", "state": "failed", "Lot": "B"},
]


def small_session() -> Session:
    table = UnitTable.from_rows(ROWS, extra_columns=("Lot",))
    return Session(title="Rig 4", sets=[UnitSet("Design A", table), UnitSet("Design B")])


def whole_table(table: UnitTable) -> tuple[object, ...]:
    texts = [[table.text(row, column) for column in table.columns] for row in range(table.row_count)]
    return table.columns, texts, table.counts(), table.faults()


def content(session: Session) -> tuple[object, ...]:
    sets = [(one.name, one.basis, one.colour, whole_table(one.table)) for one in session.sets]
    return session.title, session.notes, session.life_unit, session.asks, sets


def column_texts(session: Session, column: str) -> list[str]:
    table = session.sets[0].table
    return [table.text(row, column) for row in range(table.row_count)]


EDITS: dict[str, Callable[[Session], Edit]] = {
    "cell": lambda _: BlockEdit(0, 0, ("life",), (("900",),)),
    "cell below the table": lambda _: BlockEdit(0, 6, ("life", "state"), (("1500+", ""), ("7", "ok"))),
    "several blocks": lambda _: BlocksEdit(
        0, [Block(0, ("life",), [["1"]]), Block(2, ("note", "cause"), [["a", "b"]])]
    ),
    "insert": lambda _: InsertRows(0, 1, 2),
    "delete": lambda _: DeleteRows(0, [2, 0]),
    "sort": lambda _: SortRows(0, "life", descending=True),
    "paste": lambda _: PasteRows(0, [{"life": "5", "Rig": "4"}, {"unit": "P-9", "Lot": "C"}], ("Rig", "Lot")),
    "paste with unit": lambda _: PasteRows(1, [{"life": "5", "state": "failed"}], life_unit="cycles"),
    "replace": lambda _: ReplaceRows(0, [{"life": "5", "Rig": "4"}], ("Rig",), life_unit="km"),
    "remove column": lambda _: RemoveColumn(0, "Lot"),
    "basis": lambda session: ChangeBasis(0, session.sets[0].basis, Basis(family="weibull")),
    "asks": lambda session: ChangeAsks(session.asks, (ReliabilityAsk(1000.0), HazardAsk(5.0))),
    "title": lambda session: ChangeTitle(session.title, "Rig 5"),
    "life unit": lambda session: ChangeLifeUnit(session.life_unit, "cycles"),
    "rename": lambda session: RenameSet(1, session.sets[1].name, "Design C"),
    "add set": lambda _: AddSet(1, UnitSet("Design X", UnitTable.from_rows(ROWS[:1]))),
    "remove set": lambda _: RemoveSet(0),
}
KINDS = {
    "basis": Change("basis", 0),
    "asks": Change("asks"),
    "title": Change("title"),
    "life unit": Change("life_unit"),
    "rename": Change("sets", 1),
    "add set": Change("sets", 1),
    "remove set": Change("sets", 0),
    "paste with unit": Change("units", 1),
}


@pytest.mark.parametrize("name", EDITS)
def test_undo_and_redo_are_exact(name):
    session = small_session()
    before = content(session)
    edit = EDITS[name](session)
    edit.apply(session)
    after = content(session)
    assert after != before
    edit.revert(session)
    assert content(session) == before
    edit.apply(session)
    assert content(session) == after
    edit.revert(session)
    assert content(session) == before


@pytest.mark.parametrize("name", EDITS)
def test_each_edit_tells_the_session_once_when_all_is_done(name):
    session = small_session()
    seen: list[tuple[Change, object]] = []
    session.listen(lambda change: seen.append((change, content(session))))
    edit = EDITS[name](session)
    edit.apply(session)
    after = content(session)
    edit.revert(session)
    expected = KINDS.get(name, Change("units", 0))
    assert seen == [(expected, after), (expected, content(session))]


def test_an_edit_cannot_be_applied_twice_or_taken_back_twice():
    session = small_session()
    edit = InsertRows(0, 0)
    with pytest.raises(RuntimeError, match="not in force"):
        edit.revert(session)
    edit.apply(session)
    with pytest.raises(RuntimeError, match="in force already"):
        edit.apply(session)
    assert session.sets[0].table.row_count == 4


def test_an_edit_that_fails_half_way_leaves_no_trace():
    session = small_session()
    before = content(session)
    edit = BlocksEdit(0, [Block(0, ("life",), [["1"]]), Block(0, ("no such column",), [["1"]])])
    with pytest.raises(KeyError):
        edit.apply(session)
    assert content(session) == before
    assert not edit.applied


def test_typing_a_life_with_a_plus_takes_its_state_back_too():
    session = small_session()
    edit = BlockEdit(0, 3, ("life",), (("1500+",),))
    edit.apply(session)
    assert session.sets[0].table.row(3) == {"life": "1500", "state": "running"}
    edit.revert(session)
    assert session.sets[0].table.row_count == 3


def test_pasted_rows_are_appended_and_bring_their_columns():
    session = small_session()
    PasteRows(0, [{"unit": "P-3", "life": "5", "state": "failed", "Rig": "4"}], ("Rig",)).apply(session)
    table = session.sets[0].table
    assert table.extra_columns == ("Lot", "Rig")
    assert table.row(3) == {"unit": "P-3", "life": "5", "state": "failed", "Rig": "4"}
    assert [table.row(row) for row in range(3)] == ROWS


def test_replacing_leaves_only_the_new_rows():
    session = small_session()
    ReplaceRows(0, [{"life": "5", "state": "failed"}]).apply(session)
    assert session.sets[0].table.rows() == [{"life": "5", "state": "failed"}]


def test_sorting_takes_numbers_by_size_names_as_counted_and_empty_cells_last():
    session = small_session()
    InsertRows(0, 0).apply(session)
    SortRows(0, "life").apply(session)
    assert column_texts(session, "life") == ["812", "1500", "n/a", ""]
    SortRows(0, "unit").apply(session)
    assert column_texts(session, "unit") == ["P-1", "P-2", "P-10", ""]
    SortRows(0, "unit", descending=True).apply(session)
    assert column_texts(session, "unit") == ["P-10", "P-2", "P-1", ""]


def test_sorting_keeps_the_order_of_equal_rows_both_ways():
    session = Session()
    PasteRows(0, [{"unit": str(n), "life": life} for n, life in enumerate("2121")]).apply(session)
    SortRows(0, "life").apply(session)
    assert column_texts(session, "unit") == ["1", "3", "0", "2"]
    SortRows(0, "life", descending=True).apply(session)
    assert column_texts(session, "unit") == ["0", "2", "1", "3"]


def test_sorting_copes_with_a_cell_of_ten_thousand_digits():
    session = Session()
    PasteRows(0, [{"unit": "x" + "9" * 10_000}, {"unit": "x2"}, {"unit": "x0010"}]).apply(session)
    SortRows(0, "unit").apply(session)
    assert [text[:5] for text in column_texts(session, "unit")] == ["x2", "x0010", "x9999"]


def test_only_edits_of_one_gesture_merge():
    first = ChangeAsks((LifeAsk(10.0),), (LifeAsk(9.0),), "drag 1")
    second = ChangeAsks((LifeAsk(9.0),), (LifeAsk(8.0),), "drag 1")
    merged = first.merged_with(second)
    assert isinstance(merged, ChangeAsks)
    assert (merged.old, merged.new, merged.merge_key) == ((LifeAsk(10.0),), (LifeAsk(8.0),), "drag 1")
    assert first.merged_with(ChangeAsks((LifeAsk(9.0),), (LifeAsk(8.0),), "drag 2")) is None
    assert first.merged_with(ChangeAsks((LifeAsk(9.0),), (LifeAsk(8.0),))) is None
    basis = ChangeBasis(0, Basis(), Basis(confidence=0.9), "drag 1")
    assert first.merged_with(basis) is None
    assert basis.merged_with(ChangeBasis(1, Basis(), Basis(confidence=0.9), "drag 1")) is None
    assert InsertRows(0, 0).merged_with(InsertRows(0, 0)) is None


def test_a_merged_edit_is_in_force_and_goes_back_to_the_start():
    session = small_session()
    start = session.asks
    first = ChangeAsks(start, (LifeAsk(9.0),), "drag")
    first.apply(session)
    second = ChangeAsks(session.asks, (LifeAsk(8.0),), "drag")
    second.apply(session)
    merged = first.merged_with(second)
    assert merged is not None
    merged.revert(session)
    assert session.asks == start


def test_labels_say_what_was_done():
    assert BlockEdit(0, 0, ("life",), (("1",),)).label == "typing in Life"
    assert PasteRows(0, [{}] * 1200).label == "paste of 1 200 rows"
    assert DeleteRows(0, [3]).label == "deletion of 1 row"
    assert SortRows(0, "Lot").label == "sorting by Lot"
    assert ChangeBasis(0, Basis(), Basis(confidence=0.9)).label == "change of confidence"
    assert ChangeBasis(0, Basis(), Basis(confidence=0.9, side="two")).label == "change of basis"


TEXTS = st.sampled_from(["", "812", "1500+", "200-400", "<200", "53,2", "n/a", "failed", "ok", "P-1", "-3", "2"])
COLUMNS = st.lists(st.sampled_from(BUILT_IN_COLUMNS), min_size=1, max_size=4, unique=True)


@st.composite
def table_edits(draw: st.DrawFn, session: Session) -> Edit:
    """Draw an edit that fits the table as it is now."""
    table = session.sets[0].table
    rows = st.integers(0, table.row_count + 2)
    kind = draw(st.sampled_from(["block", "insert", "delete", "sort", "paste", "replace", "column"]))
    if kind == "block":
        columns = draw(COLUMNS)
        line = st.lists(TEXTS, min_size=len(columns), max_size=len(columns))
        return BlockEdit(0, draw(rows), columns, draw(st.lists(line, min_size=1, max_size=3)))
    if kind == "insert":
        return InsertRows(0, draw(st.integers(0, table.row_count)), draw(st.integers(1, 3)))
    if kind == "delete" and table.row_count:
        return DeleteRows(0, draw(st.lists(st.integers(0, table.row_count - 1), min_size=1, max_size=4)))
    if kind == "sort":
        return SortRows(0, draw(st.sampled_from(table.columns)), draw(st.booleans()))
    if kind == "column" and table.extra_columns:
        return RemoveColumn(0, draw(st.sampled_from(table.extra_columns)))
    extra = draw(st.sampled_from(["Lot", "Rig"]))
    cells = st.dictionaries(st.sampled_from([*BUILT_IN_COLUMNS, extra]), TEXTS.filter(bool), max_size=4)
    return (ReplaceRows if kind == "replace" else PasteRows)(0, draw(st.lists(cells, max_size=3)), (extra,))


@settings(max_examples=150, deadline=None)
@given(st.data())
def test_any_sequence_of_edits_undoes_and_redoes_exactly(data):
    session = Session(sets=[UnitSet("A", UnitTable.from_rows(ROWS, extra_columns=("Lot",)))])
    states = [content(session)]
    edits = []
    for _ in range(data.draw(st.integers(1, 8))):
        edit = data.draw(table_edits(session))
        edit.apply(session)
        edits.append(edit)
        states.append(content(session))
    for edit, before in zip(reversed(edits), reversed(states[:-1]), strict=True):
        edit.revert(session)
        assert content(session) == before
    for edit, after in zip(edits, states[1:], strict=True):
        edit.apply(session)
        assert content(session) == after
