"""Looks into the XML of an XLSX sheet for what the reader of cells does not tell: errors, and how far it goes."""

from __future__ import annotations

import html
import io
import posixpath
import re
import struct
import zipfile
import zlib
from dataclasses import dataclass

# All that reading a torn archive may raise.
BROKEN_ARCHIVE = (
    zipfile.BadZipFile,
    zlib.error,
    struct.error,
    LookupError,
    OSError,
    ValueError,
    RuntimeError,
    EOFError,
)
_SHEET = re.compile(rb"<(?:\w+:)?sheet\b[^<>]*>")
_RELATION = re.compile(rb"<(?:\w+:)?Relationship\b[^<>]*>")
_NAME, _SHEET_ID = re.compile(rb'\bname="([^"]*)"'), re.compile(rb'\b\w+:id="([^"]*)"')
_ID, _TARGET = re.compile(rb'\bId="([^"]*)"'), re.compile(rb'\bTarget="([^"]*)"')
# No pattern runs over more than one cell, or over a longer tag than are written, so that no file makes the search slow.
_FAR_PLACE = re.compile(rb' r="([A-Z]{3})[0-9]')
_SECOND_PLACE = re.compile(rb' r="[A-Z]{2}[0-9]')
# An empty text that a formula gave (t="str") is a value.
_UNCOMPUTED = re.compile(
    rb'<(?:\w+:)?c\b(?![^<>]{0,300}\bt="str")[^<>]{0,300}?\br="([A-Z]{1,3})([0-9]{1,7})"[^<>]{0,300}>'
    rb"<(?:\w+:)?f\b(?:[^<>]{0,300}/>|[^<>]{0,300}>([^<]*)</(?:\w+:)?f>)"
    rb"(?:<(?:\w+:)?v */>|<(?:\w+:)?v></(?:\w+:)?v>)?</(?:\w+:)?c>"
)
_ROW = re.compile(rb'<(?:\w+:)?row\b[^<>]{0,300}?\br="([0-9]{1,7})"')
_ERROR = re.compile(
    rb'<(?:\w+:)?c\b(?=[^<>]{0,300}\bt="e")[^<>]{0,300}?\br="([A-Z]{1,3})([0-9]{1,7})"[^<>]{0,300}>'
    rb"(?:<(?:\w+:)?f\b(?:[^<>]{0,300}/>|[^<>]{0,300}>[^<]*</(?:\w+:)?f>))?<(?:\w+:)?v>([^<]*)"
)


@dataclass(frozen=True)
class SheetOverview:
    """What is to be known of a sheet before its cells are read.

    Attributes
    ----------
    errors : tuple of (int, int, str)
        Row and column, from 0, of each cell with an error, and what it says.
    formulas : tuple of (int, int, str)
        The same for formulas without a stored value.
    last_cell : str
        The cell in the last row and no column before the last one.
    cells : int
        How many there are up to that cell.
    """

    errors: tuple[tuple[int, int, str], ...] = ()
    formulas: tuple[tuple[int, int, str], ...] = ()
    last_cell: str = ""
    cells: int = 0


def overview(data: bytes, name: str) -> SheetOverview:
    """Return what the XML of a sheet tells; nothing for a file that is no XLSX."""
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            part = _part_of(archive, name)
            if part is None:
                return SheetOverview()
            sheet = archive.read(part)
    except BROKEN_ARCHIVE:
        return SheetOverview()  # whoever reads the cells will say what is wrong
    columns = max(_FAR_PLACE.findall(sheet), default=b"ZZ" if _SECOND_PLACE.search(sheet) else b"Z")
    rows = max(map(int, _ROW.findall(sheet)), default=1)
    errors = _places(_ERROR, sheet) if b't="e"' in sheet else ()
    formulas = _places(_UNCOMPUTED, sheet) if b"</f>" in sheet or b":f>" in sheet else ()
    return SheetOverview(errors, formulas, f"{columns.decode()}{rows}", rows * _number(columns))


def _places(pattern: re.Pattern[bytes], sheet: bytes) -> tuple[tuple[int, int, str], ...]:
    return tuple(
        (int(row) - 1, _number(column) - 1, html.unescape(text.decode("utf-8", "replace")))
        for column, row, text in pattern.findall(sheet)
    )


def _part_of(archive: zipfile.ZipFile, name: str) -> str | None:
    """Return the file inside the archive that holds a sheet."""
    if "xl/workbook.xml" not in archive.namelist():
        return None
    wanted = None
    for sheet in _SHEET.findall(archive.read("xl/workbook.xml")):
        found, relation = _NAME.search(sheet), _SHEET_ID.search(sheet)
        if found and relation and html.unescape(found[1].decode("utf-8", "replace")) == name:
            wanted = relation[1]
    for relation_text in _RELATION.findall(archive.read("xl/_rels/workbook.xml.rels")):
        identity, target = _ID.search(relation_text), _TARGET.search(relation_text)
        if wanted is not None and identity and target and identity[1] == wanted:
            return posixpath.normpath(posixpath.join("/xl", target[1].decode("utf-8", "replace"))).lstrip("/")
    return None


def _number(letters: bytes) -> int:
    """Return the number of a column from its letters, counted from 1."""
    number = 0
    for letter in letters:
        number = number * 26 + letter - ord("A") + 1
    return number
