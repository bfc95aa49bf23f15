"""TableOut: a table to be copied or saved, with what it rests on below it; as text, HTML, CSV and XLSX.

No cell becomes a formula where a spreadsheet opens it: numbers are numbers, and a text that a spreadsheet would take
for a formula is put behind an apostrophe, or in XLSX stored as the string it is (common practice against formulas
smuggled in as data).
"""

from __future__ import annotations

import csv
import html
import io
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import isfinite

from reliability_app.engine.errors import RigpaperError

MOST_ROWS = 1_048_576
MOST_COLUMNS = 16_384
LONGEST_TEXT = 32_767
"""The limits of an XLSX sheet: Office Open XML as spreadsheets implement it (from memory)."""

# Also the full-width forms, which some spreadsheets take for the narrow ones.
_BEGINS_FORMULA = re.compile(r"[\t\r\n]|\s*[=+\-@\uff1d\uff0b\uff0d\uff20]")
_CONTROL = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\ufffe\uffff\ud800-\udfff]")
_LINE_BREAK = re.compile("\r\n?")
_WIDEST, _NARROWEST = 60, 8


class TableNotWritten(RigpaperError):
    """A table that cannot be written in the format asked for; the message says why and what to do."""


@dataclass(frozen=True)
class NumberCell:
    """A number: in full precision for files, and with the digits shown for the clipboard."""

    value: float
    shown: str


Cell = str | NumberCell


@dataclass(frozen=True)
class TableOut:
    """A table as it leaves the program.

    Attributes
    ----------
    title : str
        What it is called, in a file's name too.
    headings : tuple of str
    rows : tuple of tuple of (str or NumberCell)
        Each as long as the headings.
    notes : tuple of (str, str)
        What stands below: basis, cautions; a word for its kind, and the sentence.
    """

    title: str
    headings: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]
    notes: tuple[tuple[str, str], ...] = ()


def neutral(text: str) -> str:
    """Return a text that no spreadsheet takes for a formula: an apostrophe before what begins like one.

    Line breaks within it are line feeds.
    """
    plain = _LINE_BREAK.sub("\n", text)
    return f"'{plain}" if _BEGINS_FORMULA.match(text) else plain


def as_tab_separated(table: TableOut) -> str:
    """Return the table as tab-separated text, numbers with the digits shown, notes below."""
    written = io.StringIO()
    csv.writer(written, delimiter="\t", lineterminator="\n").writerows(_lines(table, _shown, gap=False))
    return written.getvalue().removesuffix("\n")


def as_html(table: TableOut) -> str:
    """Return the table as HTML, numbers with the digits shown and aligned right, notes below."""
    head = "".join(f"<th>{html.escape(neutral(text))}</th>" for text in table.headings)
    body = "".join(f"<tr>{''.join(map(_html_cell, row))}</tr>" for row in table.rows)
    notes = "".join(f"<p>{html.escape(f'{kind}: {text}')}</p>" for kind, text in table.notes)
    return f'<meta charset="utf-8"><table><thead><tr>{head}</tr></thead><tbody>{body}</tbody></table>{notes}'


def as_csv(table: TableOut) -> bytes:
    """Return the table as CSV (RFC 4180) in UTF-8 with its mark, numbers in full, notes below an empty line."""
    written = io.StringIO()
    csv.writer(written).writerows(_lines(table, _full, gap=True))
    return _CONTROL.sub("\ufffd", written.getvalue()).encode("utf-8-sig")


def as_xlsx(table: TableOut) -> bytes:
    """Return the table as an XLSX workbook of one sheet; texts are strings, numbers have 16 digits.

    Raises
    ------
    TableNotWritten
        When it is larger than a sheet can be.
    """
    from openpyxl import Workbook
    from openpyxl.cell import WriteOnlyCell
    from openpyxl.styles import Font

    _check_size(table)
    book = Workbook(write_only=True)
    sheet = book.create_sheet(_CONTROL.sub("", re.sub(r"[\\/*?:\[\]]", " ", table.title)).strip("' ")[:31] or "Table")
    sheet.freeze_panes = "A2"
    for place, width in enumerate(_widths(table)):
        sheet.column_dimensions[_letters(place)].width = width

    def string(text: str, *, bold: bool = False) -> object:
        cell = WriteOnlyCell(sheet, _CONTROL.sub("\ufffd", _LINE_BREAK.sub("\n", text)))
        cell.data_type = "s"  # openpyxl takes what begins with "=" for a formula
        if bold:
            cell.font = Font(bold=True)
        return cell

    sheet.append([string(text, bold=True) for text in table.headings])
    for row in table.rows:
        sheet.append([cell.value if isinstance(cell, NumberCell) else string(cell) if cell else None for cell in row])
    if table.notes:
        sheet.append([])
    for kind, text in table.notes:
        sheet.append([string(kind, bold=True), string(text)])
    written = io.BytesIO()
    book.save(written)
    return written.getvalue()


def number_cell(value: float | None, shown: str) -> Cell:
    """Return the cell of a number, an empty one for None, and the word shown for what is not finite."""
    if value is None:
        return ""
    return NumberCell(value, shown) if isfinite(value) else shown


def _lines(table: TableOut, write: Callable[[NumberCell], str], *, gap: bool) -> list[list[str]]:
    rows = [[neutral(cell) if isinstance(cell, str) else write(cell) for cell in row] for row in table.rows]
    notes = [[neutral(kind), neutral(text)] for kind, text in table.notes]
    return [[neutral(text) for text in table.headings], *rows, *([[]] if gap and notes else []), *notes]


def _shown(cell: NumberCell) -> str:
    return cell.shown


def _full(cell: NumberCell) -> str:
    return repr(cell.value).removesuffix(".0")


def _html_cell(cell: Cell) -> str:
    if isinstance(cell, NumberCell):
        return f'<td align="right">{html.escape(cell.shown)}</td>'
    return f"<td>{html.escape(neutral(cell))}</td>"


def _check_size(table: TableOut) -> None:
    rows = 2 + len(table.rows) + len(table.notes)
    longest = max((len(cell) for row in table.rows for cell in row if isinstance(cell, str)), default=0)
    for size, most, what in (
        (rows, MOST_ROWS, "rows"),
        (len(table.headings), MOST_COLUMNS, "columns"),
        (longest, LONGEST_TEXT, "characters in one cell"),
    ):
        if size > most:
            raise TableNotWritten(
                f"The table {table.title} has {size:,} {what}, and an XLSX sheet holds {most:,}: save it as CSV."
            )


def _widths(table: TableOut) -> list[int]:
    def width(cells: Sequence[Cell]) -> int:
        longest = max(len(cell if isinstance(cell, str) else _full(cell)) for cell in cells)
        return min(max(longest + 2, _NARROWEST), _WIDEST)

    return [width(cells) for cells in zip(table.headings, *table.rows, strict=True)]


def _letters(place: int) -> str:
    name = ""
    place += 1
    while place:
        place, rest = divmod(place - 1, 26)
        name = chr(ord("A") + rest) + name
    return name
