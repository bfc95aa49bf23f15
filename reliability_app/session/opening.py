"""Opens any file the program reads, a session or a table of units, as a session."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from reliability_app.session.document import Session, UnitSet
from reliability_app.session.json_file import is_session_file, load
from reliability_app.session.table_files import read_table
from reliability_app.session.unit_table import UnitTable


@dataclass(frozen=True, eq=False)
class Opened:
    """A session made from a file, whether the file is a session itself, and what is to be said of its reading."""

    session: Session
    is_session: bool
    remarks: tuple[str, ...] = ()


def open_file(path: Path) -> Opened:
    """Open a session, or a table as the only set of a new session.

    Raises
    ------
    SessionUnreadable, TableUnreadable
        With the file, the place and the reason.
    """
    if is_session_file(path):
        return Opened(load(path), is_session=True)
    understood = read_table(path)
    table = UnitTable.from_rows(understood.rows, understood.extra_columns)
    session = Session(title=path.stem, sets=[UnitSet(name=path.stem, table=table)])
    if understood.life_unit:
        session.life_unit = understood.life_unit
    return Opened(session, is_session=False, remarks=(understood.sentence, *understood.notes))
