"""Saves a table as CSV or XLSX: the file is written whole or not at all."""

from __future__ import annotations

import os
from collections.abc import Callable, Mapping
from pathlib import Path

from reliability_app.session.atomic_write import write_whole
from reliability_app.session.session_errors import system_reason
from reliability_app.session.tables_out import TableNotWritten, TableOut, as_csv, as_xlsx

SUFFIXES: Mapping[str, str] = {".csv": "CSV, comma separated", ".xlsx": "XLSX workbook"}
_WRITERS: Mapping[str, Callable[[TableOut], bytes]] = {".csv": as_csv, ".xlsx": as_xlsx}


def save_table(table: TableOut, path: Path) -> None:
    """Write a table in the format that the suffix of `path` names.

    Raises
    ------
    TableNotWritten
        When the suffix names no format, the table does not fit, or the system refuses; a file there stays as it was.
    """
    writer = _WRITERS.get(path.suffix.lower())
    if writer is None:
        raise TableNotWritten(f"{path} was not written: a table is saved as {' or '.join(_WRITERS)}.")
    try:
        write_whole(Path(os.path.realpath(path)), writer(table))
    except OSError as error:
        raise TableNotWritten(
            f"{path} was not written: {system_reason(error)}. Choose another folder or name."
        ) from error
