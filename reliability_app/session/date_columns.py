"""Finds the columns of dates of a table, and which of them say when a unit started and when it ended."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache

from reliability_app.session.dates import DayOrder, looks_like_date, read_compact_date, read_date
from reliability_app.session.numbers import is_missing, looks_numeric
from reliability_app.session.states import FAILED, RUNNING, plain_words, read_state

# Meanings that a column of dates may be given by hand, beside the columns of the unit table.
START_DATE, END_DATE = "start date", "end date"
DATE_MEANINGS: dict[str, str] = {START_DATE: "Start date", END_DATE: "End date"}

# Words as `plain_words` gives them, the most telling first.
_START_WORDS = """
start|started|start date|start of test|test start|on test|on test since|begin|begins|beginning|in service
in service since|into service|put into service|date in service|service start|installed|installation|installed on
install date|installation date|commissioned|commissioned on|commissioning|commissioning date|date in|in|from|since
delivered|delivery|delivery date|shipped|shipped on|ship date|shipping date|sold|sold on|sale|sale date|date of sale
warranty start|built|built on|build date|made on|manufactured|manufacturing date|date of manufacture|production date
startdatum|beginn|einbau|einbaudatum|eingebaut|eingebaut am|inbetriebnahme|inbetriebnahmedatum|in betrieb seit
teststart|versuchsbeginn|lieferdatum|auslieferung|verkauft|verkauft am|verkaufsdatum|herstelldatum|produktionsdatum
mise en service|date de mise en service|debut|date de debut|date d installation|puesta en servicio|inicio
fecha de inicio|fecha de instalacion|messa in servizio|inizio|data di inizio|data di installazione
"""
_FAILED_WORDS = """
failed|failed on|failure|failure date|date of failure|fail date|failed at|date failed|broken on|breakdown|died|died on
claim date|complaint date|ausfall|ausfalldatum|ausgefallen|ausgefallen am|defekt am|reklamationsdatum
date de defaillance|date de panne|defaillance|fecha de fallo|fecha del fallo|fallo|data del guasto|data guasto|guasto
"""
_RUNNING_WORDS = """
removed|removed on|removal|removal date|date of removal|withdrawn|withdrawn on|suspended|suspended on|censored
last seen|last seen running|last inspection|last inspected|last check|last checked|last contact|last report
last reading|today|as of|status date|date of status|data date|reading date|ausbau|ausbaudatum|ausgebaut|ausgebaut am
letzte inspektion|letzte prufung|letzter stand|heute|stand vom|depose|date de depose|retirado|fecha de retirada
"""
_END_WORDS = """
end|ended|end date|date of end|end of test|test end|stop|stopped|stop date|finish|finished|date out|out|to|until
out of service|off test|ende|enddatum|endedatum|testende|versuchsende|fin|date de fin|fecha de fin|fine|data fine
"""
_BRACKETED = re.compile(r"[(\[{][^()\[\]{}]*[)\]}]?")
_SAMPLE = 400
_SHARE = 0.6


@dataclass(frozen=True)
class DateHeading:
    """What a heading above dates says: the start or the end of a life, the state then (None: not said), how telling."""

    is_start: bool
    state: str | None
    rank: int


@dataclass(frozen=True)
class DatePlan:
    """From which columns of a source lives are counted; `ends` pairs each end with the state it says, if any."""

    start: int
    ends: tuple[tuple[int, str | None], ...]


def _ranked() -> dict[str, DateHeading]:
    ranked: dict[str, DateHeading] = {}
    lists = (
        (_START_WORDS, True, None),
        (_FAILED_WORDS, False, FAILED),
        (_RUNNING_WORDS, False, RUNNING),
        (_END_WORDS, False, None),
    )
    for words, is_start, state in lists:
        for rank, word in enumerate(word for word in re.split(r"[|\n]", words) if word):
            ranked.setdefault(word, DateHeading(is_start, state, rank))
    return ranked


_RANKED = _ranked()


@lru_cache(maxsize=1024)
def read_date_heading(text: str) -> DateHeading | None:
    """Return what a heading says of the dates below it; None for one that is not known."""
    if len(text) > 80:
        return None
    words = plain_words(_BRACKETED.sub(" ", text).replace("/", " "))
    if words in _RANKED:
        return _RANKED[words]
    for trimmed in (words.removesuffix(" date"), words.removesuffix(" on"), words.removeprefix("date ")):
        if trimmed != words and trimmed in _RANKED:
            return _RANKED[trimmed]
    return None


def is_date_column(cells: Sequence[str], heading: str = "") -> bool:
    """Return whether most cells that say anything are dates; eight digits only below a heading for dates."""
    held = [cell for cell in cells if cell][:_SAMPLE]
    # Words that stand for no date, and the errors of formulas, say nothing about the others.
    known = [cell for cell in held if any(sign.isdigit() for sign in cell) and not cell.startswith("#")]
    if not known:
        return False
    if sum(map(looks_like_date, known)) >= _SHARE * len(known):
        return True
    if (
        not heading
        or not all(map(str.isdecimal, known))
        or not (read_date_heading(heading) or "dat" in heading.casefold() or "fecha" in heading.casefold())
    ):
        return False
    return all(read_compact_date(cell) is not None for cell in known)


def hold_dates(columns: Sequence[Sequence[str]], headings: Sequence[str]) -> list[bool]:
    """Return which columns hold dates; beside start dates, one for end dates that holds none yet counts among them."""
    dated = [is_date_column(cells, heading) for cells, heading in zip(columns, headings, strict=True)]
    roles = [read_date_heading(heading) for heading in headings]
    if not any(is_date and role and role.is_start for is_date, role in zip(dated, roles, strict=True)):
        return dated
    return [
        is_date or (role is not None and not role.is_start and all(map(_says_no_end, cells)))
        for is_date, role, cells in zip(dated, roles, columns, strict=True)
    ]


def _says_no_end(cell: str) -> bool:
    return is_missing(cell) or says_running(cell)


def plan_of_dates(
    columns: Sequence[Sequence[str]],
    headings: Sequence[str],
    taken: Sequence[str | None],
    chosen: Mapping[int, str | None],
) -> DatePlan | None:
    """Say from which columns of dates lives are to be counted; None where a start or an end is missing.

    Parameters
    ----------
    columns : sequence of sequence of str
        The cells below the headings, column by column.
    headings : sequence of str
        One text per column.
    taken : sequence of str or None
        Per column the key of the unit table it has; such columns are no dates.
    chosen : mapping of int to str or None
        Meanings chosen by hand; START_DATE and END_DATE are heeded before anything guessed.
    """
    starts = [place for place, key in chosen.items() if key == START_DATE and place < len(columns)]
    ends = [place for place, key in chosen.items() if key == END_DATE and place < len(columns)]
    free = [
        place
        for place, is_date in enumerate(hold_dates(columns, headings))
        if is_date and taken[place] is None and place not in chosen
    ]
    roles = {place: read_date_heading(headings[place]) for place in free}
    if not starts:
        named = [(role.rank, place) for place, role in roles.items() if role and role.is_start]
        starts = [min(named)[1]] if named else []
    if not ends:
        ends = [place for place, role in roles.items() if role and not role.is_start]
    others = [place for place in free if place not in starts and place not in ends and roles[place] is None]
    if not starts and not ends and len(others) == 2:
        starts, ends = _by_time(columns, others)
    elif len(others) == 1 and bool(starts) != bool(ends):
        starts, ends = starts or others, ends or others
    if not starts or not ends:
        return None
    return DatePlan(starts[0], tuple((place, _state_of(headings[place])) for place in ends if place != starts[0]))


def without_states(plan: DatePlan) -> DatePlan:
    """Return the plan with ends that say no state: where a column of states says it."""
    return replace(plan, ends=tuple((place, None) for place, _ in plan.ends))


def _state_of(heading: str) -> str | None:
    role = read_date_heading(heading)
    return role.state if role else None


def _by_time(columns: Sequence[Sequence[str]], places: Sequence[int]) -> tuple[list[int], list[int]]:
    """Return which of two columns is the start: the one with the earlier dates, the first where nothing tells."""
    first, second = (columns[place][:_SAMPLE] for place in places)
    earlier = 0
    for one, other in zip(first, second, strict=True):
        a, b = read_date(one, DayOrder.DAY_FIRST), read_date(other, DayOrder.DAY_FIRST)
        if a and b and a != b:
            earlier += 1 if a < b else -1
    return ([places[0]], [places[1]]) if earlier >= 0 else ([places[1]], [places[0]])


def says_running(cell: str) -> bool:
    """Return whether a cell among end dates says in a word that the unit still runs."""
    return not looks_numeric(cell) and (read_state(cell) == RUNNING or plain_words(cell) in ("today", "open", "now"))
