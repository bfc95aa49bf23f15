"""Answers `rigpaper update`: brings a newer table into a set of a session file, or tells what that would change."""

from __future__ import annotations

from collections.abc import Sequence
from contextlib import ExitStack
from dataclasses import dataclass
from pathlib import Path

from reliability_app.session.document import Session
from reliability_app.session.file_lock import FileLock
from reliability_app.session.json_file import backup_of, is_session_file, load_and_note, save
from reliability_app.session.new_results import BringIn, Happened, News, UnitNews, news_of
from reliability_app.session.reading_request import RequestRefused, places_named
from reliability_app.session.table_errors import NoSuchSheet
from reliability_app.session.table_files import read_table
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable

_ROW = "row "


@dataclass(frozen=True, eq=False)
class UpdateAnswer:
    """What a newer table changes in a set, or would.

    Attributes
    ----------
    set_name : str
    news : News
    written : tuple of UnitNews
        What is written, or would be.
    open_questions : tuple of UnitNews
        What is left as it was, because nobody said that it is right.
    remarks : tuple of str
        What was understood of the table.
    saved_to : Path or None
        The file that was written.
    """

    set_name: str
    news: News
    written: tuple[UnitNews, ...]
    open_questions: tuple[UnitNews, ...]
    remarks: tuple[str, ...]
    saved_to: Path | None

    @property
    def changes(self) -> bool:
        """True where something changed, or would."""
        return bool(self.written)

    def as_text(self) -> str:
        """Return the sentence, the table of changes and the questions, for a terminal."""
        lines = [f"{self.set_name}: {self.news.sentence.rstrip('.')}."]
        lines += [f"  {line}" for line in _table(self.written)]
        if self.open_questions:
            lines.append("Left as it was; say --take UNIT where it is right:")
            lines += [f"  ? {_name(news)}: {news.sentence}" for news in self.open_questions]
        lines.append(self._outcome())
        return "\n".join(lines)

    def _outcome(self) -> str:
        if self.saved_to is not None:
            return f"Saved in {self.saved_to}; the state before is in {backup_of(self.saved_to)}."
        if not self.changes:
            return "Nothing changes."
        return "Nothing was written: say --write to save this in the session."


def update_request(
    file: Path,
    newer: Path,
    *,
    set_name: str | None = None,
    sheet: str | None = None,
    take: Sequence[str] = (),
    write: bool = False,
) -> UpdateAnswer:
    """Hold a newer table against a set of a session, and with `write` save what it says.

    Parameters
    ----------
    file : Path
        The session.
    newer : Path
        The table.
    set_name : str, optional
        The set; needed where the session has several.
    sheet : str, optional
        The sheet of a spreadsheet file.
    take : sequence of str
        Units whose question is answered with yes: by name, or "row 7" of the newer table.
    write : bool
        Save, with the state before kept beside; without it nothing is written anywhere.

    Raises
    ------
    RequestRefused
        For a set, a sheet or a unit that is not there, a session that is none, or lives in another unit.
    SessionUnreadable, TableUnreadable, NotSaved, FileInUse
    """
    if not is_session_file(file):
        raise RequestRefused(f"{file} is no session: a newer table is brought into a session.")
    with ExitStack() as held:
        if write:
            held.enter_context(FileLock(file))  # before it is read, so that nobody saves in between
        session, seen = load_and_note(file)
        place = _place(session, set_name)
        understood = _table_of(newer, sheet, session.life_unit)
        table = UnitTable.from_rows(understood.rows, understood.extra_columns)
        news = news_of(session.sets[place].table, table)
        edit = BringIn(place, news, taken=_taken(news, take))
        if write and edit.written:
            edit.apply(session)
            save(session, file, seen=seen)
        return UpdateAnswer(
            set_name=session.sets[place].name,
            news=news,
            written=edit.written,
            open_questions=tuple(one for one in news.questions if one.incoming_row not in edit.taken),
            remarks=(understood.sentence, *understood.notes),
            saved_to=file if write and edit.written else None,
        )


def _place(session: Session, set_name: str | None) -> int:
    places = places_named(session, set_name)
    if len(places) > 1:
        names = ", ".join(repr(session.sets[place].name) for place in places)
        raise RequestRefused(f"The session has several sets: say with --set which one is meant. The sets are: {names}.")
    return places[0]


def _table_of(newer: Path, sheet: str | None, life_unit: str) -> Understanding:
    if is_session_file(newer):
        raise RequestRefused(f"{newer} is a session: give the table of units that is to be brought in.")
    try:
        understood = read_table(newer, sheet=sheet, session_unit=life_unit)
    except NoSuchSheet as refusal:
        raise RequestRefused(str(refusal)) from refusal
    if understood.life_unit and life_unit and understood.life_unit != life_unit:
        raise RequestRefused(
            f"The table gives lives in {understood.life_unit}, the session in {life_unit}: convert the table first."
        )
    return understood


def _taken(news: News, take: Sequence[str]) -> frozenset[int]:
    """Return the rows of the newer table whose question is answered with yes."""
    asked = news.questions
    rows: set[int] = set()
    for name in take:
        meant = [one.incoming_row for one in asked if name in (one.unit, _name(one))]
        if not meant:
            known = ", ".join(_name(one) for one in asked) or "none"
            raise RequestRefused(f"Nothing is asked about {name!r}. What is asked about: {known}.")
        rows.update(meant)
    return frozenset(rows)


def _name(news: UnitNews) -> str:
    return news.unit or f"{_ROW}{news.incoming_row + 1}"


def _table(written: Sequence[UnitNews]) -> list[str]:
    """Return a line for each unit that changes: what it is called, what happened, what was and what is known."""
    rows = [(_name(news), _what(news), news.before or "-", news.after or "not readable") for news in written]
    if not rows:
        return []
    head = ("Unit", "What", "Before", "After")
    widths = [max(map(len, column)) for column in zip(head, *rows, strict=True)]
    return [
        "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip() for row in (head, *rows)
    ]


def _what(news: UnitNews) -> str:
    if news.happened is Happened.SAME:
        return f"further cells: {', '.join(news.cells)}"
    return str(news.happened.value)
