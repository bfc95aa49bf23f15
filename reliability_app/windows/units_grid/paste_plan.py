"""Decides what a paste means, cell by cell or as a table understood, and makes one edit of it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reliability_app.session.edits import BlockEdit, Edit, PasteRows, ReplaceRows
from reliability_app.session.pasted_text import plain_block, understand
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.units_grid.block_commands import tiled
from reliability_app.windows.units_grid.grid_clipboard import Clip, cells_of
from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_moves import CellRange


@dataclass(frozen=True)
class PastePlan:
    """What a paste will do: the edit (None where there is nothing to paste), and what to say about it.

    `rows` are the rows it writes, `columns` those it writes cell by cell (none for whole rows). `understood` is there
    where the paste was taken for a table, which may be read differently: see `plan_again`.
    """

    edit: Edit | None
    sentence: str
    notes: tuple[str, ...] = ()
    rows: range = range(0)
    columns: tuple[str, ...] = ()
    understood: Understanding | None = None


@dataclass(frozen=True)
class PastePlace:
    """Where a paste is aimed: the table of the set at `set_index`, the current cell and the selection in it."""

    model: GridModel
    cell: tuple[int, int]
    ranges: Sequence[CellRange]
    session_is_empty: bool
    life_unit: str

    @property
    def table(self) -> UnitTable:
        """The table pasted into."""
        return self.model.table

    @property
    def start(self) -> tuple[int, int]:
        """The upper left cell of the selection, where a block of cells goes."""
        block = self.ranges[0]
        return (block.top, block.left) if len(self.ranges) == 1 else self.cell

    @property
    def columns_from_start(self) -> tuple[str, ...]:
        """The columns from the one pasted at to the last one."""
        return self.model.columns[self.start[1] :]

    @property
    def at_end(self) -> bool:
        """Whether the paste begins in the empty row at the end of the grid."""
        return self.start[0] >= self.table.row_count

    @property
    def is_empty(self) -> bool:
        """Whether the table holds no text at all."""
        return all(self.table.row_is_read(row) is None for row in range(self.table.row_count))

    @property
    def all_selected(self) -> bool:
        """Whether every row is selected over its whole width."""
        block = self.ranges[0]
        return (
            len(self.ranges) == 1
            and block.top == block.left == 0
            and block.bottom >= self.table.row_count - 1
            and block.right == len(self.model.columns) - 1
        )


def plan_paste(clip: Clip, place: PastePlace) -> PastePlan:
    """Decide what a paste means.

    - A block copied from this grid goes cell by cell, from the upper left cell of the selection on, repeated over a
      selection that it fills a whole number of times. So does a block without headings pasted onto existing rows.
    - If such a block is a table by its contents and begins with the column it is pasted at, but not all of its columns
      are those next to each other here (unit, life, state: there is Until between), each goes where it belongs.
    - A table with headings, anything pasted into an empty table or into the empty row at the end, and a block wider
      than the columns there are, is understood as a table and its rows are appended. With everything selected, it
      takes the place of all rows.
    """
    if clip.own:
        return _cell_by_cell(cells_of(clip.text), place)
    block = plain_block(clip.text, clip.html, columns=place.columns_from_start)
    if block is not None and len(block) == len(block[0]) == 1 and not _is_list(clip, place):
        return _cell_by_cell(block, place)
    if block is None or len(block[0]) > len(place.columns_from_start):
        return _as_table(_understood(clip, place), place)
    if place.is_empty or place.at_end or place.all_selected:
        return _as_table(_understood(clip, place), place)
    if len(block[0]) > 1:
        understood = _understood(clip, place)
        if _belongs_elsewhere(understood, block, place):
            return _by_meaning(understood, place)
    return _cell_by_cell(block, place)


def plan_again(understood: Understanding, place: PastePlace) -> PastePlan:
    """Plan the same paste anew, after it was taken back, as the table it is now read as."""
    return _as_table(understood, place)


def _understood(clip: Clip, place: PastePlace) -> Understanding:
    column = place.columns_from_start[0]
    # In an empty table the cursor rests on the first cell, which says nothing about what is pasted.
    at_column = None if place.is_empty and place.start == (0, 0) else column
    unit = None if place.session_is_empty else place.life_unit
    return understand(clip.text, clip.html, existing=place.table, at_column=at_column, session_unit=unit)


def _is_list(clip: Clip, place: PastePlace) -> bool:
    """Tell whether a text in one line is several lives, where lives are expected."""
    if not (place.is_empty or place.at_end):
        return False
    return len(_understood(clip, place).rows) > 1


def _as_table(understood: Understanding, place: PastePlace) -> PastePlan:
    if not understood.rows:
        return PastePlan(None, understood.sentence, understood.notes, understood=_changeable(understood))
    life_unit = takes_life_unit(understood, session_is_empty=place.session_is_empty)
    edit_type = ReplaceRows if place.all_selected and not place.is_empty else PasteRows
    edit = edit_type(
        place.model.set_index,
        understood.rows,
        understood.extra_columns,
        life_unit=life_unit,
    )
    start = 0 if edit_type is ReplaceRows else place.table.row_count
    notes = understood.notes
    if understood.life_unit and life_unit is None and understood.life_unit != place.life_unit:
        notes = (*notes, other_unit(understood.life_unit, place.life_unit))
    rows = range(start, start + len(understood.rows))
    return PastePlan(edit, understood.sentence, notes, rows, understood=understood)


def takes_life_unit(understood: Understanding, *, session_is_empty: bool) -> str | None:
    """Return the unit of lives that the session is to take over from a table; None if it has one already."""
    return understood.life_unit if session_is_empty and understood.life_unit else None


def _changeable(understood: Understanding) -> Understanding | None:
    """Return a table without rows only if it may have some when read differently."""
    return understood if understood.source.columns else None


def _belongs_elsewhere(understood: Understanding, block: Sequence[Sequence[str]], place: PastePlace) -> bool:
    meant = understood.columns
    here = place.columns_from_start[: len(block[0])]
    return (
        len(understood.rows) == len(block)
        and not understood.extra_columns
        and meant != here
        and meant[0] == here[0]
        and "life" in meant
        and None not in meant
    )


def _by_meaning(understood: Understanding, place: PastePlace) -> PastePlan:
    columns = tuple(column for column in understood.columns if column is not None)
    cells = [[row.get(column, "") for column in columns] for row in understood.rows]
    edit = BlockEdit(place.model.set_index, place.start[0], columns, cells, "paste")
    rows = range(place.start[0], place.start[0] + len(cells))
    return PastePlan(edit, f"Written over {_rows_named(rows)}: {understood.sentence}", (), rows, columns)


def _cell_by_cell(block: Sequence[Sequence[str]], place: PastePlace) -> PastePlan:
    if not block:
        return PastePlan(None, "There is nothing to paste.")
    row, _ = place.start
    cells = tiled(block, place.ranges)
    columns = place.columns_from_start[: len(cells[0])]
    left_over = len(cells[0]) - len(columns)
    cells = [line[: len(columns)] for line in cells] if left_over else cells
    edit = BlockEdit(place.model.set_index, row, columns, cells, "paste")
    rows = range(row, row + len(cells))
    named = ", ".join(place.model.heading(column) for column in columns)
    notes = (_did_not_fit(left_over),) if left_over else ()
    return PastePlan(edit, f"Written into {_rows_named(rows)}: {named}.", notes, rows, columns)


def _rows_named(rows: range) -> str:
    return f"row {rows[0] + 1}" if len(rows) == 1 else f"rows {rows[0] + 1} to {rows[-1] + 1}"


def _did_not_fit(count: int) -> str:
    what = "1 column" if count == 1 else f"{count} columns"
    return f"{what} of the block did not fit: undo, and paste further to the left."


def other_unit(theirs: str, ours: str) -> str:
    """Say that a table gives lives in another unit than the session."""
    return f"The table gives lives in {theirs}, this session in {ours}: convert them if these differ."
