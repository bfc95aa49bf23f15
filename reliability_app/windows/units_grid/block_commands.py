"""What can be done with a selected block of cells, each as one edit: copy, clear, fill down, rows in and out, sort."""

from __future__ import annotations

from collections.abc import Sequence

from reliability_app.session.edits import Block, BlockEdit, BlocksEdit, DeleteRows, Edit, InsertRows, SortRows
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.units_grid.grid_moves import CellRange


def cells_to_copy(table: UnitTable, ranges: Sequence[CellRange]) -> tuple[list[str], list[list[str]]]:
    """Give the selected cells as (columns, rows of texts).

    A selection in several pieces gives one rectangle of all rows and columns it touches, with the cells in it that
    are not selected left empty. The empty row at the end of the grid is left out, unless nothing else is selected.
    """
    rows = sorted({row for part in ranges for row in part.rows if row < table.row_count})
    sections = sorted({section for part in ranges for section in part.sections})
    columns = [table.columns[section] for section in sections]
    if len(ranges) == 1 or len(rows) * len(sections) == sum(_area(part, table) for part in ranges):
        if not rows:
            return columns, []
        texts = [table.texts(column) for column in columns]
        return columns, [[column[row] for column in texts] for row in rows]
    cells = []
    for row in rows:
        selected = {section for part in ranges if row in part.rows for section in part.sections}
        cells.append([table.text(row, table.columns[place]) if place in selected else "" for place in sections])
    return columns, cells


def clear_edit(
    table: UnitTable, set_index: int, ranges: Sequence[CellRange], *, doing: str = "clearing"
) -> Edit | None:
    """Empty the selected cells; None where they are empty already."""
    blocks = []
    for part in ranges:
        columns = tuple(table.columns[section] for section in part.sections)
        rows = range(part.top, min(part.bottom + 1, table.row_count))
        if any(any(table.texts(column)[part.top : part.bottom + 1]) for column in columns):
            blocks.append(Block(part.top, columns, [[""] * len(columns)] * len(rows)))
    return edit_of(blocks, set_index, doing=doing)


def fill_down_edit(table: UnitTable, set_index: int, ranges: Sequence[CellRange]) -> Edit | None:
    """Fill each selected block with its top row; a block of one row with the row above. None without a change."""
    blocks = []
    for part in ranges:
        source = part.top if part.bottom > part.top else part.top - 1
        # The empty row at the end belongs to "everything selected", but not to what is to be filled, unless alone.
        last = min(part.bottom, table.row_count - 1) if part.bottom > part.top else part.bottom
        count = last - source
        if source < 0 or count < 1:
            continue
        columns = tuple(table.columns[section] for section in part.sections)
        texts = [table.text(source, column) for column in columns]
        blocks.append(Block(source + 1, columns, [texts] * count))
    return edit_of(blocks, set_index, doing="filling down")


def insert_rows_edit(table: UnitTable, set_index: int, ranges: Sequence[CellRange]) -> Edit:
    """Insert as many rows as are selected, before the first of them."""
    rows = {row for part in ranges for row in part.rows}
    return InsertRows(set_index, min(min(rows), table.row_count), len(rows))


def delete_rows_edit(table: UnitTable, set_index: int, ranges: Sequence[CellRange]) -> Edit | None:
    """Delete the selected rows; None where only the empty row at the end is selected."""
    rows = sorted({row for part in ranges for row in part.rows if row < table.row_count})
    return DeleteRows(set_index, rows) if rows else None


def sort_edit(table: UnitTable, set_index: int, column: str, *, descending: bool) -> Edit | None:
    """Sort all rows by one column; None for a table with nothing to sort."""
    return SortRows(set_index, column, descending) if table.row_count > 1 else None


def edit_of(blocks: Sequence[Block], set_index: int, *, doing: str) -> Edit | None:
    """Give one edit that writes these blocks; None for no block."""
    if not blocks:
        return None
    if len(blocks) == 1:
        return BlockEdit(set_index, blocks[0].row, blocks[0].columns, blocks[0].cells, doing)
    return BlocksEdit(set_index, blocks, doing)


def tiled(cells: Sequence[Sequence[str]], ranges: Sequence[CellRange]) -> Sequence[Sequence[str]]:
    """Repeat copied cells over a selected block that they fill a whole number of times; otherwise as they are."""
    if len(ranges) != 1 or not cells:
        return cells
    height, width = len(cells), len(cells[0])
    down, right = len(ranges[0].rows), len(ranges[0].sections)
    if down % height or right % width:
        return cells
    return [list(row) * (right // width) for row in cells] * (down // height)


def _area(part: CellRange, table: UnitTable) -> int:
    return len(range(part.top, min(part.bottom + 1, table.row_count))) * len(part.sections)
