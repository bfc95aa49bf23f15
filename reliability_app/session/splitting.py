"""Splits a set by a column: one new set for each value that stands there, each with its own units."""

from __future__ import annotations

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import Session, UnitSet
from reliability_app.session.set_edits import SplitSet, first_free, free_name, twin_of
from reliability_app.session.unit_table import HEADINGS, UnitTable

MOST_PARTS = 20

# Every unit of a part must have been watched as if the others were not there. A split by age or state would choose
# units by how they ended; a split by cause would lose the units that run or failed otherwise, which count as running
# for each cause.
_NEVER_SPLIT_BY = frozenset({"unit", "life", "until", "state", "quantity", "entered", "cause"})


class CannotSplit(RigpaperError):
    """A column that splits a set into nothing of use; the message says why and what to do."""


def split_columns(table: UnitTable) -> tuple[str, ...]:
    """Return the columns with text by which a set may be split: those that say what a unit is, not how it ended."""
    return tuple(column for column in table.columns if column not in _NEVER_SPLIT_BY and any(table.texts(column)))


def column_title(column: str) -> str:
    """Return the heading of a column, the user's own or a built-in one."""
    return HEADINGS.get(column, column)


def split_set(session: Session, set_index: int, column: str) -> SplitSet:
    """Return the edit that splits a set by a column; rows without any text are left behind.

    Each part keeps basis and rows, unread ones too, in their order.

    Raises
    ------
    CannotSplit
        Where the column holds one value only, or more than `MOST_PARTS`.
    """
    whole = session.sets[set_index]
    places = _rows_by_value(whole.table, column)
    title = column_title(column)
    if len(places) < 2:
        only = next(iter(places))
        raise CannotSplit(f"Column {title} of {whole.name} holds only {only!r}: a split needs two values or more.")
    if len(places) > MOST_PARTS:
        raise CannotSplit(
            f"Column {title} of {whole.name} holds {len(places):,} values, and a split makes {MOST_PARTS} sets at the "
            "most: choose a column with fewer values, or write groups of them into a column of their own."
        )
    colours = [one.colour for one in session.sets]
    parts: list[UnitSet] = []
    for value, rows in places.items():
        wanted = f"{whole.name}, {value or f'without {title}'}"
        name = free_name(session, wanted, taken=[part.name for part in parts])
        colours.append(first_free(colours))
        parts.append(_part(whole, rows, name=name, colour=colours[-1]))
    return SplitSet(set_index, parts, was_hidden=whole.hidden)


def _rows_by_value(table: UnitTable, column: str) -> dict[str, list[int]]:
    """Return the rows that hold each value, values in the order in which they come, no value last."""
    if column not in split_columns(table):
        raise KeyError(f"No set is split by the column {column!r}.")
    found: dict[str, list[int]] = {}
    for row, text in enumerate(table.texts(column)):
        value = text.strip()
        if value or table.row_is_read(row) is not None:
            found.setdefault(value, []).append(row)
    without = found.pop("", None)
    return found if without is None else {**found, "": without}


def _part(whole: UnitSet, rows: list[int], *, name: str, colour: int) -> UnitSet:
    part = twin_of(whole, name=name, colour=colour)
    kept = set(rows)
    part.table.delete_rows([row for row in range(whole.table.row_count) if row not in kept])
    return part
