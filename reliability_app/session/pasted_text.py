"""Understands pasted text and text files: cells, headings, columns, decimal marks and states, with nothing dropped."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from itertools import zip_longest

from reliability_app.session.column_guess import find_heading_row, is_list_of_lives
from reliability_app.session.column_texts import decide_marks, plain_numbers
from reliability_app.session.date_lives import DateChoices
from reliability_app.session.dates import DayOrder
from reliability_app.session.html_table import has_full_values, read_html_table, with_full_precision
from reliability_app.session.interpretation import interpret
from reliability_app.session.numbers import DecimalMark
from reliability_app.session.row_reading import NUMBER_COLUMNS
from reliability_app.session.separators import MOST_COLUMNS, narrowed, split_text
from reliability_app.session.understanding import Choices, SourceTable, Understanding
from reliability_app.session.unit_table import UnitTable

AS_DISPLAYED = "Numbers were taken as the spreadsheet displays them; digits it does not show are missing."
TOO_WIDE = f"There are more than {MOST_COLUMNS} columns: the last one holds all the rest."
LIST_OF_LIVES = "The text is one line of lives: each was taken as a unit of its own."

# Rows looked at to tell whether the first ones are headings.
_LOOKED_AT = 400


def understand(
    text: str,
    html: str | None = None,
    existing: UnitTable | None = None,
    *,
    at_column: str | None = None,
    session_unit: str | None = None,
) -> Understanding:
    """Understand a pasted table; never raises, whatever the text.

    Parameters
    ----------
    text : str
        The plain text of the clipboard, or of a file.
    html : str, optional
        The HTML that came with it: spreadsheets keep there the digits that their plain text has rounded away.
    existing : UnitTable, optional
        The table that the rows will join: headings that name one of its extra columns mean that column.
    at_column : str, optional
        The key of the column in which the cursor stands: what a single column without a heading is taken for, if it
        is not plainly something else.
    session_unit : str, optional
        The unit of the lives that the session has already: lives between dates are counted in it.

    Returns
    -------
    Understanding
        With no rows, and a sentence that says so, for text without any.
    """
    rows, notes, separator, full = _rows_of(text, html)
    rows = [row for row in rows if any(map(str.strip, row))]
    if is_list_of_lives(rows):
        rows, notes = [[cell] for row in rows for cell in row if cell.strip()], (*notes, LIST_OF_LIVES)
    if max(map(len, rows), default=0) > MOST_COLUMNS:
        rows, notes = narrowed(rows), (*notes, TOO_WIDE)
    extras = existing.extra_columns if existing is not None else ()
    return interpret(
        replace(
            source_of(rows, notes),
            existing_extras=extras,
            at_column=at_column,
            session_unit=session_unit,
            separator=separator,
            full_numbers=full,
        ),
        Choices(),
    )


def source_of(rows: Sequence[Sequence[str]], notes: tuple[str, ...] = ()) -> SourceTable:
    """Return rows of cells, none of them blank, as a table whose headings are found."""
    columns = tuple([cell.strip() for cell in column] for column in zip_longest(*rows, fillvalue=""))
    return SourceTable(columns, _heading_row(rows), notes)


def reread(
    understanding: Understanding,
    *,
    columns: Mapping[int, str | None] | None = None,
    mark: DecimalMark | None = None,
    yes_means: str | None = None,
    headings: bool | None = None,
    states: Mapping[str, str] | None = None,
    day_order: DayOrder | None = None,
    data_date: str | None = None,
    date_unit: str | None = None,
    end_means: str | None = None,
    sheet: str | None = None,
) -> Understanding:
    """Read the same source again with some meanings chosen by hand; earlier choices stand unless chosen anew.

    Parameters
    ----------
    columns : mapping of int to str or None, optional
        Per column of the source (from 0) the key it is to have; START_DATE and END_DATE make lives be counted between
        dates; None makes it a column of the user's own.
    mark : DecimalMark, optional
        How the numbers of all columns are written.
    yes_means : str, optional
        "failed" or "running": what a yes, or a 1, in the state column means.
    headings : bool, optional
        Whether the first row is one of headings.
    states : mapping of str to str, optional
        What single words of the state column mean.
    day_order : DayOrder, optional
        Which number comes first in dates like 03/04/2025.
    data_date : str, optional
        The date until which units without an end date run; "" for the latest one in the table.
    date_unit : str, optional
        The unit in which lives between dates are counted, a key of DATE_UNITS.
    end_means : str, optional
        "failed" or "running": what an end date says of its unit.
    sheet : str, optional
        Another sheet of the same file; what was chosen for this one is then forgotten.
    """
    if sheet is not None and understanding.source.sheets is not None:
        return _of_sheet(understanding.source, understanding.source.sheets.table(sheet))
    before = understanding.choices
    choices = Choices(
        columns={**before.columns, **(columns or {})},
        mark=mark or before.mark,
        yes_means=yes_means or before.yes_means,
        states={**before.states, **(states or {})},
        dates=DateChoices(
            order=day_order or before.dates.order,
            data_date=before.dates.data_date if data_date is None else data_date,
            unit=date_unit or before.dates.unit,
            end_means=end_means or before.dates.end_means,
        ),
    )
    source = understanding.source
    if headings is not None and source.columns:
        source = replace(source, heading_row=0 if headings else None)
    return interpret(source, choices)


def _of_sheet(before: SourceTable, source: SourceTable) -> Understanding:
    kept = replace(source, existing_extras=before.existing_extras, session_unit=before.session_unit)
    return interpret(kept, Choices())


def plain_block(text: str, html: str | None = None, *, columns: Sequence[str] = ()) -> list[list[str]] | None:
    """Return the cells of a bare block, meant for the cells from the current one on; None for a table with headings.

    A text in one line without a tab is one cell. Blank lines are kept: they are empty cells. Where `columns` (the
    keys of the columns it will land in) names a column of numbers, its decimal mark is decided from all its cells.
    """
    rows, *_ = _rows_of(text, html)
    if not rows:
        return None
    if len(rows) == 1 and len(rows[0]) > 1 and "\t" not in text:
        rows = [[text.strip()]]
    if len(rows) > 1 and _heading_row([row for row in rows if any(map(str.strip, row))]) is not None:
        return None
    rows = narrowed(rows)
    by_column = [[cell.strip() for cell in column] for column in zip_longest(*rows, fillvalue="")]
    keys = [columns[place] if place < len(columns) else "" for place in range(len(by_column))]
    texts = {str(p): cells for p, (key, cells) in enumerate(zip(keys, by_column, strict=True)) if key in NUMBER_COLUMNS}
    for place, mark in decide_marks(texts).items():
        by_column[int(place)] = plain_numbers(texts[place], mark)
    return [list(row) for row in zip(*by_column, strict=True)]


def _heading_row(rows: Sequence[Sequence[str]]) -> int | None:
    return find_heading_row([[cell.strip() for cell in row] for row in rows[:_LOOKED_AT]])


def _rows_of(text: str, html: str | None) -> tuple[list[list[str]], tuple[str, ...], str, frozenset[int]]:
    """Return the cells of the text, blank lines as rows without text, in full precision if the HTML has it.

    Also what was odd, the separator of the text, and the columns in which the HTML gave numbers in full.
    """
    split = split_text(text)
    rows = split.rows
    if not html or (not has_full_values(html) and rows):
        return rows, split.notes, split.separator, frozenset()
    table = read_html_table(html)
    if table and not rows:
        rows = [[cell.shown for cell in row] for row in table]
    full = with_full_precision(rows, table) if table else None
    if table is None or full is None:
        return rows, (*split.notes, AS_DISPLAYED), split.separator, frozenset()
    places = frozenset(place for row in table for place, cell in enumerate(row) if cell.value)
    return full, split.notes, split.separator, places
