"""Opens any file the program reads, a session or a table of units, as a session."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from reliability_app.session.document import Session, UnitSet
from reliability_app.session.file_state import FileState
from reliability_app.session.json_file import is_session_file, load_and_note
from reliability_app.session.numbers import quoted
from reliability_app.session.table_errors import NoSuchSheet
from reliability_app.session.table_files import read_table
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable


@dataclass(frozen=True, eq=False)
class Opened:
    """A session made from a file, whether the file is a session itself, and what is to be said of its reading.

    `seen` is what a session's file held when it was opened, for `save` to compare with.
    """

    session: Session
    is_session: bool
    remarks: tuple[str, ...] = ()
    understood: Understanding | None = None
    seen: FileState | None = None


def open_file(path: Path, *, sheet: str | None = None, session_unit: str | None = None) -> Opened:
    """Open a session, or a table as the only set of a new session.

    Parameters
    ----------
    path : Path
    sheet : str, optional
        Which sheet of a spreadsheet file to read.
    session_unit : str, optional
        The unit of lives of the session that the table is to join.

    Raises
    ------
    SessionUnreadable, TableUnreadable
        With the file, the place and the reason.
    """
    if is_session_file(path):
        if sheet is not None:
            raise NoSuchSheet(f"{path} is a session, which has no sheet {quoted(sheet)}.")
        session, seen = load_and_note(path)
        return Opened(session, is_session=True, seen=seen)
    understood = read_table(path, sheet=sheet, session_unit=session_unit)
    table = UnitTable.from_rows(understood.rows, understood.extra_columns)
    session = Session(title=path.stem, sets=[UnitSet(name=path.stem, table=table)])
    if understood.life_unit:
        session.life_unit = understood.life_unit
    remarks = (understood.sentence, *understood.notes)
    return Opened(session, is_session=False, remarks=remarks, understood=understood)
