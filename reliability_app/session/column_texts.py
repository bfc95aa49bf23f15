"""Turns the cells of pasted columns into the texts of the unit table: one decimal mark, one word per state."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from reliability_app.session.headings import question, split_unit
from reliability_app.session.numbers import (
    DecimalMark,
    UnreadableNumber,
    decide_mark,
    is_missing,
    is_plain,
    looks_numeric,
    plain_number,
    proven_mark,
    quoted,
    read_number,
)
from reliability_app.session.row_reading import HEADINGS, NUMBER_COLUMNS, read_life_entry
from reliability_app.session.states import FAILED, FOUND_FAILED, RUNNING, is_yes, read_answer, read_state

_RANGE_DASH = re.compile(r"(?<=[0-9]) *(?:[-\u2013\u2014\u2026;]|\.\.+|to|bis) *(?=[0-9])", re.IGNORECASE)
_IN_DOUBT = re.compile(r"[1-9][0-9]{0,2},[0-9]{3}").fullmatch
_ANY_MARK = re.compile("[,.]")
_THOUSANDS_COMMA = re.compile("[0-9],[0-9]{3}")
_THOUSANDS_SPACE = re.compile("[0-9][ \u00a0\u202f\u2009\u2007][0-9]{3}")
_THOUSANDS_APOSTROPHE = re.compile("[0-9]['\u2019][0-9]{3}")
_SUMMARY_ROWS = frozenset({"total", "sum", "mean", "average", "median", "summe", "mittelwert", "moyenne", "media"})


@dataclass(frozen=True)
class StateColumn:
    """The State cells, what each word was read as (first seen first), what words are not known, sentences on how."""

    texts: list[str]
    words: dict[str, str]
    notes: tuple[str, ...]
    unknown: tuple[str, ...] = ()


def decide_marks(texts: Mapping[str, Sequence[str]], decided: DecimalMark | None = None) -> dict[str, DecimalMark]:
    """Decide the decimal mark of each column of numbers; a column that proves none follows the rest of its table.

    `decided` is the mark of those that prove none where something else has told it.
    """
    ends = {key: number_ends(cells) for key, cells in texts.items()}
    proven = {key: proven_mark(cells) for key, cells in ends.items()}
    others = {mark for mark in proven.values() if mark is not None}
    common = others.pop() if len(others) == 1 else None
    return {key: proven[key] or decided or common or decide_mark(cells) for key, cells in ends.items()}


def number_ends(cells: Sequence[str]) -> Sequence[str]:
    """Return cells with ranges like "200,5-400" taken apart."""
    if not _RANGE_DASH.search("\n".join(cells)):
        return cells
    return [end for cell in cells for end in _RANGE_DASH.split(cell)]


def plain_numbers(cells: Sequence[str], mark: DecimalMark, *, only_marked: bool = False) -> list[str]:
    """Return cells with all numbers that can be read under `mark` in plain form, also those in "1.500,5+".

    `only_marked` leaves numbers without comma or point as typed: in a column of codes "0012" is no 12.
    """
    if only_marked:
        return [_plain_cell(cell, mark) if "," in cell or "." in cell else cell for cell in cells]
    if mark is not DecimalMark.COMMA:
        return [cell if not cell or is_plain(cell) else _plain_cell(cell, mark) for cell in cells]
    return [cell if not cell or ("." not in cell and is_plain(cell)) else _plain_cell(cell, mark) for cell in cells]


def _plain_cell(cell: str, mark: DecimalMark) -> str:
    if cell[-1] != "+":  # what ends so is no number, and finding that out takes long
        try:
            return plain_number(cell, mark)
        except UnreadableNumber:
            pass
    entry = read_life_entry(cell, mark)
    if entry is not None and entry.state == RUNNING:
        return f"{entry.life}+"
    if entry is not None:
        return f"<{entry.until}" if entry.life == "0" else f"{entry.life}-{entry.until}"
    return cell


def plain_among_numbers(cells: Sequence[str], mark: DecimalMark | None) -> list[str]:
    """Return the cells of a column that came as numbers, with those that came as text in plain form too.

    Numbers are never read anew, however the numbers among the texts are written.
    """
    texts = [cell for cell in cells if cell and not is_plain(cell)]
    if not texts:
        return list(cells)
    decided = mark or decide_mark(texts)
    plain = dict(zip(texts, plain_numbers(texts, decided), strict=True))
    return [plain.get(cell, cell) for cell in cells]


def mark_notes(key: str, before: Sequence[str], after: Sequence[str], mark: DecimalMark) -> list[str]:
    """Say how the numbers of a column were read where that is not plain to see."""
    heading = HEADINGS.get(key, key)
    if mark is DecimalMark.AMBIGUOUS and (doubtful := next(filter(_IN_DOUBT, after), None)):
        whole, fraction = doubtful.replace(",", ""), doubtful.replace(",", ".")
        return [f"{heading}: {quoted(doubtful)} may mean {whole} or {fraction}; choose how commas are to be read."]
    if before == after:
        return []
    ways = [(_THOUSANDS_COMMA, "has commas between thousands")]
    if mark is DecimalMark.COMMA:
        ways = [(_ANY_MARK, "is written with decimal commas")]
    elif mark is DecimalMark.AMBIGUOUS:
        ways = [(_ANY_MARK, "holds decimal commas and decimal points")]
    ways += [(_THOUSANDS_SPACE, "has spaces between thousands"), (_THOUSANDS_APOSTROPHE, "has apostrophes in numbers")]
    for sign, says in ways:
        for old, new in zip(before, after, strict=True):
            if old != new and sign.search(old):
                return [f"{heading} {says}: {quoted(old)} was read as {new}."]
    return []


def without_units(cells: Sequence[str]) -> tuple[list[str], str | None]:
    """Take the unit off lives like "812 h", if all cells that have one name the same; return the cells and the unit."""
    parts = [split_unit(cell) if cell[-1:].isalpha() or cell[-1:] in ".+" else None for cell in cells]
    units = {part.unit for part in parts if part}
    unit = units.pop() if len(units) == 1 else None
    if unit is None:
        return list(cells), None
    return [part.number if part else cell for cell, part in zip(cells, parts, strict=True)], unit


def read_state_column(
    cells: Sequence[str], heading: str, yes_means: str | None, chosen: Mapping[str, str] | None = None
) -> StateColumn:
    """Read the cells of a state column in the light of its heading.

    Parameters
    ----------
    cells : sequence of str
    heading : str
        "Failed?" or "censored (1 = yes)" tell what a yes or a 1 means; "" if there is none.
    yes_means : str or None
        "failed" or "running": what a yes or a 1 means, chosen by hand.
    chosen : mapping of str to str, optional
        The states of single words, chosen by hand.
    """
    yes = yes_means or question(heading)
    counted = Counter(cells)
    words: dict[str, str] = {}
    notes: list[str] = []
    if yes is None and {"1", "2"} <= counted.keys() and counted.keys() <= {"", "1", "2"}:
        # Common practice in published survival data; said aloud because nothing in the table proves it.
        words = {"2": FAILED, "1": RUNNING}
        notes.append("State holds 1 and 2: 2 was read as failed and 1 as running, as is usual; change it if not so.")
    for word in counted:
        state = (read_answer(word, yes) if yes and word else None) or words.get(word) or read_state(word)
        state = chosen.get(word, state) if chosen else state
        if state:
            words[word] = state
    given = [word for word in counted if word]
    if yes and "" in counted and given and all(map(is_yes, given)):
        words[""] = FAILED if yes == RUNNING else RUNNING
        notes.append(f"Rows without a mark in the state column were read as {words['']}.")
    unknown = [word for word in given if word not in words]
    if unknown:
        notes.append(_unknown_states(unknown))
    return StateColumn([words.get(cell, cell) for cell in cells], words, tuple(notes), tuple(unknown))


def _unknown_states(unknown: Sequence[str]) -> str:
    if all(read_answer(word, FAILED) for word in unknown):
        return f"State says {quoted(unknown[0])}: choose whether yes means failed or running."
    named = ", ".join(quoted(word, 20) for word in unknown[:3]) + (" and others" if len(unknown) > 3 else "")
    return f"State holds words that are not known ({named}): type failed or running there."


def states_of_bare_lives(texts: Mapping[str, list[str]]) -> list[str]:
    """Return State cells for a table that has none: failed for every life that does not itself say otherwise."""
    empty = [""] * len(texts["life"])
    lives, ends, names = texts["life"], texts.get("until", empty), texts.get("unit", empty)
    states = []
    for life, end, name in zip(lives, ends, names, strict=True):
        says_more = not life or end or name.casefold() in _SUMMARY_ROWS
        says_more = says_more or (not is_plain(life) and read_life_entry(life) is not None)
        states.append("" if says_more else FAILED)
    return states


def read_intervals(texts: dict[str, list[str]]) -> None:
    """Turn lower and upper ends into life, until and state, in place; ends that are no numbers stay as they are.

    Equal ends: failed at that age. No upper end, or an infinite one: running. No lower end: found failed at the first
    look. This is the form in which interval data are commonly published.
    """
    lowers, uppers = texts["life"], texts["until"]
    texts["life"], texts["until"] = lives, ends = list(lowers), list(uppers)
    texts["state"] = states = [""] * len(lowers)
    for row, (lower, upper) in enumerate(zip(lowers, uppers, strict=True)):
        endless = is_missing(upper) or upper.casefold().lstrip("+") in ("inf", "infinity", "\u221e")
        if lower and endless and looks_numeric(lower):
            ends[row], states[row] = "", RUNNING
        elif looks_numeric(upper) and (is_missing(lower) or looks_numeric(lower)):
            if lower and not is_missing(lower) and _equal(lower, upper):
                ends[row], states[row] = "", FAILED
            else:
                lives[row], states[row] = "0" if is_missing(lower) else lower, FOUND_FAILED


def _equal(lower: str, upper: str) -> bool:
    try:
        return read_number(lower) == read_number(upper)
    except UnreadableNumber:
        return False


def number_columns(texts: Mapping[str, Sequence[str]], extras: Sequence[str]) -> list[str]:
    """Return the columns to read numbers in: those of units, and the user's own that hold nothing but numbers."""
    return [
        key
        for key, cells in texts.items()
        if key in NUMBER_COLUMNS
        or (key in extras and any(cells) and all(not cell or looks_numeric(cell) for cell in cells))
    ]
