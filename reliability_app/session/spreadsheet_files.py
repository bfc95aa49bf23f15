"""Reads sheets of spreadsheet files (XLSX, XLSM, XLSB, XLS, ODS): each cell as text, numbers with all their digits."""

from __future__ import annotations

import io
import math
import zipfile
from collections.abc import Callable
from dataclasses import replace
from datetime import date, datetime, time, timedelta
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

from reliability_app.session.numbers import quoted
from reliability_app.session.pasted_text import TOO_WIDE, source_of
from reliability_app.session.separators import MOST_COLUMNS, narrowed
from reliability_app.session.sheet_xml import BROKEN_ARCHIVE, SheetOverview, overview
from reliability_app.session.table_errors import NoSuchSheet, TableUnreadable
from reliability_app.session.understanding import SourceTable

if TYPE_CHECKING:
    from python_calamine import CalamineSheet, CalamineWorkbook

Result = TypeVar("Result")
Cell = int | float | str | bool | time | date | datetime | timedelta

MOST_CELLS = 20_000_000
MOST_UNPACKED = 1_000_000_000
# Files up to this size are looked through for sheets without a cell; in larger ones all sheets are offered.
_QUICK_BYTES = 3_000_000
_LARGEST_WHOLE = 1e15
_MOST_DIGITS = 16
_NUMBERS = frozenset({float, int, timedelta})
_ZIP_START = b"PK\x03\x04"

MERGED = "Merged cells were filled down: each row holds what the merged cell says."
DURATIONS = "Durations were read as hours."
ERRORS_UNSEEN = (
    "In this file format a cell with an error (#N/A) reads like an empty one: look at the gaps, or save it as XLSX."
)


class SpreadsheetFile:
    """The sheets of one spreadsheet file; a sheet is read when it is asked for.

    Raises
    ------
    TableUnreadable
        With a sentence, for a file that is broken, protected by a password, or no spreadsheet.
    """

    def __init__(self, path: Path, data: bytes) -> None:
        self._path, self._data = path, data
        _refuse_bombs(path, data)
        self._book = _opened(path, data)
        self._read: dict[str, SourceTable] = {}
        self.names = self._names()

    def table(self, name: str) -> SourceTable:
        """Return one sheet.

        Raises
        ------
        NoSuchSheet, TableUnreadable
            If there is no such sheet, or it cannot be read.
        """
        if name not in self._read:
            if name not in self._book.sheet_names:
                named = ", ".join(quoted(other) for other in self._book.sheet_names)
                raise NoSuchSheet(f"{self._path} has no sheet {quoted(name)}. Its sheets are: {named}.")
            self._read[name] = self._table(name)
        return self._read[name]

    def _too_far(self, name: str, how_far: str) -> TableUnreadable:
        return TableUnreadable(
            f"Sheet {quoted(name)} of {self._path} reaches {how_far}, too far to be read: "
            "delete the far cells, or copy the table into a sheet of its own."
        )

    def _names(self) -> tuple[str, ...]:
        from python_calamine import SheetTypeEnum, SheetVisibleEnum

        shown = tuple(
            sheet.name
            for sheet in self._book.sheets_metadata
            if sheet.typ == SheetTypeEnum.WorkSheet and sheet.visible == SheetVisibleEnum.Visible
        )
        if len(shown) < 2 or len(self._data) > _QUICK_BYTES:
            return shown
        return tuple(name for name in shown if self.table(name).columns)

    def _table(self, name: str) -> SourceTable:
        seen = overview(self._data, name)
        if seen.cells > MOST_CELLS:
            raise self._too_far(name, f"to cell {seen.last_cell}")
        sheet = _guarded(self._path, lambda: self._book.get_sheet_by_name(name))
        if sheet.height * sheet.width > MOST_CELLS:
            raise self._too_far(name, f"over {sheet.height} rows and {sheet.width} columns")
        values = _guarded(self._path, lambda: sheet.to_python(skip_empty_area=True))
        notes = [MERGED] if _fill_merged(sheet, values) else []
        if any(type(value) is timedelta for row in values[:1000] for value in row):
            notes.append(DURATIONS)
        if seen.formulas:
            notes.append(_uncomputed(len(seen.formulas)))
        rows = [[_text(value) for value in row] for row in values]
        if not seen.cells and any("" in row and any(row) for row in rows):
            notes.append(ERRORS_UNSEEN)
        _put_errors(rows, sheet, seen)
        numbers = frozenset(
            place
            for place, column in enumerate(zip(*values, strict=True))
            if not _NUMBERS.isdisjoint(map(type, column))
        )
        rows = [row for row in rows if any(map(str.strip, row))]
        if rows and len(rows[0]) > MOST_COLUMNS:
            rows, notes = narrowed(rows), [*notes, TOO_WIDE]
        source = source_of(rows, tuple(notes))
        return replace(source, true_numbers=numbers, sheets=self, sheet=name)


def _uncomputed(count: int) -> str:
    formulas = "1 formula has" if count == 1 else f"{count} formulas have"
    return f"{formulas} no stored value: open and save the file in the spreadsheet program."


def _opened(path: Path, data: bytes) -> CalamineWorkbook:
    from python_calamine import CalamineWorkbook

    try:
        return _guarded(path, lambda: CalamineWorkbook.from_filelike(io.BytesIO(data)))
    except TableUnreadable:  # asked for by name, the reader says why: that a password protects it, say
        return _guarded(path, lambda: CalamineWorkbook.from_path(path))


def _guarded(path: Path, act: Callable[[], Result]) -> Result:
    """Do something with the reader of spreadsheet files; whatever stops it becomes a sentence."""
    from python_calamine import PasswordError

    try:
        return act()
    except PasswordError:
        raise TableUnreadable(
            f"{path} is protected by a password: open it in the spreadsheet program and save it without one."
        ) from None
    except BaseException as trouble:
        # The reader reports a fault of its own by an exception that is no Exception.
        if not isinstance(trouble, Exception) and type(trouble).__name__ != "PanicException":
            raise
        reason = " ".join(str(trouble).split()) or type(trouble).__name__
        raise TableUnreadable(
            f"{path} is broken, or no spreadsheet file ({reason}): save it anew as XLSX, ODS or CSV."
        ) from trouble


def _refuse_bombs(path: Path, data: bytes) -> None:
    if not data.startswith(_ZIP_START):
        return
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            unpacked = sum(part.file_size for part in archive.infolist())
    except BROKEN_ARCHIVE as trouble:
        raise TableUnreadable(
            f"{path} is broken, or no spreadsheet file ({trouble}): save it anew as XLSX, ODS or CSV."
        ) from trouble
    if unpacked > MOST_UNPACKED:
        raise TableUnreadable(f"{path} unpacks to more than {MOST_UNPACKED // 1_000_000} MB: split the table.")


def _fill_merged(sheet: CalamineSheet, values: list[list[Cell]]) -> bool:
    """Write what merged cells say into each row they span, in place; return whether there were any."""
    if sheet.start is None or not sheet.merged_cell_ranges:
        return False
    top, left = sheet.start
    filled = False
    for (first, column), (last, _) in sheet.merged_cell_ranges:
        row, place = first - top, column - left
        if last <= first or not 0 <= row < len(values) or not 0 <= place < len(values[row]):
            continue
        for below in range(row + 1, min(last - top + 1, len(values))):
            if values[row][place] != "" and values[below][place] == "" and any(cell != "" for cell in values[below]):
                values[below][place] = values[row][place]
                filled = True
    return filled


def _put_errors(rows: list[list[str]], sheet: CalamineSheet, seen: SheetOverview) -> None:
    """Write errors, and formulas without a value, into their cells, which come empty: they are no gaps."""
    if sheet.start is None:
        return
    top, left = sheet.start
    for row, column, error in (*seen.errors, *((row, column, f"={text}") for row, column, text in seen.formulas)):
        if 0 <= row - top < len(rows) and 0 <= column - left < len(rows[row - top]):
            rows[row - top][column - left] = error


def _text(value: Cell) -> str:
    write = _WRITERS.get(type(value))
    return str(value) if write is None else write(value)


def _number(value: float) -> str:
    """Return all digits of a number, but none that are only the noise of the last bits ("7.850000000000001")."""
    if abs(value) < _LARGEST_WHOLE and value == int(value):
        return str(int(value))
    full = repr(value)
    if len(full) > _MOST_DIGITS:
        short = f"{value:.15g}"
        if abs(float(short) - value) <= 2 * math.ulp(value):
            return short
    return full


# By type and not by isinstance, for speed; a bool is no number, a datetime no date.
_WRITERS: dict[type, Callable[[Any], str]] = {
    str: str,
    float: _number,
    int: str,
    bool: lambda value: "true" if value else "false",
    datetime: lambda value: value.isoformat(" ", timespec="seconds"),
    date: date.isoformat,
    time: time.isoformat,
    timedelta: lambda value: f"{value.total_seconds() / 3600:.10g} h",
}
