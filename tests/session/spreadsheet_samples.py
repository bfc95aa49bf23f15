"""Spreadsheet files for tests: XLSX by openpyxl, ODS and XLS put together by hand; all data in them are invented."""

from __future__ import annotations

import io
import struct
import zipfile
from collections.abc import Mapping, Sequence
from pathlib import Path
from xml.sax.saxutils import escape

from openpyxl import Workbook

Cells = Sequence[Sequence[object]]


def write_xlsx(path: Path, sheets: Mapping[str, Cells]) -> Path:
    """Write sheets; None leaves a cell out, a text with "=" is a formula, "#DIV/0!" an error."""
    book = Workbook()
    book.remove(book.active)
    for name, rows in sheets.items():
        sheet = book.create_sheet(name)
        for row, cells in enumerate(rows, start=1):
            for column, value in enumerate(cells, start=1):
                if value is not None:
                    sheet.cell(row, column, value)
    book.save(path)
    return path


def write_ods(path: Path, sheets: Mapping[str, Cells], *, encrypted: bool = False) -> Path:
    """Write sheets of texts and numbers; a text like "2025-04-03" becomes a date cell, True and False booleans."""
    tables = "".join(
        f'<table:table table:name="{escape(name)}">{"".join(map(_ods_row, rows))}</table:table>'
        for name, rows in sheets.items()
    )
    spaces = " ".join(
        f'xmlns:{prefix}="urn:oasis:names:tc:opendocument:xmlns:{prefix}:1.0"' for prefix in ("office", "table", "text")
    )
    content = (
        f'<?xml version="1.0" encoding="UTF-8"?><office:document-content {spaces} office:version="1.2">'
        f"<office:body><office:spreadsheet>{tables}</office:spreadsheet></office:body></office:document-content>"
    )
    locked = '<manifest:encryption-data manifest:checksum="x"/>' if encrypted else ""
    kind = "application/vnd.oasis.opendocument.spreadsheet"
    manifest = (
        '<?xml version="1.0" encoding="UTF-8"?>'
        '<manifest:manifest xmlns:manifest="urn:oasis:names:tc:opendocument:xmlns:manifest:1.0">'
        f'<manifest:file-entry manifest:full-path="/" manifest:media-type="{kind}"/>'
        f'<manifest:file-entry manifest:full-path="content.xml" manifest:media-type="text/xml">{locked}'
        "</manifest:file-entry></manifest:manifest>"
    )
    with zipfile.ZipFile(path, "w") as archive:
        archive.writestr("mimetype", kind)
        archive.writestr("content.xml", content)
        archive.writestr("META-INF/manifest.xml", manifest)
    return path


def _ods_row(cells: Sequence[object]) -> str:
    return "<table:table-row>" + "".join(map(_ods_cell, cells)) + "</table:table-row>"


def _ods_cell(value: object) -> str:
    if value is None:
        return "<table:table-cell/>"
    if isinstance(value, bool):
        kind = f'office:value-type="boolean" office:boolean-value="{str(value).lower()}"'
    elif isinstance(value, int | float):
        kind = f'office:value-type="float" office:value="{value!r}"'
    elif str(value)[:2] == "20" and str(value)[4:5] == "-":
        kind = f'office:value-type="date" office:date-value="{value}"'
    else:
        kind = 'office:value-type="string"'
    return f"<table:table-cell {kind}><text:p>{escape(str(value))}</text:p></table:table-cell>"


def write_xls(path: Path, sheets: Mapping[str, Cells]) -> Path:
    """Write sheets of texts and numbers as BIFF8 records in a compound file."""
    bodies = [_biff_sheet(rows) for rows in sheets.values()]
    bof = _record(0x0809, struct.pack("<HHHHII", 0x0600, 0x0005, 0x0DBB, 0x07CC, 0, 6))
    names = [name.encode("utf-16-le") for name in sheets]
    start = len(bof) + sum(4 + 8 + len(name) for name in names) + 4
    globals_ = bof
    for name, body in zip(names, bodies, strict=True):
        globals_ += _record(0x0085, struct.pack("<IBBBB", start, 0, 0, len(name) // 2, 1) + name)
        start += len(body)
    path.write_bytes(compound_file("Workbook", globals_ + _record(0x000A, b"") + b"".join(bodies)))
    return path


def _biff_sheet(rows: Cells) -> bytes:
    records = _record(0x0809, struct.pack("<HHHHII", 0x0600, 0x0010, 0x0DBB, 0x07CC, 0, 6))
    for row, cells in enumerate(rows):
        for column, value in enumerate(cells):
            place = struct.pack("<HHH", row, column, 0)
            if isinstance(value, int | float):
                records += _record(0x0203, place + struct.pack("<d", float(value)))
            elif value is not None:
                text = str(value).encode("utf-16-le")
                records += _record(0x0204, place + struct.pack("<HB", len(text) // 2, 1) + text)
    return records + _record(0x000A, b"")


def _record(kind: int, data: bytes) -> bytes:
    return struct.pack("<HH", kind, len(data)) + data


def compound_file(name: str, data: bytes) -> bytes:
    """Put one stream into a compound file (MS-CFB version 3): header, one FAT sector, directory, stream."""
    data = data.ljust(4096, b"\0")
    sectors = -(-len(data) // 512)
    if sectors > 126:
        raise ValueError("One FAT sector holds no more.")
    end, free, fat_mark = 0xFFFFFFFE, 0xFFFFFFFF, 0xFFFFFFFD
    chain = [fat_mark, end, *range(3, sectors + 2), end]
    fat = struct.pack("<128I", *chain, *[free] * (128 - len(chain)))
    entries = _entry("Root Entry", 5, 1, end, 0) + _entry(name, 2, free, 2, len(data))
    header = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(16)
    header += struct.pack("<HHHHH6xIIIIIIIIII", 0x3E, 3, 0xFFFE, 9, 6, 0, 1, 1, 0, 4096, end, 0, end, 0, 0)
    header += struct.pack("<108I", *[free] * 108)
    return header + fat + entries.ljust(512, b"\0") + data.ljust(sectors * 512, b"\0")


def _entry(name: str, kind: int, child: int, start: int, size: int) -> bytes:
    none = 0xFFFFFFFF
    text = name.encode("utf-16-le") + b"\0\0"
    entry = text.ljust(64, b"\0") + struct.pack("<HBBIII", len(text), kind, 1, none, none, child)
    return entry + bytes(36) + struct.pack("<IQ", start, size)


def zip_of(parts: Mapping[str, bytes]) -> bytes:
    """Put files into an archive."""
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, data in parts.items():
            archive.writestr(name, data)
    return buffer.getvalue()
