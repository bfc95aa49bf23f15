"""Edits of the user's own columns: one added, one given another name; each one undo step."""

from __future__ import annotations

from dataclasses import dataclass, field

from reliability_app.session.table_edits import TableEdit, heading
from reliability_app.session.unit_table import TableChange, UnitTable


@dataclass(eq=False)
class AddColumn(TableEdit):
    """Add an empty column of the user's own after all others."""

    set_index: int
    column: str
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"new column {self.column}"

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.add_column(self.column))


@dataclass(eq=False)
class RenameColumn(TableEdit):
    """Give one of the user's own columns another name."""

    set_index: int
    column: str
    new: str
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"renaming of column {heading(self.column)}"

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.rename_column(self.column, self.new))
