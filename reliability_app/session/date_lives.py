"""Counts lives between two dates, in an exact unit of time; a unit without an end runs until the date of the data."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime

from reliability_app.session.date_columns import says_running
from reliability_app.session.dates import (
    DayOrder,
    decide_order,
    in_doubt,
    looks_like_date,
    read_compact_date,
    read_date,
    written,
)
from reliability_app.session.numbers import is_missing, quoted
from reliability_app.session.states import FAILED, RUNNING

# Seconds in each unit that lives between dates are counted in. A month has no fixed length, so it is not among them.
DATE_UNITS: dict[str, float] = {
    "h": 3600.0,
    "days": 86400.0,
    "weeks": 7 * 86400.0,
    "years": 365.25 * 86400.0,
    "min": 60.0,
    "s": 1.0,
}


@dataclass(frozen=True)
class DateChoices:
    """What was chosen by hand about dates; None where it is to be found out."""

    order: DayOrder | None = None
    data_date: str | None = None
    unit: str | None = None
    end_means: str | None = None


@dataclass(frozen=True, eq=False)
class EndDates:
    """One column of end dates, with the state its heading says (None: not said)."""

    cells: Sequence[str]
    state: str | None


@dataclass(frozen=True, eq=False)
class DateLives:
    """Lives counted between dates.

    Attributes
    ----------
    lives, states : list of str
        The Life and State cells, one per row.
    unit : str
        A key of DATE_UNITS.
    data_date : str
        The date until which units without an end date run, in ISO form; "" where no date could be read.
    open_rows : int
        Rows that run until then.
    order : DayOrder
        Which number comes first in dates like 03/04/2025; AMBIGUOUS if that must be asked.
    doubtful : str
        A date that may be two, where it must be asked; else "".
    end_means : str or None
        The state that an end date was taken to say; None where a column of states or the headings say it.
    notes : tuple of str
    """

    lives: list[str]
    states: list[str]
    unit: str
    data_date: str
    open_rows: int
    order: DayOrder
    doubtful: str
    end_means: str | None
    notes: tuple[str, ...]


def lives_from_dates(
    starts: Sequence[str],
    ends: Sequence[EndDates],
    states: Sequence[str] | None,
    choices: DateChoices,
    session_unit: str | None,
) -> DateLives:
    """Count the lives of a table.

    Parameters
    ----------
    starts : sequence of str
        The start date of each row, as typed.
    ends : sequence of EndDates
        One or more columns of end dates.
    states : sequence of str or None
        The State cells in our own words, as far as they were understood; None without such a column.
    choices : DateChoices
    session_unit : str or None
        The unit of the lives that the session has already; None if it has none yet.
    """
    order, doubtful, notes = _order(starts, ends, choices)
    begun = _moments(starts, order)
    # What was chosen by hand goes before what headings say.
    columns = [_Ends(_moments(end.cells, order), end.cells, None if choices.end_means else end.state) for end in ends]
    means, said = _end_means(columns, states, choices)
    notes += said
    known = [moment for column in (begun, *(end.moments for end in columns)) for moment in column if moment]
    data_date = _data_date(choices, known)
    unit = _unit(choices, known, session_unit, notes)
    counting = _Counting(DATE_UNITS[unit], data_date, means)
    rows = range(len(starts))
    cells = [counting.count(row, starts, begun, columns, states[row] if states else "") for row in rows]
    notes += counting.notes(data_date, chosen=bool(choices.data_date))
    lives, read_states = [life for life, _ in cells], [state for _, state in cells]
    shown = written(data_date) if data_date else ""
    return DateLives(
        lives, read_states, unit, shown, counting.open_rows, order, doubtful, None if states else means, tuple(notes)
    )


@dataclass(frozen=True, eq=False)
class _Ends:
    moments: list[datetime | None]
    cells: Sequence[str]
    state: str | None


class _Counting:
    """Counts row by row, and remembers what is to be said of the rows."""

    def __init__(self, seconds: float, data_date: datetime | None, means: str | None) -> None:
        self.open_rows = 0
        self._seconds, self._data_date, self._means = seconds, data_date, means
        self._odd: Counter[str] = Counter()
        self._example: dict[str, str] = {}

    def count(
        self, row: int, starts: Sequence[str], begun: Sequence[datetime | None], columns: Sequence[_Ends], state: str
    ) -> tuple[str, str]:
        """Return the Life and the State cell of a row."""
        start = begun[row]
        if not starts[row] and not any(end.cells[row] for end in columns):
            return "", state
        if start is None and looks_like_date(starts[row]):
            return self._in_doubt(row, starts, columns), state
        if start is None:
            self._note("unread", starts[row] or "an empty cell", row)
            return "", state
        end = _end_of(row, columns, state)
        if end is None:
            return self._still_running(start, state)
        moment, said = end.moments[row], end.state or self._means
        if moment is None and looks_like_date(end.cells[row]):
            return self._in_doubt(row, starts, columns), state or said or ""
        if moment is None:
            self._note("unread", end.cells[row], row)
            return "", state or said or ""
        if moment < start:
            self._note("backwards", f"{written(moment)} is before {written(start)}", row)
        return self._life(start, moment), state or said or ""

    def _still_running(self, start: datetime, state: str) -> tuple[str, str]:
        if state == FAILED or self._data_date is None:
            self._odd["undated"] += 1
            return "", state
        self.open_rows += 1
        return self._life(start, self._data_date), state or RUNNING

    def _life(self, start: datetime, end: datetime) -> str:
        return f"{(end - start).total_seconds() / self._seconds:.10g}"

    @staticmethod
    def _in_doubt(row: int, starts: Sequence[str], columns: Sequence[_Ends]) -> str:
        end = next((end.cells[row] for end in columns if end.cells[row]), "")
        return f"{starts[row]} to {end}" if end else f"since {starts[row]}"

    def _note(self, kind: str, example: str, row: int) -> None:
        self._odd[kind] += 1
        self._example.setdefault(kind, f"{example}, row {row + 1}")

    def notes(self, data_date: datetime | None, *, chosen: bool) -> list[str]:
        """Return what is to be said, a sentence each."""
        notes = []
        if self.open_rows and data_date:
            until = "the date given" if chosen else "the latest date in the table"
            units = "1 unit" if self.open_rows == 1 else f"{self.open_rows} units"
            notes.append(f"{units} without an end date: running until {written(data_date)}, {until}.")
        if count := self._odd["backwards"]:
            notes.append(f"{_rows_end(count)} before the start ({self._example['backwards']}): correct the dates.")
        if count := self._odd["unread"]:
            named = "1 date" if count == 1 else f"{count} dates"
            notes.append(f"{named} could not be read ({self._example['unread']}): type them like 2025-04-03.")
        if count := self._odd["undated"]:
            named = "1 failed unit has" if count == 1 else f"{count} failed units have"
            notes.append(f"{named} no end date: type it, or the life.")
        return notes


def _rows_end(count: int) -> str:
    return "1 row ends" if count == 1 else f"{count} rows end"


def _end_of(row: int, columns: Sequence[_Ends], state: str) -> _Ends | None:
    """Return the column whose end date counts in a row; None for a unit still running."""
    held = [end for end in columns if end.cells[row] and not is_missing(end.cells[row])]
    held = [end for end in held if not (end.moments[row] is None and says_running(end.cells[row]))]
    if not held:
        return None
    first = (state, None) if state in (FAILED, RUNNING) else (FAILED, None, RUNNING)
    return min(held, key=lambda end: first.index(end.state) if end.state in first else len(first))


def _moments(cells: Sequence[str], order: DayOrder) -> list[datetime | None]:
    compact = all(not cell or cell.isdecimal() for cell in cells)
    return [(read_compact_date(cell) if compact else read_date(cell, order)) if cell else None for cell in cells]


def _order(starts: Sequence[str], ends: Sequence[EndDates], choices: DateChoices) -> tuple[DayOrder, str, list[str]]:
    """Return which number comes first, a date in doubt if that must be asked, and what is to be said."""
    if choices.order is not None:
        return choices.order, "", []
    columns = [starts, *(end.cells for end in ends)]
    cells = [cell for column in columns for cell in column]
    doubtful = next((cell for cell in cells if in_doubt(cell)), "")
    proven = decide_order(cells)
    if not doubtful:
        return proven or DayOrder.AMBIGUOUS, "", []
    if proven is DayOrder.AMBIGUOUS:
        return proven, doubtful, ["Some dates have the day first and some the month: write them like 2025-04-03."]
    if proven is not None:
        return proven, "", [f"Dates such as {quoted(doubtful)} were read with the {proven.value}."]
    backwards = {order: _backwards(starts, ends, order) for order in (DayOrder.DAY_FIRST, DayOrder.MONTH_FIRST)}
    possible = [order for order, count in backwards.items() if not count]
    if len(possible) == 1:
        count = max(backwards.values())
        reason = f"the other way {_rows_end(count)} before the start"
        return possible[0], "", [f"Dates such as {quoted(doubtful)} were read with the {possible[0].value}: {reason}."]
    return DayOrder.AMBIGUOUS, doubtful, [f"{ways_to_read(doubtful)}: say which, or write dates like 2025-04-03."]


def ways_to_read(doubtful: str) -> str:
    """Return what a date in doubt may be: "'03/04/2025' may be 3 April 2025 or 4 March 2025"."""
    ways = [read_date(doubtful, order) for order in (DayOrder.DAY_FIRST, DayOrder.MONTH_FIRST)]
    return f"{quoted(doubtful)} may be " + " or ".join(f"{moment.day} {moment:%B %Y}" for moment in ways if moment)


def _backwards(starts: Sequence[str], ends: Sequence[EndDates], order: DayOrder) -> int:
    begun = _moments(starts, order)
    return sum(
        start is not None and end is not None and end < start
        for column in ends
        for start, end in zip(begun, _moments(column.cells, order), strict=True)
    )


def _end_means(
    columns: Sequence[_Ends], states: Sequence[str] | None, choices: DateChoices
) -> tuple[str | None, list[str]]:
    """Return the state that an end date says where its heading does not, and a sentence on it."""
    if choices.end_means is not None:
        return choices.end_means, []
    if states is not None:
        return None, []
    said = {end.state for end in columns}
    if said == {RUNNING}:
        return RUNNING, ["No column says which units failed: every end date was read as that of a unit still running."]
    if None in said:
        return FAILED, ["No column says which units failed: an end date was read as a failure, none as running."]
    return FAILED, []


def _data_date(choices: DateChoices, known: Sequence[datetime]) -> datetime | None:
    given = read_date(choices.data_date) if choices.data_date else None
    return given or max(known, default=None)


def _unit(choices: DateChoices, known: Sequence[datetime], session_unit: str | None, notes: list[str]) -> str:
    if choices.unit in DATE_UNITS:
        return str(choices.unit)
    if session_unit in DATE_UNITS:
        return str(session_unit)
    if session_unit == "months":
        notes.append("Months differ in length: lives were counted in days.")
    has_times = any(moment.hour or moment.minute or moment.second for moment in known)
    return "h" if has_times else "days"
