"""Edits of one set's unit table: cells written, rows pasted, inserted, deleted and sorted; each one undo step."""

from __future__ import annotations

from abc import abstractmethod
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from reliability_app.session.document import Change, Session
from reliability_app.session.edit import Edit
from reliability_app.session.row_order import sorted_rows
from reliability_app.session.unit_table import HEADINGS, TableChange, UnitTable


@dataclass(frozen=True)
class Block:
    """Texts for a rectangle of cells: `cells[i][j]` belongs in row `row + i`, column `columns[j]`."""

    row: int
    columns: tuple[str, ...]
    cells: Sequence[Sequence[str]]


@dataclass(frozen=True)
class Place:
    """Where in the table an edit took place: `count` rows from `row`; no columns means the rows as a whole."""

    row: int
    count: int
    columns: tuple[str, ...] = ()


class TableEdit(Edit):
    """An edit of the unit table of the set at `set_index`, as one or more steps the table can take back.

    The first `apply` carries the steps out and keeps what the table gave back for each; later ones replay these,
    so that a redo gives the very same table.
    """

    set_index: int
    _steps: list[TableChange]

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("units", self.set_index)

    @property
    def place(self) -> Place | None:
        """Where to look to see what the edit did; None where that is the whole table."""
        return None

    def _do(self, session: Session) -> None:
        table = session.sets[self.set_index].table
        if self._steps:
            for step in self._steps:
                table.reapply(step)
            return
        try:
            self._carry_out(table)
        except BaseException:
            # Half an edit must not stay: what was done so far is taken back before the fault is reported.
            self._take_back(table)
            self._steps.clear()
            raise

    def _undo(self, session: Session) -> None:
        self._take_back(session.sets[self.set_index].table)

    def _take_back(self, table: UnitTable) -> None:
        for step in reversed(self._steps):
            table.revert(step)

    @abstractmethod
    def _carry_out(self, table: UnitTable) -> None:
        """Change `table`, appending to `_steps` what the table gives back for each step."""


@dataclass(eq=False)
class BlockEdit(TableEdit):
    """Write texts into a rectangle of cells, making the table longer where it is too short.

    `doing` says what the user did, for the undo menu: "typing", "paste", "fill down".
    """

    set_index: int
    row: int
    columns: Sequence[str]
    cells: Sequence[Sequence[str]]
    doing: str = "typing"
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        if len(self.columns) == 1:
            return f"{self.doing} in {heading(self.columns[0])}"
        return f"{self.doing} in {_rows(len(self.cells))}"

    @property
    def place(self) -> Place | None:  # noqa: D102 - said by TableEdit
        return Place(self.row, len(self.cells), tuple(self.columns))

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.set_block(self.row, self.columns, self.cells))


@dataclass(eq=False)
class BlocksEdit(TableEdit):
    """Write texts into several rectangles of cells in one step (a selection need not be one piece)."""

    set_index: int
    blocks: Sequence[Block]
    doing: str = "typing"
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"{self.doing} in {len(self.blocks)} blocks"

    @property
    def place(self) -> Place | None:  # noqa: D102 - said by TableEdit
        if not self.blocks:
            return None
        first = self.blocks[0]
        return Place(first.row, len(first.cells), first.columns)

    def _carry_out(self, table: UnitTable) -> None:
        for block in self.blocks:
            self._steps.append(table.set_block(block.row, block.columns, block.cells))


@dataclass(eq=False)
class PasteRows(TableEdit):
    """Append rows that were understood from a pasted or opened table, adding the columns they bring along.

    `life_unit` is given where the table says in what unit its lives are and the session takes that over.
    """

    set_index: int
    rows: Sequence[Mapping[str, str]]
    extra_columns: Sequence[str] = ()
    doing: str = "paste"
    life_unit: str | None = None
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)
    _start: int = field(default=0, init=False, repr=False)
    _old_life_unit: str = field(default="", init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"{self.doing} of {_rows(len(self.rows))}"

    @property
    def place(self) -> Place | None:  # noqa: D102 - said by TableEdit
        return Place(self._start, len(self.rows))

    def _do(self, session: Session) -> None:
        super()._do(session)
        if self.life_unit is not None:
            self._old_life_unit, session.life_unit = session.life_unit, self.life_unit

    def _undo(self, session: Session) -> None:
        super()._undo(session)
        if self.life_unit is not None:
            session.life_unit = self._old_life_unit

    def _carry_out(self, table: UnitTable) -> None:
        self._start = table.row_count
        for name in self.extra_columns:
            if name not in table.columns:
                self._steps.append(table.add_column(name))
        used = set().union(*self.rows)
        columns = tuple(column for column in table.columns if column in used)
        cells = [[row.get(column, "") for column in columns] for row in self.rows]
        self._steps.append(table.set_block(table.row_count, columns, cells))


@dataclass(eq=False)
class ReplaceRows(PasteRows):
    """Put the rows of a pasted or opened table in the place of all rows there are."""

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"{super().label} over all rows"

    def _carry_out(self, table: UnitTable) -> None:
        if table.row_count:
            self._steps.append(table.delete_rows(range(table.row_count)))
        super()._carry_out(table)


@dataclass(eq=False)
class InsertRows(TableEdit):
    """Insert `count` empty rows before `row`."""

    set_index: int
    row: int
    count: int = 1
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"insertion of {_rows(self.count)}"

    @property
    def place(self) -> Place | None:  # noqa: D102 - said by TableEdit
        return Place(self.row, self.count)

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.insert_rows(self.row, self.count))


@dataclass(eq=False)
class DeleteRows(TableEdit):
    """Delete rows, wherever in the table they are."""

    set_index: int
    rows: Sequence[int]
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"deletion of {_rows(len(self.rows))}"

    @property
    def place(self) -> Place | None:  # noqa: D102 - said by TableEdit
        return Place(min(self.rows), 1) if self.rows else None

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.delete_rows(sorted(set(self.rows))))


@dataclass(eq=False)
class SortRows(TableEdit):
    """Order the rows by one column: numbers by size, names as people count them, empty cells last."""

    set_index: int
    column: str
    descending: bool = False
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"sorting by {heading(self.column)}"

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.reorder(sorted_rows(table.texts(self.column), descending=self.descending)))


@dataclass(eq=False)
class RemoveColumn(TableEdit):
    """Remove one of the further columns the user's table brought along, with all that is in it."""

    set_index: int
    column: str
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"removal of column {heading(self.column)}"

    def _carry_out(self, table: UnitTable) -> None:
        self._steps.append(table.remove_column(self.column))


def heading(column: str) -> str:
    """Give the heading a column is shown under; a user's own column is shown under its own name."""
    return HEADINGS.get(column, column)


def _rows(count: int) -> str:
    return "1 row" if count == 1 else f"{count:,} rows".replace(",", " ")
