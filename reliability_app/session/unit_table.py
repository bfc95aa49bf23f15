"""The table of one set's units: texts, what each row says, why a cell cannot be read; exact undo."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import TypeVar

import numpy as np

from reliability_app.engine.life_data import LifeData
from reliability_app.session import bulk_reading
from reliability_app.session.block_entry import by_column, plan_block
from reliability_app.session.row_reading import BUILT_IN_COLUMNS, HEADINGS, READ_COLUMNS, row_faults
from reliability_app.session.states import STATES
from reliability_app.session.table_changes import (
    BlockChange,
    ColumnAdded,
    ColumnRemoved,
    ColumnRenamed,
    RowsDeleted,
    RowsInserted,
    RowsReordered,
    TableChange,
)
from reliability_app.session.text_columns import TextColumns
from reliability_app.session.unit_facts import (
    CellFault,
    ColumnNameRefused,
    Counts,
    NothingToAnalyse,
    ReadUnits,
)

__all__ = [
    "BUILT_IN_COLUMNS",
    "HEADINGS",
    "STATES",
    "BlockChange",
    "CellFault",
    "ColumnNameRefused",
    "Counts",
    "NothingToAnalyse",
    "ReadUnits",
    "TableChange",
    "TableSnapshot",
    "UnitTable",
]

_Change = TypeVar(
    "_Change", BlockChange, RowsInserted, RowsDeleted, RowsReordered, ColumnAdded, ColumnRemoved, ColumnRenamed
)


@dataclass(frozen=True, eq=False)
class TableSnapshot:
    """The whole content of a table at one moment, for `UnitTable.restore`."""

    _texts: TextColumns


class UnitTable:
    """One editable table of units.

    Texts are stored in canonical form where they are understood (see `set_block`) and as typed where not. A
    row with any faulty cell is unread: kept, shown, counted, and left out of the analysis. Rows count from 0.

    Attributes
    ----------
    revision : int
        Rises with every change; results computed from an earlier revision are stale.
    """

    def __init__(self) -> None:
        self.revision = 0
        self._texts = TextColumns(BUILT_IN_COLUMNS)
        self._readings: bulk_reading.RowReadings | None = None
        self._stale = range(0)
        self._faults_of_row: dict[int, dict[str, str]] = {}

    @classmethod
    def from_rows(cls, rows: Iterable[Mapping[str, str]], extra_columns: Sequence[str] = ()) -> UnitTable:
        """Build a table from rows given as column to text; columns that no row names stay empty.

        Raises
        ------
        ColumnNameRefused
            For an extra column that is nameless, named like a built-in one, or there twice.
        KeyError
            For a row with a column that is neither built in nor among `extra_columns`.
        """
        listed = list(rows)
        named = dict.fromkeys(column for row in listed for column in row)
        texts = {column: [row.get(column, "") for row in listed] for column in named}
        return cls.from_columns(texts, extra_columns, row_count=len(listed))

    @classmethod
    def from_columns(
        cls, texts: Mapping[str, Sequence[str]], extra_columns: Sequence[str] = (), *, row_count: int
    ) -> UnitTable:
        """Build a table from the texts of whole columns, each of length `row_count`; errors as `from_rows`."""
        table = cls()
        for name in extra_columns:
            table.add_column(name)
        if unknown := set(texts).difference(table.columns):
            raise KeyError(f"The table has no column {min(unknown)!r}.")
        table._texts.set_row_count(row_count)
        table._carry_out(plan_block(table._texts, 0, typed=texts))
        return table

    # What is in the table

    @property
    def columns(self) -> tuple[str, ...]:
        """The keys of all columns: the built-in ones, then the user's own in order."""
        return self._texts.names

    @property
    def extra_columns(self) -> tuple[str, ...]:
        """The names of the user's own columns, which are also their keys."""
        return self._texts.names[len(BUILT_IN_COLUMNS) :]

    @property
    def row_count(self) -> int:
        """The number of stored rows, empty ones among them included."""
        return self._texts.row_count

    def text(self, row: int, column: str) -> str:
        """Return the text of a cell; "" below the last row."""
        texts = self._texts.column(column)
        return texts[row] if row < len(texts) else ""

    def texts(self, column: str) -> Sequence[str]:
        """Return the texts of a column from the first row to the last: for reading only."""
        return self._texts.column(column)

    def row(self, row: int) -> dict[str, str]:
        """Return the cells of a row that hold text, by column."""
        return {column: text for column in self.columns if (text := self.text(row, column))}

    def rows(self) -> list[dict[str, str]]:
        """Return the cells that hold text of all rows, each by column: what `from_rows` takes."""
        names = [name for name in self.columns if any(self._texts.column(name))]
        if not names:
            return [{} for _ in range(self.row_count)]
        lists = (self._texts.column(name) for name in names)
        # Most rows hold text in each of these columns, and need no look at every cell.
        return [
            dict(zip(names, texts, strict=True))
            if all(texts)
            else {name: text for name, text in zip(names, texts, strict=True) if text}
            for texts in zip(*lists, strict=True)
        ]

    # What it says

    def row_is_read(self, row: int) -> bool | None:
        """Return whether a row can be read; None for an empty row."""
        if row >= self.row_count:
            return None
        status = self._up_to_date().status[row]
        return None if status == bulk_reading.IS_EMPTY else bool(status != bulk_reading.IS_UNREAD)

    def fault(self, row: int, column: str) -> str | None:
        """Return the sentence on what is wrong with a cell and what to do; None for a cell without fault."""
        if self.row_is_read(row) is not False:
            return None
        if row not in self._faults_of_row:
            self._faults_of_row[row] = row_faults(*(self.text(row, read) for read in READ_COLUMNS))
        return self._faults_of_row[row].get(column)

    def faults(self) -> list[CellFault]:
        """Return all faulty cells, row by row."""
        unread = np.flatnonzero(self._up_to_date().status == bulk_reading.IS_UNREAD)
        return [
            CellFault(row, column, self.text(row, column), reason)
            for row in unread.tolist()
            for column in READ_COLUMNS
            if (reason := self.fault(row, column))
        ]

    def counts(self) -> Counts:
        """Count units by state, and rows that cannot be read."""
        readings = self._up_to_date()
        status = readings.status
        failed, running, found_failed = (
            int(readings.quantity[status == code].sum())
            for code in (bulk_reading.IS_FAILED, bulk_reading.IS_RUNNING, bulk_reading.IS_FOUND_FAILED)
        )
        return Counts(failed, running, found_failed, int((status == bulk_reading.IS_UNREAD).sum()))

    def names(self) -> dict[int, str]:
        """Return the names of the units that have one, by row."""
        return {row: name for row, name in enumerate(self._texts.column("unit")) if name}

    def repeated_names(self) -> tuple[str, ...]:
        """Return the names of units that stand in more than one row, in table order."""
        counted = Counter(name for name in self._texts.column("unit") if name)
        return tuple(name for name, count in counted.items() if count > 1)

    def read_units(self) -> ReadUnits:
        """Return what the rows that can be read say of their units."""
        readings = self._up_to_date()
        rows = np.flatnonzero(readings.status < bulk_reading.IS_UNREAD)
        return ReadUnits(
            lower=readings.lower[rows],
            upper=readings.upper[rows],
            quantity=readings.quantity[rows],
            entered=readings.entered[rows],
            rows=tuple(rows.tolist()),
        )

    def life_data(self) -> LifeData:
        """Return the readable rows as data for the engine.

        Raises
        ------
        NothingToAnalyse
            When no row can be read, with the first reason.
        """
        units = self.read_units()
        if not units.rows:
            raise NothingToAnalyse(self._why_nothing_is_read())
        return LifeData.from_intervals(units.lower, units.upper, quantity=units.quantity, entered=units.entered)

    # Changes

    def set_block(self, row: int, columns: Sequence[str], cells: Sequence[Sequence[str]]) -> BlockChange:
        """Write texts into a rectangle of cells, growing the table as far as there is text to hold.

        Each cell is read by itself. What is understood is stored in canonical form: a state in our own word,
        a number in plain form ("1.401,40": "1401.40"), "1500+" or ">1500" as life and state, "200-400" or
        "<200" as life, until and state, if the row's other cells agree. All else stays as typed. Decimal
        marks that only a whole column can settle are settled before, by `pasted_text`.

        Parameters
        ----------
        row : int
            The first row written to; it may lie below the last row.
        columns : sequence of str
            Keys of the columns written to.
        cells : sequence of sequence of str
            One sequence per row with one text per column; shorter rows are filled up with empty cells.

        Raises
        ------
        KeyError
            For a column that the table does not have.
        ValueError
            For more cells in a row than there are columns, a column named twice, or a negative row.
        """
        if row < 0:
            raise ValueError(f"Row {row} lies above the table.")
        typed = by_column(cells, columns)
        if unknown := set(typed).difference(self.columns):
            raise KeyError(f"The table has no column {min(unknown)!r}.")
        return self._carry_out(plan_block(self._texts, row, typed=typed))

    def insert_rows(self, row: int, count: int) -> TableChange:
        """Insert empty rows before `row`; `row` may be the row count, to add at the end."""
        if not 0 <= row <= self.row_count or count < 0:
            raise ValueError(f"Cannot insert {count} rows at row {row} of {self.row_count}.")
        return self._carry_out(RowsInserted(row, count))

    def delete_rows(self, rows: Sequence[int]) -> TableChange:
        """Delete rows, given in any order; places below the last row are passed over."""
        gone = sorted({row for row in rows if 0 <= row < self.row_count})
        held = {
            column: texts for column in self.columns if any(texts := [self._texts.column(column)[row] for row in gone])
        }
        return self._carry_out(RowsDeleted(gone, held))

    def reorder(self, permutation: Sequence[int]) -> TableChange:
        """Put row `permutation[i]` in place i; it must name every row once."""
        if sorted(permutation) != list(range(self.row_count)):
            raise ValueError("The new order must name every row once.")
        return self._carry_out(RowsReordered(tuple(permutation)))

    def add_column(self, name: str) -> TableChange:
        """Add an empty column of the user's own after all others.

        Raises
        ------
        ColumnNameRefused
            For a name that is empty or taken.
        """
        self.check_column_name(name)
        return self._carry_out(ColumnAdded(name))

    def check_column_name(self, name: str, *, instead_of: str = "") -> None:
        """Raise ColumnNameRefused for a name that is empty or taken by another column than `instead_of`."""
        taken = {known.casefold() for known in (*self.columns, *HEADINGS.values()) if known != instead_of}
        if not name.strip():
            raise ColumnNameRefused("The column has no name: type one.")
        if name.casefold() in taken:
            raise ColumnNameRefused(f"There is a column '{name}' already: choose another name.")

    def remove_column(self, name: str) -> TableChange:
        """Remove one of the user's own columns.

        Raises
        ------
        KeyError
            For a column that is built in or not there.
        """
        if name not in self.extra_columns:
            raise KeyError(f"The table has no column of the user's own named {name!r}.")
        position = self.columns.index(name)
        return self._carry_out(ColumnRemoved(name, position, tuple(self._texts.column(name))))

    def rename_column(self, name: str, new: str) -> TableChange:
        """Give one of the user's own columns another name; errors as `add_column` and `remove_column`."""
        if name not in self.extra_columns:
            raise KeyError(f"The table has no column of the user's own named {name!r}.")
        self.check_column_name(new, instead_of=name)
        return self._carry_out(ColumnRenamed(name, new))

    def revert(self, change: TableChange) -> None:
        """Put back exactly what was there before `change`, the latest change not yet taken back."""
        change.revert(self._texts)
        self._note_change(change)

    def reapply(self, change: TableChange) -> None:
        """Carry out again exactly a change that was taken back."""
        change.apply(self._texts)
        self._note_change(change)

    def snapshot(self) -> TableSnapshot:
        """Return the whole content, to be given to `restore`."""
        return TableSnapshot(self._texts.copy())

    def restore(self, snapshot: TableSnapshot) -> None:
        """Bring back the content of a snapshot."""
        self._texts = snapshot._texts.copy()
        self._note_change(None)

    # Inside

    def _why_nothing_is_read(self) -> str:
        unread = np.flatnonzero(self._up_to_date().status == bulk_reading.IS_UNREAD).tolist()
        if not unread:
            return "The table is empty: type or paste the lives and states of the units."
        reason = next(reason for column in READ_COLUMNS if (reason := self.fault(unread[0], column)))
        start = "The only row cannot" if len(unread) == 1 else f"None of the {len(unread)} rows can"
        return f"{start} be read. Row {unread[0] + 1}: {reason}"

    def _carry_out(self, change: _Change) -> _Change:
        self.reapply(change)
        return change

    def _note_change(self, change: TableChange | None) -> None:
        """Count the change, and forget the readings of the rows it touched."""
        self.revision += 1
        self._faults_of_row.clear()
        if isinstance(change, BlockChange) and change.row_count_before == change.row_count_after:
            self._stale = _spanning(self._stale, change.rows)
        else:
            self._readings = None

    def _up_to_date(self) -> bulk_reading.RowReadings:
        """Return what the rows say, reading again those that changed."""
        if self._readings is None:
            self._readings = self._read(range(self.row_count))
        elif self._stale:
            rows = slice(self._stale.start, self._stale.stop)
            self._readings = self._readings.with_rows(rows, self._read(self._stale))
        self._stale = range(0)
        return self._readings

    def _read(self, rows: range) -> bulk_reading.RowReadings:
        part = slice(rows.start, rows.stop)
        cells = {column: self._texts.column(column)[part] for column in self.columns}
        return bulk_reading.read_rows(cells)


def _spanning(first: range, second: range) -> range:
    """Return the smallest range of rows that holds both."""
    if not first or not second:
        return first or second
    return range(min(first.start, second.start), max(first.stop, second.stop))
