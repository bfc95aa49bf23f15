"""Holds a newer table of units against a set: what has happened to each unit, what is odd, and the edit that takes it.

Rows are matched by the name of the unit. What was observed of a unit (life, until, state) is taken from the newer table
as a whole; its other cells where the newer table has something to say. A row without a name is added, never guessed to
be an old one; a name that stands twice, in either table, is matched to none. What cannot be (a failed unit that runs
again, a life shorter than before) is asked about, and left as it was unless the user says that it is right.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, field, replace
from enum import Enum
from math import inf, isinf

from reliability_app.session.table_edits import TableEdit
from reliability_app.session.unit_table import TableChange, UnitTable
from reliability_app.session.wording import listed_names

_OBSERVED = ("life", "until", "state")
_MARKS, _ZEROS = re.compile(r"[\W_]+"), re.compile(r"(?<![0-9])0+(?=[0-9])")


class Happened(Enum):
    """What the newer table says of a unit; the value completes a count: "3 newly failed"."""

    NEWLY_FAILED = "newly failed"
    OLDER = "still running and older"
    NEW = "new"
    CORRECTED = "corrected"
    SAME = "unchanged"
    RUNS_AGAIN = "went from failed back to running"
    YOUNGER = "with a life shorter than before"
    TWICE = "of a name that stands more than once"
    NAMED_ALIKE = "named almost like a unit there"
    UNREAD = "that cannot be read"


ASKED_ABOUT = frozenset({Happened.RUNS_AGAIN, Happened.YOUNGER, Happened.TWICE, Happened.NAMED_ALIKE, Happened.UNREAD})
"""What is left as it was unless the user says that it is right."""


@dataclass(frozen=True)
class Observed:
    """What is known of the unit of a row: failed at `lower` == `upper`, or between them, or running at `lower`."""

    lower: float
    upper: float
    words: str

    @property
    def is_running(self) -> bool:
        """True where the unit was still running."""
        return isinf(self.upper)


@dataclass(frozen=True)
class UnitNews:
    """What the newer table says of one unit.

    Attributes
    ----------
    happened : Happened
    unit : str
        Its name; "" where it has none.
    incoming_row : int
        Its row in the newer table.
    row : int or None
        Its row in the set; None where it is to be added.
    before, after : str
        What was known and what is said now, in words: "running at 500"; "" where there is nothing.
    cells : mapping
        The texts to be written, by column.
    known_as : str
        The name of the unit of the set that it may be, where that is written a little otherwise.
    """

    happened: Happened
    unit: str
    incoming_row: int
    row: int | None
    before: str
    after: str
    cells: Mapping[str, str]
    known_as: str = ""

    @property
    def is_asked_about(self) -> bool:
        """True where it is taken only if the user says that it is right."""
        return self.happened in ASKED_ABOUT

    @property
    def sentence(self) -> str:
        """What has happened to the unit, in one sentence; a question where it is odd."""
        name = self.unit or f"row {self.incoming_row + 1} of the newer table"
        match self.happened:
            case Happened.RUNS_AGAIN:
                return f"{name} was {self.before}, and is now {self.after}: is that right?"
            case Happened.YOUNGER:
                return f"{name} was {self.before} before, and is now {self.after}: is that right?"
            case Happened.TWICE:
                return f"{name} stands more than once, so that it is not known which row is meant: add it as a new row?"
            case Happened.NAMED_ALIKE:
                return (
                    f"{name} is named almost like {self.known_as}, which was {self.before}: the same, now {self.after}?"
                )
            case Happened.UNREAD:
                return f"{name} cannot be read in the newer table: take it as it stands?"
            case Happened.NEW:
                return f"{name} is new: {self.after}."
            case _:
                return f"{name} was {self.before}, and is now {self.after}."


@dataclass(frozen=True)
class News:
    """What a newer table says of a set.

    Attributes
    ----------
    units : tuple of UnitNews
        In the order of the newer table.
    missing : tuple of str
        Units of the set that the newer table does not name; they stay as they are.
    extra_columns : tuple of str
        Columns of the newer table that the set does not have yet.
    """

    units: tuple[UnitNews, ...]
    missing: tuple[str, ...]
    extra_columns: tuple[str, ...]

    @property
    def questions(self) -> tuple[UnitNews, ...]:
        """What is odd and asked about."""
        return tuple(news for news in self.units if news.is_asked_about)

    @property
    def changes_anything(self) -> bool:
        """True where something would be written, or could be if a question is answered with yes."""
        return any(news.happened is not Happened.SAME or news.cells for news in self.units)

    @property
    def sentence(self) -> str:
        """What will change, in one line: 3 newly failed, 5 still running and older, 2 new."""
        counted = Counter(news.happened for news in self.units)
        parts = [f"{counted[kind]} {kind.value}" for kind in Happened if counted[kind]]
        if self.missing:
            parts.append(f"{len(self.missing)} not in the newer table, left as they are ({listed_names(self.missing)})")
        return ", ".join(parts) if parts else "The newer table holds no units."


def news_of(table: UnitTable, newer: UnitTable) -> News:
    """Hold a newer table against the table of a set; nothing is changed."""
    known, said = _observations(table), _observations(newer)
    rows_of = _rows_by_name(table)
    times = Counter(newer.names().values())
    missing = tuple(name for name in rows_of if name not in times)
    alike = _alone_of_their_kind(missing)
    listed = []
    for row in range(newer.row_count):
        name = newer.text(row, "unit")
        if newer.row_is_read(row) is None and not name:
            continue
        own = rows_of.get(name, ())
        if name and (len(own) > 1 or times[name] > 1):
            listed.append(_added(newer, row, said, Happened.TWICE))
        elif name and not own and row in said and _kind_of(name) in alike:
            known_as = alike[_kind_of(name)]
            match = _matched(table, rows_of[known_as][0], newer, row, (known.get(rows_of[known_as][0]), said[row]))
            listed.append(replace(match, happened=Happened.NAMED_ALIKE, known_as=known_as))
        elif not name or not own:
            listed.append(_added(newer, row, said, Happened.NEW if row in said else Happened.UNREAD))
        else:
            listed.append(_matched(table, own[0], newer, row, (known.get(own[0]), said.get(row))))
    extra = tuple(name for name in newer.extra_columns if name not in table.columns)
    return News(tuple(listed), missing, extra)


@dataclass(eq=False)
class BringIn(TableEdit):
    """Write what a newer table says into a set, as one undo step.

    `taken` names the rows of the newer table whose question was answered with yes; of the others nothing is written.
    """

    set_index: int
    news: News
    taken: Collection[int] = ()
    _steps: list[TableChange] = field(default_factory=list, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "bringing in new results"

    @property
    def written(self) -> tuple[UnitNews, ...]:
        """What is written."""
        return tuple(
            news
            for news in self.news.units
            if news.cells and (not news.is_asked_about or news.incoming_row in self.taken)
        )

    def _carry_out(self, table: UnitTable) -> None:
        used = {column for news in self.written for column in news.cells}
        for name in self.news.extra_columns:
            if name in used:
                self._steps.append(table.add_column(name))
        added = [news for news in self.written if news.row is None]
        for news in self.written:
            if news.row is not None:
                self._write(table, news.row, [news.cells])
        if added:
            self._write(table, table.row_count, [news.cells for news in added])

    def _write(self, table: UnitTable, row: int, cells: Sequence[Mapping[str, str]]) -> None:
        columns = tuple(column for column in table.columns if any(column in each for each in cells))
        texts = [[each.get(column, "") for column in columns] for each in cells]
        self._steps.append(table.set_block(row, columns, texts))


def _added(newer: UnitTable, row: int, said: Mapping[int, Observed], happened: Happened) -> UnitNews:
    after = said[row].words if row in said else ""
    return UnitNews(happened, newer.text(row, "unit"), row, None, "", after, newer.row(row))


def _matched(
    table: UnitTable, own: int, newer: UnitTable, row: int, observed: tuple[Observed | None, Observed | None]
) -> UnitNews:
    before, after = observed
    given = newer.row(row)
    cells = {column: given.get(column, "") for column in _OBSERVED} | {
        column: text for column, text in given.items() if column not in (*_OBSERVED, "unit")
    }
    cells = {column: text for column, text in cells.items() if _differs(table, own, column, text)}
    if after is None:
        happened = Happened.UNREAD
    elif before is None:
        happened = Happened.CORRECTED
    else:
        happened = _happened(before, after, changed=bool(cells))
    words = before.words if before else "not readable"
    return UnitNews(happened, newer.text(row, "unit"), row, own, words, after.words if after else "", cells)


def _differs(table: UnitTable, row: int, column: str, text: str) -> bool:
    if column not in table.columns:
        return bool(text)
    there = table.text(row, column)
    if there == text:
        return False
    try:
        return float(there) != float(text)
    except ValueError:
        return True


def _happened(before: Observed, after: Observed, *, changed: bool) -> Happened:
    """Say what has happened to a unit that can be read in both tables."""
    if (before.lower, before.upper) == (after.lower, after.upper):
        return Happened.CORRECTED if changed else Happened.SAME
    if before.is_running:
        latest = after.lower if after.is_running else after.upper
        ends_too_soon = after.lower < after.upper == before.lower  # found failed by an age it had reached running
        if latest < before.lower or ends_too_soon:
            return Happened.YOUNGER
        return Happened.OLDER if after.is_running else Happened.NEWLY_FAILED
    if after.is_running:
        return Happened.RUNS_AGAIN
    return Happened.YOUNGER if after.upper < before.lower else Happened.CORRECTED


def _observations(table: UnitTable) -> dict[int, Observed]:
    units = table.read_units()
    return {
        row: Observed(lower, upper, _words(lower, upper, int(quantity)))
        for row, lower, upper, quantity in zip(
            units.rows, units.lower.tolist(), units.upper.tolist(), units.quantity.tolist(), strict=True
        )
    }


def _words(lower: float, upper: float, quantity: int) -> str:
    several = f", {quantity} units" if quantity > 1 else ""
    if upper == inf:
        return f"running at {lower:.12g}{several}"
    if lower == upper:
        return f"failed at {lower:.12g}{several}"
    return f"found failed between {lower:.12g} and {upper:.12g}{several}"


def _kind_of(name: str) -> str:
    """Return what is left of a name without marks, spaces, capitals and leading zeros: P-08, P 8 and p08 are one."""
    return _ZEROS.sub("", _MARKS.sub("", name).casefold())


def _alone_of_their_kind(names: Sequence[str]) -> dict[str, str]:
    """Return the names that no other resembles, by what is left of them."""
    times = Counter(map(_kind_of, names))
    return {_kind_of(name): name for name in names if times[_kind_of(name)] == 1}


def _rows_by_name(table: UnitTable) -> dict[str, list[int]]:
    rows: dict[str, list[int]] = {}
    for row, name in table.names().items():
        rows.setdefault(name, []).append(row)
    return rows
