"""Finds text in the cells of a table, in all columns and without regard to case, and puts other text in its place."""

from __future__ import annotations

import re
from bisect import bisect_left, bisect_right
from collections.abc import Sequence
from dataclasses import dataclass

from reliability_app.session.table_edits import Block
from reliability_app.session.unit_table import UnitTable

# A cell as (row, column key).
Cell = tuple[int, str]


@dataclass(frozen=True, eq=False)
class Matches:
    """The cells of a table that hold a text.

    They are kept as the rows of each column, ascending: with 100,000 rows a list of cells would cost half a second.
    """

    wanted: str
    rows: dict[str, list[int]]

    @property
    def count(self) -> int:
        """How many cells hold the text."""
        return sum(len(rows) for rows in self.rows.values())

    def place(self, cell: Cell) -> int | None:
        """Return the place of a cell among the matches, counted from 1 along the rows; None where it is none."""
        row, column = cell
        rows = self.rows.get(column, [])
        at = bisect_left(rows, row)
        if at == len(rows) or rows[at] != row:
            return None
        columns = list(self.rows)
        before = columns[: columns.index(column)]
        above = sum(bisect_left(other, row) for other in self.rows.values())
        return 1 + above + sum(self._holds(name, row) for name in before)

    def after(self, cell: Cell, order: Sequence[str]) -> Cell | None:
        """Return the next match after a cell, along the rows, from the top again after the last; None without any."""
        return self._nearest(cell, order, forwards=True)

    def before(self, cell: Cell, order: Sequence[str]) -> Cell | None:
        """Return the match before a cell, from the bottom again before the first; None without any."""
        return self._nearest(cell, order, forwards=False)

    def _nearest(self, cell: Cell, order: Sequence[str], *, forwards: bool) -> Cell | None:
        rank = {column: place for place, column in enumerate(order)}
        here = (cell[0], rank[cell[1]])
        sign = 1 if forwards else -1
        found: list[tuple[bool, int, int, Cell]] = []
        for column, rows in self.rows.items():
            own = rank[column]
            if forwards:
                at = bisect_right(rows, here[0]) if own <= here[1] else bisect_left(rows, here[0])
            else:
                at = (bisect_left(rows, here[0]) if own >= here[1] else bisect_right(rows, here[0])) - 1
            wraps = not 0 <= at < len(rows)
            row = rows[at % len(rows)] if not wraps else rows[0 if forwards else -1]
            found.append((wraps, sign * row, sign * own, (row, column)))
        return min(found)[-1] if found else None

    def _holds(self, column: str, row: int) -> bool:
        rows = self.rows[column]
        at = bisect_left(rows, row)
        return at < len(rows) and rows[at] == row


def find_cells(table: UnitTable, wanted: str) -> Matches:
    """Find the cells of a table that hold `wanted`, in any column, without regard to case; none for an empty text."""
    rows: dict[str, list[int]] = {}
    if wanted:
        holds = _pattern(wanted).search
        for column in table.columns:
            hits = [row for row, text in enumerate(table.texts(column)) if text and holds(text)]
            if hits:
                rows[column] = hits
    return Matches(wanted, rows)


def replaced_blocks(table: UnitTable, matches: Matches, replacement: str) -> list[Block]:
    """Return what to write so that `replacement` stands in the place of the text found, in every match."""
    put = _pattern(matches.wanted).sub
    blocks = []
    for column, rows in matches.rows.items():
        texts = table.texts(column)
        for run in _runs(rows):
            cells = [(put(lambda _: replacement, texts[row]).strip(),) for row in run]
            blocks.append(Block(run.start, (column,), cells))
    return blocks


def _pattern(wanted: str) -> re.Pattern[str]:
    return re.compile(re.escape(wanted), re.IGNORECASE)


def _runs(rows: Sequence[int]) -> list[range]:
    """Join rows that follow each other: a cell between two matches is not written to."""
    runs: list[range] = []
    for row in rows:
        if runs and runs[-1].stop == row:
            runs[-1] = range(runs[-1].start, row + 1)
        else:
            runs.append(range(row, row + 1))
    return runs
