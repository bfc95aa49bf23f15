"""Opens tables from files, spreadsheets and text, through the same reader as pasted text."""

from __future__ import annotations

import codecs
import os
from dataclasses import replace
from pathlib import Path

from reliability_app.session.interpretation import interpret
from reliability_app.session.numbers import quoted
from reliability_app.session.pasted_text import understand
from reliability_app.session.table_errors import NoSuchSheet, TableUnreadable
from reliability_app.session.understanding import Choices, Understanding

LARGEST = 200_000_000
SPREADSHEET_SUFFIXES = (".xlsx", ".xlsm", ".xlsb", ".xls", ".ods")
TEXT_SUFFIXES = (".csv", ".tsv", ".txt")
_ZIP_START, _OLE_START = b"PK\x03\x04", b"\xd0\xcf\x11\xe0"
_XML_WORKBOOKS = ("<Workbook", "<office:document")


def read_table(
    path: str | os.PathLike[str], *, sheet: str | None = None, session_unit: str | None = None
) -> Understanding:
    """Read a table from a file; the file is only read, never changed. What it is, its content says, not its name.

    UTF-8 and UTF-16 with a byte order mark are recognised; other text is taken as Windows-1252, which the notes say.

    Parameters
    ----------
    path : path
    sheet : str, optional
        Which sheet of a spreadsheet file to read; the first that reads as units if it is not given.
    session_unit : str, optional
        The unit of the lives that the session has already: lives between dates are counted in it.

    Raises
    ------
    TableUnreadable
        With a sentence, if there is no such file, it may not be read, is no table, is broken, is protected, is larger
        than LARGEST bytes, or holds no rows.
    """
    path = Path(path)
    data = _bytes_of(path)
    if data.startswith((_ZIP_START, _OLE_START)):
        return _read_sheets(path, data, sheet, session_unit)
    if sheet is not None:
        raise NoSuchSheet(f"{path} is a text file, which has no sheet {quoted(sheet)}.")
    _refuse_other_kinds(path, data)
    text, note = _decoded(path, data)
    understood = _of_text(path, text, session_unit)
    if not understood.rows:
        raise TableUnreadable(f"{path} holds no rows: choose a file with a table of lives.")
    return understood if note is None else understood.with_note(note)


def _read_sheets(path: Path, data: bytes, sheet: str | None, session_unit: str | None) -> Understanding:
    from reliability_app.session.spreadsheet_files import SpreadsheetFile

    book = SpreadsheetFile(path, data)
    first: Understanding | None = None
    for name in book.names if sheet is None else (sheet,):
        understood = interpret(replace(book.table(name), session_unit=session_unit), Choices())
        if understood.faulty < len(understood.rows):
            return understood
        if first is None and understood.rows:
            first = understood
    if first is None:
        where = path if sheet is None else f"Sheet {quoted(sheet)} of {path}"
        raise TableUnreadable(f"{where} holds no rows: choose a table of lives.")
    return first


def _of_text(path: Path, text: str, session_unit: str | None) -> Understanding:
    """Read text; some programs write an HTML page and name it as a spreadsheet."""
    start = text[:2000].lstrip()
    if start.startswith("<") and any(sign in start for sign in _XML_WORKBOOKS):
        raise TableUnreadable(f"{path} is a spreadsheet written as XML: save it as XLSX, ODS or CSV.")
    if start.startswith("<") and "<table" in text[:100_000].casefold():
        return understand("", text, session_unit=session_unit)
    return understand(text, session_unit=session_unit)


def _bytes_of(path: Path) -> bytes:
    try:
        if path.is_dir():
            raise TableUnreadable(f"{path} is a folder: choose a file in it.")
        if path.stat().st_size > LARGEST:
            raise TableUnreadable(f"{path} is larger than {LARGEST // 1_000_000} MB: split the table.")
        return path.read_bytes()
    except FileNotFoundError:
        raise TableUnreadable(f"There is no file {path}: check the name.") from None
    except (OSError, ValueError) as problem:
        reason = getattr(problem, "strerror", None) or str(problem)
        raise TableUnreadable(f"{path} cannot be read ({reason}): check that you may open it.") from problem


def _refuse_other_kinds(path: Path, data: bytes) -> None:
    if not data:
        raise TableUnreadable(f"{path} is empty: it holds no rows.")
    if path.suffix.lower() == ".json":
        raise TableUnreadable(f"{path} is a JSON file but no session: choose a session or a table (CSV, TSV, text).")


def _decoded(path: Path, data: bytes) -> tuple[str, str | None]:
    """Return the text of a file, and a sentence if its encoding had to be guessed."""
    if data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE)):
        try:
            return data.decode("utf-16"), None
        except UnicodeDecodeError:
            raise TableUnreadable(f"{path} is not whole: its UTF-16 text breaks off. Save it anew.") from None
    if b"\0" in data:
        raise TableUnreadable(f"{path} is not text: choose a table saved as CSV, TSV or text.")
    try:
        return data.decode("utf-8-sig"), None
    except UnicodeDecodeError:
        # Bytes that Windows-1252 leaves open are replaced; they occur in no table of its own.
        text = data.decode("cp1252", errors="replace")
        return (
            text,
            "The file is not UTF-8; it was read as Windows-1252. Check letters such as \u00e4, \u00e9 or \u00f1.",
        )
