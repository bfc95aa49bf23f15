"""Opens tables from files: CSV, TSV and plain text, through the same reader as pasted text."""

from __future__ import annotations

import codecs
import os
from pathlib import Path

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.pasted_text import understand
from reliability_app.session.understanding import Understanding

LARGEST = 200_000_000
_SPREADSHEET_SUFFIXES = (".xlsx", ".xlsm", ".xlsb", ".xls", ".ods", ".fods")
_ZIP_START, _OLE_START = b"PK\x03\x04", b"\xd0\xcf\x11\xe0"


class TableUnreadable(RigpaperError):
    """A file that cannot be opened as a table."""


def read_table(path: str | os.PathLike[str]) -> Understanding:
    """Read a table from a file; the file is only read, never changed.

    UTF-8 and UTF-16 with a byte order mark are recognised; other text is taken as Windows-1252, which the notes say.

    Raises
    ------
    TableUnreadable
        With a sentence, if there is no such file, it may not be read, is not text, is a spreadsheet, is larger than
        LARGEST bytes, or holds no rows.
    """
    path = Path(path)
    data = _bytes_of(path)
    _refuse_other_kinds(path, data)
    text, note = _decoded(path, data)
    understood = understand(text)
    if not understood.rows:
        raise TableUnreadable(f"{path} holds no rows: choose a file with a table of lives.")
    return understood if note is None else understood.with_note(note)


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
    suffix = path.suffix.lower()
    if suffix in _SPREADSHEET_SUFFIXES or data.startswith((_ZIP_START, _OLE_START)):
        raise TableUnreadable(
            f"{path} is a spreadsheet file, which this version does not open: save it as CSV in the spreadsheet "
            "program and open that, or copy its cells and paste them."
        )
    if suffix == ".json":
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
