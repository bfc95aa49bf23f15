"""Changes of a table as plain records that can be carried out, taken back and carried out again, exactly."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from reliability_app.session.text_columns import TextColumns


@dataclass(frozen=True)
class BlockChange:
    """Cells written: the rows from `row` on, column by column, as they were and as they are now.

    `columns` may hold more than was asked for: a life "1500+" also writes its State cell. Where the table
    grew, `before` has empty texts for the rows that were not there.
    """

    row: int
    before: Mapping[str, Sequence[str]]
    after: Mapping[str, Sequence[str]]
    row_count_before: int
    row_count_after: int

    @property
    def columns(self) -> tuple[str, ...]:
        """The columns written to."""
        return tuple(self.after)

    @property
    def rows(self) -> range:
        """The rows written to."""
        return range(self.row, self.row + len(next(iter(self.after.values()), ())))

    def apply(self, texts: TextColumns) -> None:
        """Write what is there now."""
        texts.set_row_count(self.row_count_after)
        texts.write(self.row, self.after)

    def revert(self, texts: TextColumns) -> None:
        """Write what was there before, and shorten a table that grew."""
        texts.write(self.row, self.before)
        texts.set_row_count(self.row_count_before)


@dataclass(frozen=True)
class RowsInserted:
    """`count` empty rows inserted before `row`."""

    row: int
    count: int

    def apply(self, texts: TextColumns) -> None:
        """Insert the rows."""
        texts.insert_empty(self.row, self.count)

    def revert(self, texts: TextColumns) -> None:
        """Take the rows out again."""
        texts.take_out(range(self.row, self.row + self.count))


@dataclass(frozen=True)
class RowsDeleted:
    """Rows deleted, with the texts they held by column (columns without any text are left out)."""

    rows: Sequence[int]
    held: Mapping[str, Sequence[str]]

    def apply(self, texts: TextColumns) -> None:
        """Delete the rows."""
        texts.take_out(self.rows)

    def revert(self, texts: TextColumns) -> None:
        """Put the rows back where they were."""
        texts.put_back(self.rows, self.held)


@dataclass(frozen=True)
class RowsReordered:
    """Rows put in another order: row `order[i]` moved to place i."""

    order: Sequence[int]

    def apply(self, texts: TextColumns) -> None:
        """Put the rows in the new order."""
        texts.permute(self.order)

    def revert(self, texts: TextColumns) -> None:
        """Put the rows in the old order."""
        texts.permute(sorted(range(len(self.order)), key=self.order.__getitem__))


@dataclass(frozen=True)
class ColumnAdded:
    """An empty column added after all others."""

    name: str

    def apply(self, texts: TextColumns) -> None:
        """Add the column."""
        texts.add_column(self.name, len(texts.names))

    def revert(self, texts: TextColumns) -> None:
        """Remove the column."""
        texts.remove_column(self.name)


@dataclass(frozen=True)
class ColumnRemoved:
    """A column removed, with its place among the columns and the texts it held."""

    name: str
    position: int
    held: Sequence[str]

    def apply(self, texts: TextColumns) -> None:
        """Remove the column."""
        texts.remove_column(self.name)

    def revert(self, texts: TextColumns) -> None:
        """Put the column back in its place."""
        texts.add_column(self.name, self.position, self.held)


@dataclass(frozen=True)
class ColumnRenamed:
    """A column given another name."""

    old: str
    new: str

    def apply(self, texts: TextColumns) -> None:
        """Give the column its new name."""
        texts.rename_column(self.old, self.new)

    def revert(self, texts: TextColumns) -> None:
        """Give the column its old name."""
        texts.rename_column(self.new, self.old)


TableChange = BlockChange | RowsInserted | RowsDeleted | RowsReordered | ColumnAdded | ColumnRemoved | ColumnRenamed
