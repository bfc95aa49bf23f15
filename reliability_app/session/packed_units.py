"""The table of units in the form in which a visit keeps it: a text a row, and very many rows compressed.

A set of 100,000 units takes 7 MB in a session file. Were every visit to keep as much, eight of them would take 35 MB
and two seconds to open; compressed they take half a megabyte each. A table that people or git may want to read stays
readable.
"""

from __future__ import annotations

import zlib
from base64 import b64decode, b64encode
from collections.abc import Sequence

from reliability_app.session.json_schema_types import UnitsAtVisit
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, ColumnNameRefused, UnitTable

READABLE_ROWS = 5000
"""A table of more rows than that is compressed."""
MOST_COLUMNS = 3000
MOST_CELLS = 50_000_000
MOST_ROWS = 3_000_000
"""Of all visits of a file together: thirty visits of 100,000 units."""
MOST_BYTES = 200_000_000
"""Of the rows that are compressed: a small hostile file can hold very many."""


class NoUnits(ValueError):
    """Units of a visit that make no table: `reason` as a clause, and `place` inside them."""

    def __init__(self, reason: str, place: str = "") -> None:
        super().__init__(reason, place)
        self.reason = reason
        self.place = place


def packed(table: UnitTable) -> dict[str, object]:
    """Give the whole table as it stands in a file: see `UnitsAtVisit`."""
    columns, rows = columns_and_rows(table)
    if len(rows) <= READABLE_ROWS:
        return {"columns": columns, "rows": rows}
    data = "\n".join(rows).encode("utf-8", "surrogatepass")
    return {"columns": columns, "packed": b64encode(zlib.compress(data)).decode("ascii")}


def columns_and_rows(table: UnitTable) -> tuple[list[str], list[str]]:
    """Give the columns that are used, and a text for each row."""
    cells = table.rows()
    used = set().union(*cells) if cells else set()
    columns = [column for column in table.columns if column in used or column in table.extra_columns]
    return columns, [_row([row.get(column, "") for column in columns]) for row in cells]


def _row(cells: Sequence[str]) -> str:
    joined = "\t".join(cells)
    if "\\" in joined or "\n" in joined or joined.count("\t") >= max(1, len(cells)):
        joined = "\t".join(cell.replace("\\", "\\\\").replace("\t", "\\t").replace("\n", "\\n") for cell in cells)
    return joined.rstrip("\t")


def rows_of(units: UnitsAtVisit) -> list[str]:
    """Give the text of each row.

    Raises
    ------
    NoUnits
        For compressed rows that are damaged, or more than this program holds.
    """
    if units.packed is None:
        return units.rows
    try:
        inflater = zlib.decompressobj()
        data = inflater.decompress(b64decode(units.packed, validate=True), MOST_BYTES)
        if inflater.unconsumed_tail:
            raise NoUnits(f"its rows hold more than {MOST_BYTES:,} bytes", ".packed")
        if not inflater.eof:
            raise NoUnits("its compressed rows break off", ".packed")
        if data.count(b"\n") >= MOST_ROWS:
            raise NoUnits(f"its rows are more than {MOST_ROWS:,}", ".packed")
        return data.decode("utf-8", "surrogatepass").split("\n")
    except NoUnits:
        raise
    except (ValueError, zlib.error):  # of base64, the compression or the characters
        raise NoUnits("its compressed rows are damaged", ".packed") from None


def check_units(units: UnitsAtVisit) -> int:
    """Refuse units that make no table; give the number of rows.

    Raises
    ------
    NoUnits
    """
    columns = units.columns
    if len(columns) > MOST_COLUMNS:
        raise NoUnits(f"its {len(columns):,} columns are more than this program can hold", ".columns")
    if len(set(columns)) < len(columns):
        raise NoUnits("a column is named twice", ".columns")
    try:
        UnitTable.from_columns({}, [name for name in columns if name not in BUILT_IN_COLUMNS], row_count=0)
    except ColumnNameRefused as error:
        raise NoUnits(f"a column has a name it cannot have ({str(error).rstrip('.')})", ".columns") from None
    if units.rows and units.packed is not None:
        raise NoUnits("its rows stand here twice, in the clear and compressed")
    rows = rows_of(units)
    if len(rows) * max(1, len(columns)) > MOST_CELLS:
        size = f"{len(rows):,} rows and {len(columns):,} columns"
        raise NoUnits(f"its table of {size} is larger than this program can hold")
    too_long = next((place for place, row in enumerate(rows) if row.count("\t") >= max(1, len(columns))), None)
    if too_long is not None:
        raise NoUnits(
            f"row {too_long + 1} has more cells than the {len(columns)} columns that are named",
            f".rows[{too_long}]" if units.packed is None else ".packed",
        )
    return len(rows)


def unpacked(units: UnitsAtVisit) -> UnitTable:
    """Give the table that a visit recorded, as an independent table."""
    columns = units.columns
    cells = [_cells(row, len(columns)) for row in rows_of(units)]
    texts = {column: list(one) for column, one in zip(columns, zip(*cells, strict=True), strict=False)}
    extra = [column for column in columns if column not in BUILT_IN_COLUMNS]
    return UnitTable.from_columns(texts, extra, row_count=len(cells))


def _cells(row: str, count: int) -> list[str]:
    cells = row.split("\t")
    if "\\" in row:
        cells = [_plain(cell) for cell in cells]
    return (cells + [""] * (count - len(cells)))[:count]


def _plain(cell: str) -> str:
    return "\\".join(part.replace("\\t", "\t").replace("\\n", "\n") for part in cell.split("\\\\"))
