"""Splits pasted text into cells: finds what separates them, honours quoted cells, and mends a lone quote."""

from __future__ import annotations

import csv
import io
import re
from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import lru_cache

from reliability_app.session.dates import looks_like_date
from reliability_app.session.headings import read_heading, split_unit
from reliability_app.session.numbers import looks_numeric
from reliability_app.session.row_reading import read_life_entry
from reliability_app.session.states import read_state

MOST_COLUMNS = 200
_SAMPLE = 60
_LONGEST_SENSE = 80
_SPACES = re.compile(r' *(?:"([^"]*)"|([^ ]+)) *')
# Written as a first line by some spreadsheets to say what separates the cells.
_DECLARED = re.compile(r'"?sep=([,;|]?)"?', re.IGNORECASE)
_WIDE_GAP = re.compile(" {2,}")
# A number with more groups of digits than this, like "812,900,950,700", is rather a list of lives.
_MOST_GROUPS = 3


@dataclass(frozen=True)
class SplitText:
    """Rows of cells in the order of the text, blank lines as empty rows; `notes` are whole sentences."""

    rows: list[list[str]]
    separator: str
    notes: tuple[str, ...]


def split_text(text: str) -> SplitText:
    """Split text into rows and cells; never raises, and all text but separators and quotes is in some cell.

    Separators tried are tab, semicolon, vertical bar, comma, two spaces or more, and a single space. A tab decides
    alone; among the others the one wins that gives lines of one width whose cells mean most. Text in which none
    does so becomes one column.
    """
    lines = text.removeprefix("\ufeff").replace("\r\n", "\n").replace("\r", "\n").split("\n")
    while lines and not lines[-1].strip(" "):
        lines.pop()
    declared = _DECLARED.fullmatch(lines[0].strip()) if lines else None
    if declared:
        lines.pop(0)
    separator = (declared[1] or "\t") if declared else _find_separator(lines)
    if separator in ("  ", " "):
        return SplitText(_split_at_spaces(lines, separator), separator, ())
    rows, notes = _split_at(lines, separator or "\t")
    return SplitText(rows, separator, notes)


def _find_separator(lines: Sequence[str]) -> str:
    """Return the separator of the cells; "" for a single column."""
    sample = [line for line in lines[: 4 * _SAMPLE] if line.strip()][:_SAMPLE]
    if sum("\t" in line for line in sample) * 2 >= len(sample):
        return "\t" if sample else ""
    if single := _single_column_of_numbers(sample):
        return single.strip("\n")
    best, best_score = "", _score([[line] for line in sample])
    for separator in ("\t", ";", "|", ",", "  ", " "):
        rows = _split_sample(sample, separator)
        if rows is None:
            continue
        # Wide gaps are set on purpose, so a name with a single space in it is left whole.
        score = _score(rows) + (0.15 if separator == "  " else 0.0)
        if score > best_score + 1e-9:
            best, best_score = separator, score
    return best


def _single_column_of_numbers(sample: Sequence[str]) -> str:
    """Return "" if nothing is settled, "\\n" if lines like "53,2" are single numbers, else what separates them.

    Taken apart, "53,2" would also be two numbers. It is, when the second parts are all 0 or 1 (a state), or the
    first parts count 1, 2, 3 (a row number).
    """
    if _are_numbers_with_one_unit(sample):
        return "\n"
    body = sample if looks_numeric(sample[0]) or not re.search("[,; ]", sample[0].strip()) else []
    numbers = [line.strip() for line in body if looks_numeric(line)]
    if not numbers or len(numbers) < len(body) - 1 or any(number.count(",") >= _MOST_GROUPS for number in numbers):
        return ""
    for separator in (",", " "):
        pairs = [number.split(separator) for number in numbers]
        if len(pairs) < 3 or any(len(pair) != 2 for pair in pairs):
            continue
        counting = [pair[0] for pair in pairs] == [str(place + 1) for place in range(len(pairs))]
        if counting or (separator == "," and all(pair[1] in ("0", "1") for pair in pairs)):
            return separator
    return "\n"


def _are_numbers_with_one_unit(sample: Sequence[str]) -> bool:
    """Return whether lines are single lives with their unit ("812 h"), and not a life and a state ("812 s")."""
    parts = [split_unit(line.strip()) for line in sample if not looks_numeric(line)]
    units = {part.unit for part in parts if part}
    words = {part.written for part in parts if part}
    return None not in parts and len(units) == 1 and None not in units and not any(map(read_state, words))


def _split_sample(sample: Sequence[str], separator: str) -> list[list[str]] | None:
    if not any(separator in line for line in sample):
        return None
    if separator.isspace() and separator != "\t":
        return _split_at_spaces(sample, separator)
    return [_split_line(line, separator) for line in sample]


def _score(rows: Sequence[Sequence[str]]) -> float:
    """Return how well a way of splitting does: share of lines of usual width, times share of cells that mean much."""
    width = _usual_width(rows)
    cells = [cell for row in rows for cell in row if cell.strip()]
    if not cells:
        return 0.0
    agreeing = sum(len(row) == width for row in rows) / len(rows)
    meaning = sum(_means_something(cell.strip()[:_LONGEST_SENSE]) for cell in cells) / len(cells)
    # A little for lines of one width even if their cells say nothing: names and remarks make a table too.
    return agreeing * meaning + (0.05 if agreeing == 1.0 and width > 1 else 0.0)


@lru_cache(maxsize=8192)
def _means_something(text: str) -> bool:
    return (
        looks_numeric(text)
        or read_state(text) is not None
        or read_heading(text) is not None
        or read_life_entry(text) is not None
        or looks_like_date(text)
    )


def _usual_width(rows: Iterable[Sequence[str]]) -> int:
    widths = Counter(len(row) for row in rows if any(row))
    return widths.most_common(1)[0][0] if widths else 0


def _split_at(lines: Sequence[str], separator: str) -> tuple[list[list[str]], tuple[str, ...]]:
    """Split lines at a sign; quoted cells may hold it, or span lines, if their quotes come in pairs."""
    text = "\n".join(lines)
    if '"' not in text:
        return [line.split(separator) for line in lines], ()
    try:
        rows = list(csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True))
    except csv.Error:
        rows = []
    if rows and not _swallowed_lines(rows, lines, separator):
        return rows, ()
    lone = [place + 1 for place, line in enumerate(lines) if line.count('"') % 2]
    if not lone:
        return [_split_line(line, separator) for line in lines], ()
    more = f" and {len(lone) - 1} more" if len(lone) > 1 else ""
    note = f"A quotation mark in line {lone[0]}{more} has no partner: each line was taken as one row."
    return [_split_line(line, separator) for line in lines], (note,)


def _swallowed_lines(rows: Sequence[Sequence[str]], lines: Sequence[str], separator: str) -> bool:
    """Return whether quotes have drawn whole rows into single cells, as a lone quote does."""
    if len(rows) * 2 < len(lines):
        return True
    least = max(_usual_width(rows) - 1, 1)
    return any(
        inner.count(separator) >= least
        for row in rows
        for cell in row
        if "\n" in cell
        for inner in cell.split("\n")[1:]
    )


def _split_line(line: str, separator: str) -> list[str]:
    if '"' not in line:
        return line.split(separator)
    try:
        rows = list(csv.reader([line], delimiter=separator, strict=True))
    except csv.Error:
        return line.split(separator)
    return rows[0] if len(rows) == 1 else line.split(separator)


def _split_at_spaces(lines: Sequence[str], separator: str) -> list[list[str]]:
    """Split at runs of spaces; what a line has beyond the usual number of cells belongs to its last cell."""
    split = _WIDE_GAP.split if separator == "  " else _words
    rows = [_with_states_joined(split(line.strip(" "))) for line in lines]
    usual = _usual_width(rows)
    return [row if len(row) <= usual else [*row[: usual - 1], " ".join(row[usual - 1 :])] for row in rows]


def _words(line: str) -> list[str]:
    return ["".join(found) for found in _SPACES.findall(line)]


def _with_states_joined(row: list[str]) -> list[str]:
    """Put states of two words ("found failed", "still running") together again."""
    place = 0
    while place + 1 < len(row):
        if row[place].isalpha() and row[place + 1].isalpha() and read_state(f"{row[place]} {row[place + 1]}"):
            row[place : place + 2] = [f"{row[place]} {row[place + 1]}"]
        place += 1
    return row


def narrowed(rows: list[list[str]]) -> list[list[str]]:
    """Join what lies beyond MOST_COLUMNS into the last of them, so that one odd line cannot make a huge table."""
    if max(map(len, rows), default=0) <= MOST_COLUMNS:
        return rows
    last = MOST_COLUMNS - 1
    return [row if len(row) <= last else [*row[:last], " ".join(row[last:])] for row in rows]
