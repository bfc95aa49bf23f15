"""The unit table: what is stored, what is read, and that every change is taken back exactly."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.unit_table import (
    BUILT_IN_COLUMNS,
    HEADINGS,
    ColumnNameRefused,
    Counts,
    NothingToAnalyse,
    TableChange,
    UnitTable,
)


def table_of(*rows: tuple[str, str]) -> UnitTable:
    return UnitTable.from_rows({"life": life, "state": state} for life, state in rows)


def content(table: UnitTable) -> tuple[tuple[str, ...], list[list[str]]]:
    rows = [[table.text(row, column) for column in table.columns] for row in range(table.row_count)]
    return table.columns, rows


def test_new_table_is_empty_and_has_the_built_in_columns() -> None:
    table = UnitTable()
    assert table.columns == BUILT_IN_COLUMNS == tuple(HEADINGS)
    assert table.extra_columns == ()
    assert table.row_count == 0
    assert table.text(0, "life") == ""
    assert table.row_is_read(0) is None
    assert table.fault(0, "life") is None
    assert table.counts() == Counts(0, 0, 0, 0)
    assert table.faults() == []


def test_rows_are_counted_with_their_quantities() -> None:
    rows = [
        {"life": "812", "state": "failed", "quantity": "2"},
        {"life": "1500", "state": "ok", "quantity": "3"},
        {"life": "200", "until": "400"},
        {"life": "abc", "state": "failed", "quantity": "7"},
        {},
        {"note": "only a remark"},
    ]
    table = UnitTable.from_rows(rows)
    assert table.counts() == Counts(failed=2, running=3, found_failed=1, unread=2)
    assert [table.row_is_read(row) for row in range(7)] == [True, True, True, False, None, False, None]


def test_readable_rows_go_to_the_engine_and_the_others_are_left_out() -> None:
    table = UnitTable.from_rows(
        [
            {"life": "812", "state": "failed", "entered": "100"},
            {"life": "nan", "state": "failed"},
            {"life": "1500", "state": "running", "quantity": "3"},
            {"life": "<200"},
        ]
    )
    units = table.read_units()
    assert units.rows == (0, 2, 3)
    assert units.lower.tolist() == [812, 1500, 0]
    assert units.upper.tolist() == [812, np.inf, 200]
    assert units.quantity.tolist() == [1, 3, 1]
    assert units.entered.tolist() == [100, 0, 0]
    data = table.life_data()
    assert data.unit_count == 5
    assert (data.failed_count, data.running_count, data.found_failed_count) == (1, 3, 1)


def test_nothing_to_analyse_says_why() -> None:
    with pytest.raises(NothingToAnalyse, match="The table is empty: type or paste"):
        UnitTable().life_data()
    with pytest.raises(NothingToAnalyse, match=r"The only row cannot be read\. Row 1: Life 'abc' is not a number"):
        table_of(("abc", "failed")).life_data()
    with pytest.raises(NothingToAnalyse, match=r"None of the 2 rows can be read\. Row 2: State is empty"):
        UnitTable.from_rows([{}, {"life": "5"}, {"life": "6"}]).life_data()
    assert issubclass(NothingToAnalyse, RigpaperError)


def test_faults_name_row_column_and_what_was_typed() -> None:
    table = table_of(("812", "failed"), ("-5", "who"))
    assert [(fault.row, fault.column, fault.typed) for fault in table.faults()] == [
        (1, "life", "-5"),
        (1, "state", "who"),
    ]
    assert table.faults()[0].reason == table.fault(1, "life") == "Life '-5' is negative: type an age above 0."
    assert table.fault(0, "life") is None
    assert table.fault(1, "note") is None


@pytest.mark.parametrize(
    ("typed", "row"),
    [
        ("1500+", {"life": "1500", "state": "running"}),
        (">1500", {"life": "1500", "state": "running"}),
        ("200-400", {"life": "200", "until": "400", "state": "found failed"}),
        ("<200", {"life": "0", "until": "200", "state": "found failed"}),
        ("53,2", {"life": "53.2"}),
        ("1.401,40", {"life": "1401.40"}),
        (" 812 ", {"life": "812"}),
        ("1,234", {"life": "1,234"}),
        ("abc", {"life": "abc"}),
    ],
)
def test_life_is_stored_in_canonical_form_or_as_typed(typed: str, row: dict[str, str]) -> None:
    table = UnitTable()
    change = table.set_block(0, ["life"], [[typed]])
    assert table.row(0) == row
    assert set(row) <= set(change.columns)
    table.revert(change)
    assert table.row_count == 0


def test_entry_that_contradicts_its_row_stays_as_typed_until_the_row_agrees() -> None:
    table = table_of(("1500+", "failed"))
    assert table.row(0) == {"life": "1500+", "state": "failed"}
    assert "still running" in str(table.fault(0, "life"))
    change = table.set_block(0, ["state"], [["ok"]])
    assert table.row(0) == {"life": "1500", "state": "running"}
    assert table.counts() == Counts(0, 1, 0, 0)
    table.revert(change)
    assert table.row(0) == {"life": "1500+", "state": "failed"}


def test_each_cell_speaks_for_itself_whatever_stands_below_it() -> None:
    table = table_of(("1,234", "failed"), ("53,2", "failed"))
    assert [table.text(row, "life") for row in (0, 1)] == ["1,234", "53.2"]
    again = UnitTable.from_rows(table.rows())
    assert content(again) == content(table)


def test_block_may_reach_below_the_table_but_empty_cells_do_not_make_rows() -> None:
    table = UnitTable()
    change = table.set_block(2, ["life", "state"], [["812", "failed"], ["", ""], ["900"], ["", " "]])
    assert (change.row_count_before, change.row_count_after) == (0, 5)
    assert [table.row(row) for row in range(5)] == [{}, {}, {"life": "812", "state": "failed"}, {}, {"life": "900"}]
    assert table.set_block(5, ["life"], [[""], ["  "]]).rows == range(5, 5)
    assert table.row_count == 5


def test_block_that_does_not_fit_is_refused_and_changes_nothing() -> None:
    table = table_of(("812", "failed"))
    before, revision = content(table), table.revision
    with pytest.raises(KeyError, match="Temp"):
        table.set_block(0, ["Temp"], [["1"]])
    with pytest.raises(ValueError, match="2 cells"):
        table.set_block(0, ["life"], [["1", "2"]])
    with pytest.raises(ValueError, match="above the table"):
        table.set_block(-1, ["life"], [["1"]])
    with pytest.raises(ValueError, match="life, life"):
        table.set_block(0, ["life", "life"], [["1", "2"]])
    assert content(table) == before
    assert table.revision == revision


def test_readings_follow_every_edit() -> None:
    table = table_of(("812", "failed"), ("900", "failed"), ("1000", "running"))
    assert table.read_units().lower.tolist() == [812, 900, 1000]
    table.set_block(1, ["life"], [["950"]])
    assert table.read_units().lower.tolist() == [812, 950, 1000]
    table.set_block(0, ["state"], [["running"]])
    table.set_block(2, ["life"], [["x"]])
    assert table.read_units().lower.tolist() == [812, 950]
    assert table.counts() == Counts(1, 1, 0, 1)
    table.reorder([2, 1, 0])
    assert table.read_units().rows == (1, 2)
    table.insert_rows(0, 2)
    assert table.read_units().rows == (3, 4)
    table.delete_rows([0, 1, 2, 99])
    assert table.read_units().lower.tolist() == [950, 812]


def test_extra_columns_keep_their_name_order_and_cells() -> None:
    table = UnitTable.from_rows([{"life": "5", "Temp": "150"}, {"life": "6", "Lot": "B"}], ["Temp", "Lot"])
    assert table.extra_columns == ("Temp", "Lot")
    before = content(table)
    removed = table.remove_column("Temp")
    assert table.columns == (*BUILT_IN_COLUMNS, "Lot")
    table.revert(removed)
    assert content(table) == before
    added = table.add_column("Load")
    table.set_block(0, ["Load"], [["3"]])
    assert table.row(0) == {"life": "5", "Temp": "150", "Load": "3"}
    assert added is not None


@pytest.mark.parametrize("name", ["life", "Life", "QTY", "quantity", "Temp", "temp", "", "  "])
def test_column_names_are_not_given_twice(name: str) -> None:
    table = UnitTable()
    table.add_column("Temp")
    with pytest.raises(ColumnNameRefused):
        table.add_column(name)
    assert table.extra_columns == ("Temp",)


def test_what_is_no_column_or_row_is_refused() -> None:
    table = table_of(("812", "failed"), ("900", "failed"))
    with pytest.raises(KeyError):
        table.remove_column("life")
    with pytest.raises(KeyError, match="Temp"):
        UnitTable.from_rows([{"Temp": "1"}])
    with pytest.raises(ValueError, match="every row once"):
        table.reorder([0, 0])
    with pytest.raises(ValueError, match="Cannot insert"):
        table.insert_rows(3, 1)


def test_snapshot_brings_everything_back() -> None:
    table = UnitTable.from_rows([{"life": "5", "Temp": "150", "state": "failed"}], ["Temp"])
    before, snapshot = content(table), table.snapshot()
    table.set_block(0, ["life"], [["7"], ["8"]])
    table.remove_column("Temp")
    revision = table.revision
    table.restore(snapshot)
    assert content(table) == before
    assert table.revision > revision
    assert table.read_units().lower.tolist() == [5]
    table.set_block(0, ["life"], [["9"]])
    table.restore(snapshot)
    assert content(table) == before


def test_rows_round_trip() -> None:
    rows = [{"unit": "P-1", "life": "812", "state": "failed"}, {}, {"life": "1,234", "Temp": "x"}]
    table = UnitTable.from_rows(rows, ["Temp"])
    assert table.rows() == rows
    assert [table.row(row) for row in range(3)] == rows
    assert UnitTable.from_rows([{}, {}]).rows() == [{}, {}]


TEXTS = st.sampled_from(["", "812", "53,2", "1500+", "<200", "200-400", "failed", "ok", "who", "3", "abc", "1,234"])
COLUMNS = st.lists(st.sampled_from(BUILT_IN_COLUMNS[:6]), min_size=1, max_size=4, unique=True)


@st.composite
def table_steps(draw: st.DrawFn) -> Callable[[UnitTable], TableChange]:
    """Draw one change of whatever table is there when it is carried out."""
    kind = draw(st.sampled_from(["block", "block", "block", "insert", "delete", "reorder", "add", "remove"]))
    number = draw(st.integers(min_value=0, max_value=5))
    columns = draw(COLUMNS)
    cells = draw(st.lists(st.lists(TEXTS, max_size=len(columns)), max_size=4))
    seed = draw(st.randoms(use_true_random=False))

    def step(table: UnitTable) -> TableChange:
        places = list(range(table.row_count))
        if kind == "insert":
            return table.insert_rows(min(number, table.row_count), number)
        if kind == "delete":
            return table.delete_rows(seed.sample(places, min(number, len(places))))
        if kind == "reorder":
            seed.shuffle(places)
            return table.reorder(places)
        if kind == "add" or (kind == "remove" and not table.extra_columns):
            return table.add_column(f"Extra {table.revision}")
        if kind == "remove":
            return table.remove_column(table.extra_columns[0])
        return table.set_block(number, columns, cells)

    return step


@settings(max_examples=2500, deadline=None)
@given(st.lists(table_steps(), max_size=8))
def test_any_run_of_changes_is_taken_back_and_carried_out_again_exactly(
    steps: list[Callable[[UnitTable], TableChange]],
) -> None:
    table = UnitTable()
    states, changes = [content(table)], []
    for step in steps:
        changes.append(step(table))
        states.append(content(table))
        table.counts()
    for change, state in zip(reversed(changes), reversed(states[:-1]), strict=True):
        table.revert(change)
        assert content(table) == state
    for change, state in zip(changes, states[1:], strict=True):
        revision = table.revision
        table.reapply(change)
        assert content(table) == state
        assert table.revision > revision
    fresh = UnitTable.from_rows(table.rows(), table.extra_columns)
    assert content(fresh) == content(table)
    assert fresh.counts() == table.counts()
    assert fresh.faults() == table.faults()
