"""The edit that puts a table read differently in the place of its rows, where they stand."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reliability_app.session.table_edits import PasteRows, Place
from reliability_app.session.unit_table import UnitTable


@dataclass(eq=False)
class ReadAnew(PasteRows):
    """Put rows in the place of the `count` rows from `first` on, which the same table gave when it was read before.

    Of `former_extras`, the columns it brought then, those go that it no longer brings and that no other row uses.
    """

    first: int = 0
    count: int = 0
    former_extras: Sequence[str] = ()

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "other reading of the table"

    @property
    def place(self) -> Place | None:  # noqa: D102 - said by TableEdit
        return Place(self.first, len(self.rows))

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.delete_rows(range(self.first, self.first + self.count)))
        for name in self.former_extras:
            if name not in self.extra_columns and name in table.extra_columns and _is_unused(table, name):
                self._steps.append(table.remove_column(name))
        for name in self.extra_columns:
            if name not in table.columns:
                self._steps.append(table.add_column(name))
        if self.first < table.row_count:
            self._steps.append(table.insert_rows(self.first, len(self.rows)))
        used = set().union(*self.rows)
        columns = tuple(column for column in table.columns if column in used)
        cells = [[row.get(column, "") for column in columns] for row in self.rows]
        self._steps.append(table.set_block(self.first, columns, cells))


def _is_unused(table: UnitTable, column: str) -> bool:
    return not any(table.text(row, column) for row in range(table.row_count))
