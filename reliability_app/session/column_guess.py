"""Sorts out what the columns of a pasted table are: by their headings where there are any, else by what they hold."""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise

from reliability_app.session.date_columns import (
    DATE_MEANINGS,
    DatePlan,
    hold_dates,
    is_date_column,
    plan_of_dates,
    read_date_heading,
)
from reliability_app.session.dates import looks_like_date
from reliability_app.session.headings import (
    INTERVAL_END,
    INTERVAL_START,
    Heading,
    one_life_unit,
    read_heading,
    split_unit,
)
from reliability_app.session.numbers import is_missing, looks_numeric
from reliability_app.session.row_reading import BUILT_IN_COLUMNS, HEADINGS, read_life_entry
from reliability_app.session.states import FOUND_FAILED, STATES, is_yes, read_answer, read_state

_SAMPLE = 400
_HEADING_LINES = 10
# A life list typed in one line, as textbooks print them; shorter ones may be one row of a table.
_SHORTEST_LIST = 5
# Headings of lives up to this rank ("Life", "Time to failure") are believed even above cells that are no numbers.
_BEYOND_DOUBT = 10


@dataclass(frozen=True)
class Columns:
    """What each column of a source was taken for.

    `keys` holds, per source column, a key of the unit table or the name of a column of the user's own; None for a
    column without any text. `is_interval` tells that life and until are the two ends of an interval in every row;
    `dates`, from which columns lives are to be counted where none holds them.
    """

    keys: tuple[str | None, ...]
    is_interval: bool = False
    dates: DatePlan | None = None


def is_life_like(cell: str) -> bool:
    """Return whether a cell is a number or an entry like "1500+", "200-400" or "812 h"."""
    if looks_numeric(cell) or read_life_entry(cell) is not None:
        return True
    part = split_unit(cell)
    return part is not None and part.unit is not None


def find_heading_row(rows: Sequence[Sequence[str]]) -> int | None:
    """Return the place of the row of headings among the first rows, None if there is none.

    A row of headings holds no number and either a known heading, or text above columns of numbers; what recurs below
    it, and a state above other states, is no heading. Title lines may stand above it.
    """
    for place, row in enumerate(rows[:_HEADING_LINES]):
        if _known_headings(rows, place) >= 2:
            return place
        if sum(map(bool, row)) > 1 and any(map(looks_numeric, row)):
            break
    if rows and (_known_headings(rows, 0) or _text_above_numbers(rows)):
        return 0
    return None


def _known_headings(rows: Sequence[Sequence[str]], place: int) -> int:
    """Return how many known headings a row holds; 0 for a row that cannot be one of headings."""
    known = 0
    for column, cell in enumerate(rows[place]):
        under = _under(rows, place, column)
        if is_life_like(cell) or looks_like_date(cell) or _is_state_among_states(rows, place, column):
            return 0
        is_known = read_heading(cell) is not None
        if not is_known and read_date_heading(cell) is not None:
            is_known = is_date_column(under)
        known += is_known and cell not in under and not _are_both_answers(cell, under)
    return known


def _under(rows: Sequence[Sequence[str]], place: int, column: int) -> list[str]:
    return [row[column] for row in rows[place + 1 : place + _SAMPLE] if column < len(row) and row[column]]


def _is_state_among_states(rows: Sequence[Sequence[str]], place: int, column: int) -> bool:
    """Return whether a word for a state stands for one: as a heading ("Failed") it has answers below it, not words.

    Beside a heading of start dates it is one of end dates, even if there is none yet.
    """
    cell, under = rows[place][column], _under(rows, place, column)
    if read_state(cell) is None or is_date_column(under, cell):
        return False
    if read_date_heading(cell) is not None and _has_start_dates(rows, place):
        return False
    return not under or any(read_state(text) is not None and not text.isdigit() for text in under)


def _has_start_dates(rows: Sequence[Sequence[str]], place: int) -> bool:
    roles = ((column, read_date_heading(cell)) for column, cell in enumerate(rows[place]))
    return any(role and role.is_start and is_date_column(_under(rows, place, column)) for column, role in roles)


def _are_both_answers(cell: str, under: Sequence[str]) -> bool:
    """Return whether "No" is an answer above other answers, and no heading for numbers."""
    return read_answer(cell, STATES[0]) is not None and any(read_answer(text, STATES[0]) for text in under)


def _text_above_numbers(rows: Sequence[Sequence[str]]) -> bool:
    """Return whether the first row holds no number and no date, but stands above a column of these."""
    if any(_is_number_or_date(cell) or _is_state_among_states(rows, 0, at) for at, cell in enumerate(rows[0])):
        return False
    for column, cell in enumerate(rows[0]):
        under = _under(rows, 0, column)
        if under and not is_missing(cell) and sum(map(_is_number_or_date, under)) >= 0.8 * len(under):
            return True
    return False


def _is_number_or_date(cell: str) -> bool:
    return is_life_like(cell) or looks_like_date(cell)


def guess_columns(
    columns: Sequence[Sequence[str]], headings: Sequence[str], known_extras: Collection[str] = ()
) -> Columns:
    """Say what each column is.

    Parameters
    ----------
    columns : sequence of sequence of str
        The cells below the headings, column by column.
    headings : sequence of str
        One text per column; all "" for a table without headings.
    known_extras : collection of str
        The user's own columns that the table has already: headings that name one of them do so whatever they mean.
    """
    held = [[cell for cell in column if cell][:_SAMPLE] for column in columns]
    if not any(headings) and (layout := _own_layout(columns)):
        return Columns(layout)
    keys: list[str | None] = [None] * len(columns)
    dated = hold_dates(columns, headings)
    is_interval = _take_headings(keys, held, headings, known_extras, dated)
    plan = plan_of_dates(columns, headings, keys, {}) if "life" not in keys else None
    _take_contents(keys, held, headings, dated, counts_dates=plan is not None)
    if "life" in keys:
        plan = None
    rest = [place for place, key in enumerate(keys) if key is None and (held[place] or headings[place])]
    _name(keys, rest, headings, known_extras)
    return Columns(tuple(keys), is_interval, plan)


def _take_headings(
    keys: list[str | None],
    held: Sequence[Sequence[str]],
    headings: Sequence[str],
    known_extras: Collection[str],
    dated: Sequence[bool],
) -> bool:
    """Fill in the keys that headings name, the most telling heading first; return whether lives are intervals."""
    extras = {name.casefold(): name for name in known_extras}
    found = []
    for place, text in enumerate(headings):
        if text.casefold() in extras:
            keys[place] = extras.pop(text.casefold())
        elif (heading := read_heading(text)) and not dated[place] and _suits(heading, held[place]):
            found.append((heading.rank, place, heading.key))
    named = {key for _, _, key in found}
    is_interval = {INTERVAL_START, INTERVAL_END} <= named and not named & {"life", "until"}
    ends = {INTERVAL_START: "life", INTERVAL_END: "until"} if is_interval else {}
    for _, place, key in sorted(found):
        column = ends.get(key, key)
        if column in BUILT_IN_COLUMNS and column not in keys:
            keys[place] = column
    return is_interval


def _suits(heading: Heading, cells: Sequence[str]) -> bool:
    """Return whether cells can be what a heading says: under "Time" or "Start", say, there may be dates.

    Below "Einheit" there may be the unit of measure of the lives, the same in every row, which names no unit.
    """
    if heading.key == "unit":
        return one_life_unit(cells) is None
    if heading.key not in ("life", "until", "quantity", "entered", INTERVAL_START, INTERVAL_END):
        return True
    if heading.key == "life" and heading.rank < _BEYOND_DOUBT:
        return True
    known = [cell for cell in cells if not is_missing(cell)]
    return not known or sum(map(is_life_like, known)) * 3 >= len(known)


def _take_contents(
    keys: list[str | None],
    held: Sequence[Sequence[str]],
    headings: Sequence[str],
    dated: Sequence[bool],
    *,
    counts_dates: bool,
) -> None:
    """Fill in state, life, unit and quantity by what columns hold, where no heading has named them.

    `counts_dates` tells that lives can be counted between dates: below headings, numbers are then something else.
    """

    def free(suits: Callable[[Sequence[str]], bool]) -> list[int]:
        places = [place for place, cells in enumerate(held) if keys[place] is None and cells and not dated[place]]
        return [place for place in places if suits(held[place])]

    headed = any(headings)
    if "state" not in keys and (places := free(_are_states)):
        keys[places[0]] = "state"
    lives = [] if headed and counts_dates else free(_are_lives)
    if "state" not in keys and not headed and len(lives) > 1 and (places := free(_are_indicators)):
        keys[places[-1]] = "state"
        lives.remove(places[-1])
    if counts_dates:
        lives = [place for place in lives if not _are_quantities(held[place]) and not _counts_up(held[place])]
    if "life" not in keys and lives:
        keys[min(lives, key=lambda place: _unlike_lives(held[place]))] = "life"
    if headed:
        return
    if "unit" not in keys and (
        places := [p for p in range(len(keys)) if not dated[p] and _may_be_names(keys, held, p)]
    ):
        keys[places[0]] = "unit"
    if "state" in keys and (counts_dates or "life" in keys) and (places := free(_are_quantities)):
        after = [place for place in places if "life" not in keys or place > keys.index("life")]
        if after:
            keys[after[0]] = "quantity"


def _may_be_names(keys: Sequence[str | None], held: Sequence[Sequence[str]], place: int) -> bool:
    cells = held[place]
    if keys[place] is not None or not cells:
        return False
    return _counts_up(cells) or sum(map(is_life_like, cells)) * 2 < len(cells)


def _name(
    keys: list[str | None], places: Sequence[int], headings: Sequence[str], known_extras: Collection[str]
) -> None:
    """Make the columns at `places` the user's own: ones the table has already, or new ones under names not taken."""
    existing = {name.casefold(): name for name in known_extras}
    taken = {name.casefold() for name in (*BUILT_IN_COLUMNS, *HEADINGS.values(), *known_extras, *filter(None, keys))}
    for place in places:
        wanted = headings[place] or f"Column {place + 1}"
        known = existing.get(wanted.casefold())
        name = known if known is not None and known not in keys else _free_name(wanted, taken)
        keys[place] = name
        taken.add(name.casefold())


def _free_name(wanted: str, taken: Collection[str]) -> str:
    """Return `wanted`, with a number behind it if it is among `taken` (given in casefolded form)."""
    wanted = " ".join(wanted.split())
    name, count = wanted, 2
    while name.casefold() in taken:
        name, count = f"{wanted} ({count})", count + 1
    return name


def _own_layout(columns: Sequence[Sequence[str]]) -> tuple[str | None, ...] | None:
    """Return the built-in columns if these are cells copied from a grid of ours without its headings."""
    if not 4 <= len(columns) <= len(BUILT_IN_COLUMNS):
        return None
    layout = dict(zip(BUILT_IN_COLUMNS, columns, strict=False))
    numbers = [cell for key in ("life", "until", "quantity", "entered") for cell in layout.get(key, ()) if cell]
    states = {cell for cell in layout["state"] if cell}
    if not (any(layout["life"]) and states and states <= set(STATES) and all(map(looks_numeric, numbers))):
        return None
    ends_fit = all(
        not end or state == FOUND_FAILED for end, state in zip(layout["until"], layout["state"], strict=True)
    )
    return BUILT_IN_COLUMNS[: len(columns)] if ends_fit else None


def _are_states(cells: Sequence[str]) -> bool:
    words = [cell for cell in cells if not looks_numeric(cell)]
    answers = sum(read_state(word) is not None for word in words)
    yes_or_no = sum(read_answer(word, STATES[0]) is not None for word in words)
    return max(answers, yes_or_no if _has_two_kinds(words) else 0) * 2 > len(cells)


def _has_two_kinds(words: Sequence[str]) -> bool:
    return len({is_yes(word) for word in words}) == 2


def _are_indicators(cells: Sequence[str]) -> bool:
    return set(cells) in ({"0", "1"}, {"0.0", "1.0"})


def _are_lives(cells: Sequence[str]) -> bool:
    known = [cell for cell in cells if not is_missing(cell)]
    return bool(known) and sum(map(is_life_like, known)) * 2 > len(known)


def _are_quantities(cells: Sequence[str]) -> bool:
    """Whole numbers, 1 among them and none large: a stress, which must not count units, hardly looks like this."""
    return "1" in cells and all(cell.isdecimal() and 1 <= float(cell) <= 100 for cell in cells)


def _counts_up(cells: Sequence[str]) -> bool:
    """Return whether cells are row numbers: whole numbers, each by one more than the last."""
    if len(cells) < 2 or not all(cell.isdecimal() and len(cell) < 10 for cell in cells):
        return False
    return all(int(later) == int(cell) + 1 for cell, later in pairwise(cells))


def _unlike_lives(cells: Sequence[str]) -> tuple[bool, float]:
    """Return a sort key: row numbers come last, and lives, which seldom coincide, before stresses, which often do."""
    return _counts_up(cells), -round(len(set(cells)) / len(cells), 1)


def is_list_of_lives(rows: Sequence[Sequence[str]]) -> bool:
    """Return whether the text is one line of lives ("812 900 1100 1500+ 1500+"): units beside, not columns."""
    cells = [text for row in rows for cell in row if (text := cell.strip())]
    return len(rows) == 1 and len(cells) >= _SHORTEST_LIST and all(map(is_life_like, cells))


def renamed(
    columns: Columns,
    choices: Mapping[int, str | None],
    headings: Sequence[str],
    known_extras: Collection[str] = (),
) -> Columns:
    """Return `columns` with other meanings chosen by hand; headings and known extras as in `guess_columns`.

    Parameters
    ----------
    choices : mapping of int to str or None
        Per source column a key of the unit table; None or an unknown word makes it a column of the user's own, also
        where it holds the dates that lives are counted from. A column that had the chosen key before becomes one of
        the user's own.
    """
    keys = list(columns.keys)
    if "life" in keys and "life" not in choices.values() and set(choices.values()) & set(DATE_MEANINGS):
        keys[keys.index("life")] = None
    for place, choice in choices.items():
        if choice in BUILT_IN_COLUMNS and choice in keys:
            keys[keys.index(choice)] = None
        keys[place] = choice if choice in BUILT_IN_COLUMNS else None
    rest = [p for p, key in enumerate(keys) if key is None and (p in choices or columns.keys[p] is not None)]
    _name(keys, rest, headings, known_extras)
    same_ends = all(columns.keys[p] == keys[p] for p, key in enumerate(keys) if key in ("life", "until"))
    return Columns(tuple(keys), columns.is_interval and same_ends)
