"""Turns a session into the text of its file and back without loss: what is not understood is kept or refused.

How values are written, where SESSION leaves it open:

- Cells of the number columns (life, until, quantity, entered) are JSON numbers exactly as entered ("1401.40")
  where that is legal JSON, else texts ("n/a", "0012"). A quantity of 1 is written if it stands in its cell.
- Unit, State, Cause and Note are texts. A further column holds numbers if each of its cells is a plain number
  that every reader of JSON keeps exactly, else texts: a column of codes ("0012", "1200") stays one of texts.
- Unknown keys follow the known ones, in the order of the file. Those of a unit become further columns; a
  value that is neither text nor number shows as JSON there (`true`), and is written back as what it was.
- A key that stands twice in one object is refused: keeping either value would lose the other without a word.
- Half characters (lone surrogates), which UTF-8 cannot hold, are written as U+FFFD.
"""

from __future__ import annotations

import gc
import re
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import asdict
from itertools import count
from typing import Any, cast

import msgspec

from reliability_app import __version__
from reliability_app.session.document import ASK_NAMES, USUAL_ASKS, Ask, Basis, Session, UnitSet
from reliability_app.session.json_read import BadJson, malformed, parse, too_deep
from reliability_app.session.json_schema_types import (
    FORMAT,
    VERSION,
    BasisOfSet,
    ReadingAsked,
    SessionFile,
    SetOfUnits,
)
from reliability_app.session.json_visits import lasting_entries, log_of, requirement_of, visits_of
from reliability_app.session.json_write import (
    as_number,
    is_number,
    lines_of,
    object_lines,
    one_line,
    quoted,
    unknown_keys,
)
from reliability_app.session.migrations import to_current
from reliability_app.session.row_reading import NUMBER_COLUMNS
from reliability_app.session.session_errors import NewerVersion, SessionUnreadable, plain_reason
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, ColumnNameRefused, UnitTable

_KINDS: Mapping[str, type[Ask]] = {name: kind for kind, name in ASK_NAMES.items()}
_LEFT_OUT_AS_USUAL = ("threshold", "shape")
_LONE_SURROGATE = re.compile("[\ud800-\udfff]")
_EXACT_EVERYWHERE = re.compile(r"-?(?=[0-9.]{1,16}$)(?:0|[1-9][0-9]{0,14})(?:\.[0-9]+)?")
_CELL_DEEPEST = 16

# A small hostile file can ask for a table that takes minutes to make and more memory than there is.
MOST_EXTRA_COLUMNS = 3000
MOST_EXTRA_CELLS = 50_000_000


class _Head(msgspec.Struct):
    """The keys that say what a file is, read before anything else is believed."""

    format: Any = None
    version: Any = None
    saved_by: Any = None


_HEAD = msgspec.json.Decoder(_Head)
_WHOLE = msgspec.json.Decoder(SessionFile)


def to_text(session: Session) -> str:
    """Give the text of the file of `session`: readable, stable, one unit to a line, a newline at its end."""
    kept_readings = _kept_readings(session.kept)
    readings = [_reading_text(ask, kept_readings.get(ask, {})) for ask in session.asks]
    entries = {
        "format": FORMAT,
        "version": VERSION,
        "saved_by": __version__,
        "title": session.title,
        "notes": session.notes,
        "life_unit": session.life_unit,
        "sets": lines_of(map(_set_text, session.sets), level=1),
        "readings": lines_of(readings, level=1),
        **dict(lasting_entries(session)),
    }
    text = object_lines(_with_kept(entries, session.kept), level=0)
    return _LONE_SURROGATE.sub("\ufffd", text) + "\n"


def from_text(text: str, source: str = "The text") -> Session:
    """Read the session that `text`, the content of a file, holds. Nothing in it is run or fetched.

    Parameters
    ----------
    text : str
    source : str
        What the user knows it by; error messages begin with it.

    Raises
    ------
    SessionUnreadable
        When it is no session, or any part of it is not what its version allows; with place and reason.
    NewerVersion
        When a newer version of the program has saved it.
    """
    try:
        with _collector_at_rest():
            return _read(text, source)
    except msgspec.ValidationError as error:
        reason, place = plain_reason(error)
        raise SessionUnreadable(source, reason, place=place) from None
    except BadJson as error:
        raise SessionUnreadable(source, error.reason, place=error.place) from None


def _read(text: str, source: str) -> Session:
    data = text.encode("utf-8", "surrogatepass")
    version = _checked_version(data, source)
    content = parse(text)
    if version < VERSION:
        content = to_current(content)
        data = one_line(content).encode()
    return _session(_WHOLE.decode(data), content)


@contextmanager
def _collector_at_rest() -> Iterator[None]:
    # Reading makes an object per row and no cycles; the garbage collector, which goes through all objects again
    # each time their number has grown, took half of the time of a large file.
    at_work = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if at_work:
            gc.enable()


def _checked_version(data: bytes, source: str) -> int:
    if not data.strip():
        raise SessionUnreadable(source, "it is empty")
    try:
        head = _HEAD.decode(data)
    except msgspec.ValidationError:
        raise SessionUnreadable(source, "it is JSON, but not a Rigpaper session") from None
    except msgspec.DecodeError as error:
        raise malformed(error, data) from None
    except RecursionError:
        raise too_deep() from None
    if head.format != FORMAT:
        reason = f'it is JSON, but not a Rigpaper session (those begin with "format": "{FORMAT}")'
        raise SessionUnreadable(source, reason)
    if type(head.version) is not int or head.version < 1:
        raise SessionUnreadable(source, "its version should be a whole number from 1 up", place="$.version")
    if head.version > VERSION:
        saved_by = f", saved by Rigpaper {head.saved_by!s:.20}" if head.saved_by else ""
        reason = (
            f"it is a session of file version {head.version}{saved_by}, "
            f"and this Rigpaper {__version__} reads versions up to {VERSION}"
        )
        raise NewerVersion(source, reason, advice="Install the newer Rigpaper to open it.")
    return head.version


# Writing


def _with_kept(entries: dict[str, object], kept: Mapping[str, object]) -> dict[str, object]:
    return {**entries, **{key: value for key, value in kept.items() if key not in entries}}


def _kept_readings(kept: Mapping[str, object]) -> Mapping[Ask, Mapping[str, object]]:
    # An Ask has no room for unknown keys; "readings" itself is a known one, so its place in `kept` is free.
    return cast(Mapping[Ask, Mapping[str, object]], kept.get("readings", {}))


def _reading_text(ask: Ask, kept: Mapping[str, object]) -> str:
    numbers = {name: as_number(value) for name, value in asdict(ask).items()}
    return one_line(_with_kept({"ask": ASK_NAMES[type(ask)], **numbers}, kept))


def _set_text(unit_set: UnitSet) -> str:
    entries = {
        "name": unit_set.name,
        "colour": unit_set.colour,
        "extra_columns": unit_set.table.extra_columns,
        "units": lines_of(_unit_lines(unit_set.table), level=3),
        "basis": _basis_entries(unit_set.basis),
        **({"hidden": True} if unit_set.hidden else {}),
    }
    return object_lines(_with_kept(entries, unit_set.kept), level=2)


def _basis_entries(basis: Basis) -> dict[str, object]:
    given = {name: getattr(basis, name) for name in BasisOfSet.__struct_fields__}
    usual = BasisOfSet()
    entries = {
        name: as_number(value) if isinstance(value, float) else value
        for name, value in given.items()
        if name not in _LEFT_OUT_AS_USUAL or value != getattr(usual, name)
    }
    return _with_kept(entries, basis.kept)


def _unit_lines(table: UnitTable) -> Iterator[str]:
    encoders = [(column, f"{quoted(column)}: ", _encoder(table, column)) for column in table.columns]
    for row in range(table.row_count):
        cells = table.row(row)
        parts = [head + encode(cells[column]) for column, head, encode in encoders if column in cells]
        yield "{" + ", ".join(parts) + "}"


def _encoder(table: UnitTable, column: str) -> Callable[[str], str]:
    if column in NUMBER_COLUMNS:
        return _number_or_text
    if column in BUILT_IN_COLUMNS:
        return quoted
    texts = filter(None, (table.text(row, column) for row in range(table.row_count)))
    return str if all(map(_EXACT_EVERYWHERE.fullmatch, texts)) else _json_or_text


def _number_or_text(text: str) -> str:
    return text if is_number(text) else quoted(text)


def _json_or_text(text: str) -> str:
    if text not in ("true", "false", "null") and text[0] not in "[{":
        return quoted(text)
    try:
        unchanged = one_line(parse(text, deepest=_CELL_DEEPEST)) == text
    except BadJson:
        unchanged = False
    return text if unchanged else quoted(text)


# Reading


def _session(file: SessionFile, content: dict[str, Any]) -> Session:
    asks, kept_readings = _asks(file, content)
    kept = unknown_keys(content, SessionFile)
    return Session(
        title=file.title,
        notes=file.notes,
        life_unit=file.life_unit,
        # A session always has a set; where a file has none, it begins with an empty one.
        sets=list(map(_unit_set, file.sets, content["sets"], count())) or None,
        asks=asks,
        visits=visits_of(file, content),
        requirement=requirement_of(file, content),
        requirement_log=log_of(file, content),
        kept={**kept, "readings": kept_readings} if kept_readings else kept,
    )


def _asks(file: SessionFile, content: dict[str, Any]) -> tuple[tuple[Ask, ...], dict[Ask, dict[str, object]]]:
    if isinstance(file.readings, msgspec.UnsetType):
        return USUAL_ASKS, {}
    asks = tuple(map(_ask, file.readings))
    kept = {
        ask: unknown
        for ask, reading, raw in zip(asks, file.readings, content["readings"], strict=True)
        if (unknown := unknown_keys(raw, type(reading), "ask"))
    }
    return asks, kept


def _ask(reading: ReadingAsked) -> Ask:
    kind = reading.__struct_config__.tag
    return _KINDS[str(kind)](**msgspec.structs.asdict(reading))


def _unit_set(known: SetOfUnits, content: dict[str, Any], index: int) -> UnitSet:
    kept_of_basis = unknown_keys(content.get("basis", {}), BasisOfSet)
    return UnitSet(
        name=known.name,
        table=_table(known, content.get("units", []), place=f"$.sets[{index}]"),
        basis=Basis(**msgspec.structs.asdict(known.basis), kept=kept_of_basis),
        colour=known.colour,
        kept=unknown_keys(content, SetOfUnits),
        hidden=known.hidden,
    )


def _table(known: SetOfUnits, rows: list[dict[str, Any]], *, place: str) -> UnitTable:
    met: dict[str, object] = {}
    for row in rows:
        met.update(row)
        for key, value in row.items():
            if type(value) is not str:
                row[key] = str(one_line(value))
    declared = {*BUILT_IN_COLUMNS, *known.extra_columns}
    extra_columns = [*known.extra_columns, *(column for column in met if column not in declared)]
    if len(extra_columns) > MOST_EXTRA_COLUMNS or len(rows) * len(extra_columns) > MOST_EXTRA_CELLS:
        size = f"{len(rows):,} rows and {len(extra_columns):,} further columns"
        raise BadJson(f"its table of {size} is larger than this program can hold", place)
    try:
        return UnitTable.from_rows(rows, extra_columns=extra_columns)
    except ColumnNameRefused as error:
        raise BadJson(f"a column has a name it cannot have ({str(error).rstrip('.')})", place) from None
