"""What was understood of a pasted or opened table, and the sentence that says so."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Any, Protocol

from reliability_app.session.column_guess import Columns
from reliability_app.session.date_columns import END_DATE, START_DATE, DatePlan
from reliability_app.session.date_lives import DateChoices, DateLives
from reliability_app.session.numbers import DecimalMark, quoted
from reliability_app.session.row_reading import HEADINGS

_ORDER = ("unit", "life", "until", "state", "quantity", "entered", "cause", "note")
_WORDS_SHOWN = 3
_EXTRAS_SHOWN = 4
_LONG_UNITS = {"h": "hours", "years": "years of 365.25 days", "min": "minutes", "s": "seconds"}


class Sheets(Protocol):
    """A file of several sheets, each of which can be read."""

    @property
    def names(self) -> tuple[str, ...]:
        """The sheets that hold anything, in their order."""

    def table(self, name: str) -> SourceTable:
        """Return one sheet as it came."""


@dataclass(frozen=True, eq=False)
class SourceTable:
    """A table as it came.

    Attributes
    ----------
    columns : tuple of list of str
        Stripped cells, column by column.
    heading_row : int or None
        The row of headings, if there is any.
    notes : tuple of str
        What was odd in the text.
    existing_extras : tuple of str
        The user's own columns of the table that the rows will join.
    at_column : str or None
        The column in which the cursor stands.
    session_unit : str or None
        The unit of the lives that the session has already; None if it has none yet.
    true_numbers : frozenset of int
        Columns that came with numbers in them, not with texts of numbers.
    separator : str
        What stands between the cells in a text; "" if that tells nothing.
    full_numbers : frozenset of int
        Columns of a text in which a spreadsheet gave numbers in full: their points are decimal points.
    sheets, sheet
        The file of sheets it is from, and which of them it is.
    """

    columns: tuple[list[str], ...]
    heading_row: int | None
    notes: tuple[str, ...] = ()
    existing_extras: tuple[str, ...] = ()
    at_column: str | None = None
    session_unit: str | None = None
    true_numbers: frozenset[int] = frozenset()
    separator: str = ""
    full_numbers: frozenset[int] = frozenset()
    sheets: Sheets | None = None
    sheet: str = ""

    @property
    def headings(self) -> tuple[str, ...]:
        """One text per column; all "" without headings."""
        place = self.heading_row
        return tuple("" if place is None else column[place] for column in self.columns)

    @property
    def body(self) -> list[list[str]]:
        """The cells without the headings, column by column; title lines above the headings are among them."""
        place = self.heading_row
        if place is None:
            return list(self.columns)
        return [column[:place] + column[place + 1 :] for column in self.columns]


@dataclass(frozen=True)
class Choices:
    """What was chosen by hand over what the reader made of a table: see `pasted_text.reread`."""

    columns: Mapping[int, str | None] = field(default_factory=dict)
    mark: DecimalMark | None = None
    yes_means: str | None = None
    states: Mapping[str, str] = field(default_factory=dict)
    dates: DateChoices = field(default_factory=DateChoices)


@dataclass(frozen=True)
class Option:
    """One answer to an open question: what it says, and what `pasted_text.reread` is to be called with."""

    label: str
    choice: Mapping[str, Any]


@dataclass(frozen=True)
class OpenQuestion:
    """Something the table does not tell, so that whoever brought it must: a sentence and the answers there are."""

    sentence: str
    options: tuple[Option, ...]


@dataclass(frozen=True, eq=False)
class Understanding:
    """A table understood: rows ready for the unit table, and what is to be said about them.

    Attributes
    ----------
    rows : list of dict
        Per row the cells that hold text, by column key, in canonical form or as typed.
    extra_columns : tuple of str
        The user's own columns in `rows`, by name.
    sentence : str
        What was understood, in one line.
    notes : tuple of str
        What was odd, a sentence each.
    faulty : int
        Rows that cannot be read.
    life_unit : str or None
        The unit of the lives ("h", "cycles"), if the table says it.
    columns : tuple of str or None
        Per column of the source its key; None for one without any text.
    headings : tuple of str
        Per column of the source its heading, "" without one.
    mark : DecimalMark
        The decimal mark of the lives; AMBIGUOUS if each number had to speak for itself.
    plan : DatePlan or None
        From which columns of dates lives were counted; None where a column holds the lives.
    dates : DateLives or None
        How they were counted.
    state_words : mapping of str to str or None
        The words of the state column and what each was read as; None for one that is not known.
    questions : tuple of OpenQuestion
        What must be asked.
    source, choices
        What `pasted_text.reread` works from.
    """

    rows: list[dict[str, str]]
    extra_columns: tuple[str, ...]
    sentence: str
    notes: tuple[str, ...]
    faulty: int
    life_unit: str | None
    columns: tuple[str | None, ...]
    headings: tuple[str, ...]
    mark: DecimalMark
    source: SourceTable
    choices: Choices
    plan: DatePlan | None = None
    dates: DateLives | None = None
    state_words: Mapping[str, str | None] = field(default_factory=dict)
    questions: tuple[OpenQuestion, ...] = ()

    def meaning(self, place: int) -> str | None:
        """Return what a column of the source was taken for: a column's key, START_DATE or END_DATE; None if empty."""
        if self.plan is not None and place == self.plan.start:
            return START_DATE
        if self.plan is not None and place in (end for end, _ in self.plan.ends):
            return END_DATE
        return self.columns[place]

    def with_note(self, note: str) -> Understanding:
        """Return a copy that says `note` too."""
        return replace(self, notes=(*self.notes, note))


def describe(
    count: int, columns: Columns, headings: Sequence[str], states: str | Mapping[str, str], unit_of_dates: str = ""
) -> str:
    """Return the line on what was understood: "12 rows; life in column 2, state in column 3: 'ok' read as running".

    `states` tells what each word of the state column was read as, or how states were read without such a column;
    `unit_of_dates`, in what lives were counted between dates.
    """
    if not count:
        return "There are no rows in the text." if not any(headings) else "There are headings but no rows below."
    where = {key: place for place, key in enumerate(columns.keys) if key}
    parts = [_place(key, where[key], headings) for key in _ORDER if key in where]
    if columns.dates is not None:
        parts.insert(0, _counted(columns.dates, headings, unit_of_dates))
    elif "life" not in where:
        parts.append("no column of lives found")
    if isinstance(states, str):
        parts += [states] if states else []
    elif words := _words_read(states):
        at = next(number for number, part in enumerate(parts) if part.startswith("state"))
        parts[at] += f": {words}"
    extras = [key for key in where if key not in _ORDER]
    if extras:
        parts.append(_kept_columns(extras))
    rows = "1 row" if count == 1 else f"{count:,} rows".replace(",", " ")
    return f"{rows}; {', '.join(parts)}."


def _place(key: str, place: int, headings: Sequence[str]) -> str:
    heading = headings[place]
    told = heading and heading.casefold() not in (key, HEADINGS[key].casefold())
    return f"{key} in column {place + 1}" + (f" ({quoted(heading, 24)})" if told else "")


def _counted(plan: DatePlan, headings: Sequence[str], unit: str) -> str:
    ends = " or ".join(_column(place, headings) for place, _ in plan.ends)
    return f"life in {_LONG_UNITS.get(unit, unit)} from the dates in {_column(plan.start, headings)} to {ends}"


def _column(place: int, headings: Sequence[str]) -> str:
    return f"column {place + 1}" + (f" ({quoted(headings[place], 24)})" if headings[place] else "")


def _words_read(state_words: Mapping[str, str]) -> str:
    read = [(word, state) for word, state in state_words.items() if word and word.casefold() != state]
    shown = [
        f"{quoted(word, 20)} {'read ' if number == 0 else ''}as {state}"
        for number, (word, state) in enumerate(read[:_WORDS_SHOWN])
    ]
    more = f" and {len(read) - _WORDS_SHOWN} more words" if len(read) > _WORDS_SHOWN else ""
    return ", ".join(shown) + more


def _kept_columns(extras: Sequence[str]) -> str:
    named = ", ".join(quoted(name, 24) for name in extras[:_EXTRAS_SHOWN])
    more = f" and {len(extras) - _EXTRAS_SHOWN} more" if len(extras) > _EXTRAS_SHOWN else ""
    return f"{named}{more} kept beside"
