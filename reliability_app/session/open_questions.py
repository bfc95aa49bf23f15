"""Finds what a table does not tell, so that it must be asked: how commas, dates, a yes and unknown words are meant."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence

from reliability_app.session.column_texts import StateColumn
from reliability_app.session.date_lives import DateLives, ways_to_read
from reliability_app.session.dates import DayOrder
from reliability_app.session.numbers import DecimalMark, quoted
from reliability_app.session.row_reading import HEADINGS
from reliability_app.session.states import FAILED, RUNNING, STATES, read_answer
from reliability_app.session.understanding import OpenQuestion, Option

_IN_DOUBT = re.compile(r"[1-9][0-9]{0,2},[0-9]{3}").fullmatch
# More unknown words than this are rather remarks than states.
_MOST_WORDS = 6


def open_questions(
    texts: Mapping[str, Sequence[str]],
    marks: Mapping[str, DecimalMark],
    states: StateColumn | None,
    dates: DateLives | None,
) -> tuple[OpenQuestion, ...]:
    """Return what must be asked of a table, the most far-reaching first.

    Parameters
    ----------
    texts : mapping of str to sequence of str
        The cells of each column, numbers in plain form where they could be read.
    marks : mapping of str to DecimalMark
        How the numbers of each column are written.
    states : StateColumn or None
    dates : DateLives or None
    """
    asked = [_of_dates(dates), *(_of_commas(key, texts[key]) for key, mark in marks.items() if mark.value == "?")]
    found = [question for question in asked if question is not None][:1]
    return (*found, *(_of_states(states.unknown) if states else ()))


def _of_dates(dates: DateLives | None) -> OpenQuestion | None:
    if dates is None or not dates.doubtful:
        return None
    orders = (DayOrder.DAY_FIRST, DayOrder.MONTH_FIRST)
    options = tuple(Option(order.value.capitalize(), {"day_order": order}) for order in orders)
    return OpenQuestion(f"{ways_to_read(dates.doubtful)}: which comes first?", options)


def _of_commas(key: str, cells: Sequence[str]) -> OpenQuestion | None:
    text = next(filter(_IN_DOUBT, cells), None)
    if text is None:
        return None
    whole, fraction = text.replace(",", ""), text.replace(",", ".")
    options = (Option(whole, {"mark": DecimalMark.POINT}), Option(fraction, {"mark": DecimalMark.COMMA}))
    return OpenQuestion(f"{HEADINGS.get(key, key)} {quoted(text)}: which number is it?", options)


def _of_states(unknown: Sequence[str]) -> list[OpenQuestion]:
    if not unknown or len(unknown) > _MOST_WORDS:
        return []
    if all(read_answer(word, FAILED) for word in unknown):
        options = tuple(Option(state.capitalize(), {"yes_means": state}) for state in (FAILED, RUNNING))
        word = next((word for word in unknown if read_answer(word, FAILED) == FAILED), "yes")
        return [OpenQuestion(f"State {quoted(word, 20)}: what does it mean?", options)]
    return [
        OpenQuestion(
            f"State {quoted(word, 20)}: what does it mean?",
            tuple(Option(state.capitalize(), {"states": {word: state}}) for state in STATES),
        )
        for word in unknown
    ]
