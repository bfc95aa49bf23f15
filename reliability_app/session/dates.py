"""Reads calendar dates as people and spreadsheets write them, and decides whether the day or the month comes first."""

from __future__ import annotations

import enum
import re
from collections.abc import Iterable
from datetime import UTC, datetime
from functools import lru_cache


class DayOrder(enum.Enum):
    """Which number comes first in a date like 03/04/2025; AMBIGUOUS: nothing tells."""

    DAY_FIRST = "day first"
    MONTH_FIRST = "month first"
    AMBIGUOUS = "?"


# Letters as `casefold` gives them without accents; English, German, French, Spanish and Italian months.
_MONTH_WORDS = """
jan|january|januar|janner|janvier|janv|enero|ene|gennaio|gen
feb|february|februar|fevrier|fevr|fev|febrero|febbraio
mar|march|marz|mrz|mars|marzo
apr|april|avril|avr|abril|abr|aprile
may|mai|mayo|maggio|mag
jun|june|juni|juin|junio|giugno|giu
jul|july|juli|juillet|juil|julio|luglio|lug
aug|august|aout|agosto|ago
sep|sept|september|septembre|septiembre|settembre|set
oct|october|oktober|okt|octobre|octubre|ottobre|ott
nov|november|novembre|noviembre
dec|december|dezember|dez|decembre|diciembre|dic|dicembre
"""
_MONTHS = {
    word: number + 1 for number, words in enumerate(_MONTH_WORDS.strip().split("\n")) for word in words.split("|")
}
_NO_ACCENTS = str.maketrans("\u00e4\u00e9\u00fb\u00fc", "aeuu")

_TIME = (
    r"(?:(?:T|,? +)(?P<hour>[0-9]{1,2})[:h.](?P<minute>[0-9]{2})(?:[:.](?P<second>[0-9]{2})(?:[.,][0-9]{1,9})?)?"
    r" ?(?P<half>[ap]\.?m\.?)?(?: ?(?P<zone>Z|UTC|[+-][0-9]{2}:?[0-9]{2}))?)?"
)
_YEAR_FIRST = re.compile(
    rf"(?P<year>[0-9]{{4}})(?P<sep>[-/.])(?P<month>[0-9]{{1,2}})(?P=sep)(?P<day>[0-9]{{1,2}}){_TIME}", re.IGNORECASE
)
# Two digits of a year are not read between dashes: part numbers look like this.
_YEAR_LAST = re.compile(
    r"(?P<first>[0-9]{1,2})(?P<sep>[-/.])(?P<second_part>[0-9]{1,2})(?P=sep)"
    rf"(?P<year>[0-9]{{4}}|(?<!-)[0-9]{{2}}){_TIME}",
    re.IGNORECASE,
)
_DAY_NAMED = re.compile(
    r"(?P<day>[0-9]{1,2})(?:st|nd|rd|th|\.|er)?[-/. ]*(?:de )?(?P<name>[^\W\d_]{3,10})\.?[-/, ]*(?:de )?"
    rf"(?P<year>[0-9]{{4}}|[0-9]{{2}}){_TIME}",
    re.IGNORECASE,
)
_NAME_FIRST = re.compile(
    rf"(?P<name>[^\W\d_]{{3,10}})\.?[- ]*(?P<day>[0-9]{{1,2}})(?:st|nd|rd|th)?[-, ]+(?P<year>[0-9]{{4}}){_TIME}",
    re.IGNORECASE,
)
_COMPACT = re.compile(r"(?P<year>(?:19|20)[0-9]{2})(?P<month>[0-9]{2})(?P<day>[0-9]{2})")
# Longer than any date with its time of day and zone.
_LONGEST = 45
# Two digits of a year: from here on they belong to the last century (common practice; 69 is the limit of POSIX).
_LAST_CENTURY = 69


@lru_cache(maxsize=65536)
def read_date(text: str, order: DayOrder = DayOrder.AMBIGUOUS) -> datetime | None:
    """Return the date, with its time of day if it has one; None for what is no date, or may be two.

    Parameters
    ----------
    text : str
        "2025-04-03", "2025-04-03 14:30", "3 Apr 2025", "03.04.2025", "03/04/2025". Dates with a zone are brought to
        UTC. Between dots the day comes first, as is common practice, unless `order` says otherwise.
    order : DayOrder
        Which number comes first in dates like 03/04/2025; AMBIGUOUS reads only those that leave no doubt.
    """
    if not 6 <= len(text) <= _LONGEST or (not text[-1:].isalnum() and text[-1:] != "."):
        return None
    if match := _YEAR_FIRST.fullmatch(text):
        return _made(match, match["year"], match["month"], match["day"])
    if match := _YEAR_LAST.fullmatch(text):
        return _in_order(match, order)
    match = _DAY_NAMED.fullmatch(text) or _NAME_FIRST.fullmatch(text)
    month = _MONTHS.get(match["name"].casefold().translate(_NO_ACCENTS)) if match else None
    return _made(match, match["year"], str(month), match["day"]) if match and month else None


def read_compact_date(text: str) -> datetime | None:
    """Return the date in eight digits ("20250403"), which only a heading can tell from a number."""
    match = _COMPACT.fullmatch(text)
    return _made(match, match["year"], match["month"], match["day"]) if match else None


@lru_cache(maxsize=65536)
def looks_like_date(text: str) -> bool:
    """Return whether `text` is a date, in one order or the other."""
    return read_date(text, DayOrder.DAY_FIRST) is not None or read_date(text, DayOrder.MONTH_FIRST) is not None


def in_doubt(text: str) -> bool:
    """Return whether `text` is one date with the day first and another with the month first."""
    day_first, month_first = read_date(text, DayOrder.DAY_FIRST), read_date(text, DayOrder.MONTH_FIRST)
    return None not in (day_first, month_first) and day_first != month_first


def decide_order(cells: Iterable[str]) -> DayOrder | None:
    """Return the order that some date in `cells` proves, AMBIGUOUS if they contradict each other, None without proof.

    A date between dots counts as proof of the day first where no other does.
    """
    proven: set[DayOrder] = set()
    dotted = False
    for cell in cells:
        match = _YEAR_LAST.fullmatch(cell) if len(cell) <= _LONGEST else None
        if match is None:
            continue
        first, second = int(match["first"]), int(match["second_part"])
        if first > 12 >= second:
            proven.add(DayOrder.DAY_FIRST)
        elif second > 12 >= first:
            proven.add(DayOrder.MONTH_FIRST)
        dotted = dotted or match["sep"] == "."
    if len(proven) > 1:
        return DayOrder.AMBIGUOUS
    return proven.pop() if proven else DayOrder.DAY_FIRST if dotted else None


def written(moment: datetime) -> str:
    """Return a date in ISO form, with its time of day unless that is midnight."""
    if (moment.hour, moment.minute, moment.second) == (0, 0, 0):
        return f"{moment:%Y-%m-%d}"
    return f"{moment:%Y-%m-%d %H:%M}" if not moment.second else f"{moment:%Y-%m-%d %H:%M:%S}"


def _in_order(match: re.Match[str], order: DayOrder) -> datetime | None:
    day_first = _made(match, match["year"], match["second_part"], match["first"])
    month_first = _made(match, match["year"], match["first"], match["second_part"])
    if order is DayOrder.AMBIGUOUS:
        if match["sep"] == "." and day_first:
            return day_first
        if day_first and month_first and day_first != month_first:
            return None
        return day_first or month_first
    return day_first if order is DayOrder.DAY_FIRST else month_first


def _made(match: re.Match[str], year: str, month: str, day: str) -> datetime | None:
    parts = match.groupdict()
    hour, half = int(parts.get("hour") or 0), (parts.get("half") or "").lower()
    if half:
        if not 1 <= hour <= 12:
            return None
        hour = hour % 12 + (12 if half.startswith("p") else 0)
    number = int(year) if len(year) == 4 else int(year) + (1900 if int(year) >= _LAST_CENTURY else 2000)
    try:
        moment = datetime(
            number, int(month), int(day), hour, int(parts.get("minute") or 0), int(parts.get("second") or 0)
        )
        return _to_utc(moment, parts.get("zone") or "")
    except (ValueError, OverflowError):
        return None


def _to_utc(moment: datetime, zone: str) -> datetime:
    if zone[:1] not in ("+", "-"):
        return moment
    aware = datetime.strptime(f"{moment:%Y-%m-%d %H:%M:%S} {zone.replace(':', '')}", "%Y-%m-%d %H:%M:%S %z")
    return aware.astimezone(UTC).replace(tzinfo=None)
