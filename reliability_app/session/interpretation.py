"""Gives every column of a pasted table its meaning and every cell its text in the unit table."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from dataclasses import replace

from reliability_app.session.column_guess import Columns, guess_columns, is_life_like, renamed
from reliability_app.session.column_texts import (
    StateColumn,
    decide_marks,
    mark_notes,
    number_columns,
    plain_among_numbers,
    plain_numbers,
    read_intervals,
    read_state_column,
    states_of_bare_lives,
    without_units,
)
from reliability_app.session.date_columns import DatePlan, plan_of_dates
from reliability_app.session.date_lives import DateLives, EndDates, lives_from_dates
from reliability_app.session.doubtful_points import PointsInDoubt, points_in_doubt
from reliability_app.session.headings import bracketed_life_unit, one_life_unit, read_heading
from reliability_app.session.numbers import DecimalMark, are_plain, is_missing, quoted
from reliability_app.session.open_questions import open_questions
from reliability_app.session.row_reading import BUILT_IN_COLUMNS, NUMBER_COLUMNS
from reliability_app.session.states import FAILED, read_state
from reliability_app.session.understanding import Choices, SourceTable, Understanding, describe
from reliability_app.session.unit_table import UnitTable

ALL_FAILED = "The table has no state column: every life was read as that of a unit that failed."
REST_FAILED = "The table has no state column: lives without a sign such as + were read as failed."
FROM_ENDS = (
    "State was read from the two ends of each interval: equal ends as failed, no upper end as running, "
    "else as found failed."
)


def interpret(source: SourceTable, choices: Choices) -> Understanding:
    """Interpret a table, with what was chosen by hand taking precedence over what is guessed."""
    body, headings = source.body, source.headings
    columns = _columns_of(source, body, choices.columns)
    texts = {key: body[place] for place, key in enumerate(columns.keys) if key}
    extras = tuple(key for key in texts if key not in BUILT_IN_COLUMNS)
    notes = [*_note_on_sheets(source), *source.notes, *_note_on_titles(source)]

    life_unit = _life_unit(texts, columns, headings) or _unit_beside(texts, columns, headings, notes)
    exact = {key for place, key in enumerate(columns.keys) if key and place in source.true_numbers}
    doubt = None if choices.mark else _doubt(source, columns, texts, exact, extras)
    marks = _read_numbers(texts, extras, exact, choices.mark, notes, doubt)
    states = _state_column(texts, _heading_of("state", columns, headings), choices)
    dates = None
    if columns.dates is not None:
        dates = _count_dates(columns.dates, body, texts, states, source, choices)
        life_unit = dates.unit
    words = _read_states(texts, columns, states, notes, dates)
    rows, faulty = _through_table(texts, extras)
    asked = (doubt.question,) if doubt and doubt.question else ()
    return Understanding(
        rows=rows,
        extra_columns=extras,
        sentence=_of_sheet(source) + describe(len(rows), columns, headings, words, dates.unit if dates else ""),
        notes=tuple(notes),
        faulty=faulty,
        life_unit=life_unit,
        columns=columns.keys,
        headings=headings,
        mark=marks.get("life", DecimalMark.POINT),
        source=source,
        choices=choices,
        plan=columns.dates,
        dates=dates,
        state_words={**dict.fromkeys(states.unknown), **states.words} if states else {},
        questions=(*asked, *open_questions(texts, marks, states, dates)),
    )


def _columns_of(source: SourceTable, body: Sequence[Sequence[str]], chosen: Mapping[int, str | None]) -> Columns:
    columns = guess_columns(body, source.headings, source.existing_extras)
    key = source.at_column
    if key and len(body) == 1 and not any(source.headings) and _may_stand_in(key, body[0]):
        columns = Columns((key,))
    places = {place: choice for place, choice in chosen.items() if 0 <= place < len(columns.keys)}
    if not places:
        return columns
    named = renamed(columns, places, source.headings, source.existing_extras)
    return replace(named, dates=_chosen_dates(named, body, source.headings, places))


def _chosen_dates(
    columns: Columns, body: Sequence[Sequence[str]], headings: Sequence[str], chosen: Mapping[int, str | None]
) -> DatePlan | None:
    """Return from which dates to count where meanings were chosen by hand: a column of lives goes before dates."""
    if "life" in columns.keys:
        return None
    # One that was made a column of its own by hand is no date to count from.
    taken = [key if key in BUILT_IN_COLUMNS else None for key in columns.keys]
    return plan_of_dates(body, headings, taken, chosen)


def _count_dates(
    plan: DatePlan,
    body: Sequence[list[str]],
    texts: dict[str, list[str]],
    states: StateColumn | None,
    source: SourceTable,
    choices: Choices,
) -> DateLives:
    """Fill in the Life and State cells, in place, from two dates of each row."""
    ends = [EndDates(body[place], state) for place, state in plan.ends]
    dates = lives_from_dates(
        body[plan.start], ends, states.texts if states else None, choices.dates, source.session_unit
    )
    texts["life"], texts["state"] = dates.lives, dates.states
    return dates


def _may_stand_in(key: str, cells: Sequence[str]) -> bool:
    """Return whether a column without a heading may be what the cursor's column says: lives are not names, say."""
    held = [cell for cell in cells if cell]
    if key in NUMBER_COLUMNS:
        return sum(map(is_life_like, held)) * 2 > len(held)
    if key == "state":
        return any(read_state(cell) for cell in held)
    return key in BUILT_IN_COLUMNS and sum(map(is_life_like, held)) * 2 <= len(held)


def _of_sheet(source: SourceTable) -> str:
    return f"Sheet {quoted(source.sheet)}: " if source.sheets is not None and len(source.sheets.names) > 1 else ""


def _note_on_sheets(source: SourceTable) -> list[str]:
    others = [quoted(name, 24) for name in source.sheets.names if name != source.sheet] if source.sheets else []
    if not others:
        return []
    more = f" and {len(others) - 4} more" if len(others) > 4 else ""
    said = "another sheet, which was" if len(others) == 1 else "other sheets, which were"
    return [f"The file has {said} not read: {', '.join(others[:4])}{more}."]


def _note_on_titles(source: SourceTable) -> list[str]:
    if not source.heading_row:
        return []
    if source.heading_row == 1:
        return ["The line above the headings is kept as a row, though it is no unit."]
    return [f"The {source.heading_row} lines above the headings are kept as rows, though they are no units."]


def _heading_of(key: str, columns: Columns, headings: Sequence[str]) -> str:
    return headings[columns.keys.index(key)] if key in columns.keys else ""


def _life_unit(texts: dict[str, list[str]], columns: Columns, headings: Sequence[str]) -> str | None:
    """Return the unit of the lives from their heading, or from the cells ("812 h"), where it is taken off."""
    if "life" not in texts:
        return None
    in_cells = None
    if not are_plain(texts["life"]):
        texts["life"], in_cells = without_units(texts["life"])
    above = _heading_of("life", columns, headings)
    heading = read_heading(above)
    return (heading.life_unit if heading else bracketed_life_unit(above)) or in_cells


def _unit_beside(
    texts: Mapping[str, list[str]], columns: Columns, headings: Sequence[str], notes: list[str]
) -> str | None:
    """Return the unit of the lives where a column "Einheit" names it in every row; add to `notes`."""
    for key, heading in zip(columns.keys, headings, strict=True):
        meant = read_heading(heading) if key and key not in BUILT_IN_COLUMNS and "life" in texts else None
        if key and meant and meant.key == "unit" and (unit := one_life_unit(texts[key])):
            notes.append(f"Lives are in {unit}: the column {quoted(heading, 24)} says so.")
            return unit
    return None


def _doubt(
    source: SourceTable,
    columns: Columns,
    texts: Mapping[str, list[str]],
    exact: Collection[str],
    extras: Sequence[str],
) -> PointsInDoubt | None:
    """Return how points of ages like "1.250" are read; none is in doubt in true numbers and in our own grid's cells."""
    is_our_own = not any(source.headings) and columns.keys == BUILT_IN_COLUMNS[: max(len(columns.keys), 4)]
    full = {columns.keys[place] for place in source.full_numbers if place < len(columns.keys)}
    if is_our_own or "life" not in texts or "life" in full:
        return None
    numeric = {key: texts[key] for key in number_columns(texts, extras) if key not in exact and key not in full}
    states = dict.fromkeys(texts.get("state", ()))
    return points_in_doubt(numeric, separator=source.separator, words=(*source.headings, *states))


def _read_numbers(
    texts: dict[str, list[str]],
    extras: Sequence[str],
    exact: Collection[str],
    mark: DecimalMark | None,
    notes: list[str],
    doubt: PointsInDoubt | None,
) -> dict[str, DecimalMark]:
    """Bring the columns of numbers into plain form, in place; add to `notes`; return the mark of each.

    Columns in `exact` came as numbers: these stay as they are.
    """
    for key in exact:
        texts[key] = plain_among_numbers(texts[key], mark) if key in NUMBER_COLUMNS else texts[key]
    numeric = {key: texts[key] for key in number_columns(texts, extras) if key not in exact}
    if mark is None and doubt is None and all(map(are_plain, numeric.values())):
        return dict.fromkeys(numeric, DecimalMark.POINT)
    marks = dict.fromkeys(numeric, mark) if mark else decide_marks(numeric, doubt.mark if doubt else None)
    notes += [doubt.note] if doubt else []
    for key, as_typed in numeric.items():
        texts[key] = plain_numbers(as_typed, marks[key], only_marked=key in extras)
        if doubt is None or key in extras:
            notes += mark_notes(key, as_typed, texts[key], marks[key])
    return marks


def _state_column(texts: Mapping[str, list[str]], heading: str, choices: Choices) -> StateColumn | None:
    if "state" not in texts:
        return None
    return read_state_column(texts["state"], heading, choices.yes_means, choices.states)


def _read_states(
    texts: dict[str, list[str]],
    columns: Columns,
    read: StateColumn | None,
    notes: list[str],
    dates: DateLives | None,
) -> str | dict[str, str]:
    """Fill in the State cells, in place; add to `notes`; return what `understanding.describe` is to say of them."""
    notes += dates.notes if dates else ()
    if read is not None:
        texts["state"] = dates.states if dates else read.texts
        notes += read.notes
        _clear_missing_ends(texts, notes)
        return read.words
    if dates is not None:
        return "state from the end dates"
    if columns.is_interval:
        read_intervals(texts)
        notes.append(FROM_ENDS)
        return "state from the two ends of each interval"
    if "life" in texts:
        _clear_missing_ends(texts, notes)
        texts["state"] = states_of_bare_lives(texts)
        all_failed = all(state == FAILED or not life for life, state in zip(texts["life"], texts["state"], strict=True))
        notes.append(ALL_FAILED if all_failed else REST_FAILED)
        return f"no state column: {'all' if all_failed else 'the lives without a sign'} read as failed"
    return ""


def _clear_missing_ends(texts: dict[str, list[str]], notes: list[str]) -> None:
    """Empty Until cells that say in so many letters that there is nothing."""
    signs = {cell for cell in texts.get("until", ()) if cell and is_missing(cell)}
    if signs:
        texts["until"] = ["" if cell in signs else cell for cell in texts["until"]]
        notes.append(f"Until: {quoted(min(signs))} was read as an empty cell.")


def _through_table(texts: Mapping[str, Sequence[str]], extras: Sequence[str]) -> tuple[list[dict[str, str]], int]:
    """Return the rows as a unit table stores them, and how many of them it cannot read."""
    table = UnitTable.from_columns(texts, extras, row_count=len(next(iter(texts.values()), ())))
    return table.rows(), table.counts().unread
