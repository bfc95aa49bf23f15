"""The order of rows when they are sorted by one column."""

from __future__ import annotations

import re
import sys
from collections.abc import Sequence
from operator import itemgetter

from reliability_app.session.numbers import UnreadableNumber, read_number

_DIGITS = re.compile(r"[0-9]+")
_PLAIN_NUMBER = re.compile(r"[0-9]+(\.[0-9]*)?")
# What does not start like a number is none: asking `read_number` about 100,000 names would take half a second.
_STARTS_LIKE_NUMBER = re.compile(r"[^\w]*[0-9]")


def sorted_rows(texts: Sequence[str], *, descending: bool = False) -> list[int]:
    """Order rows by the text of one column.

    Parameters
    ----------
    texts : sequence of str
        The column's cells, one per row.
    descending : bool
        Largest number and last word first.

    Returns
    -------
    list of int
        Row numbers in their new order. Numbers stand before words (after them when descending); words are compared
        without regard to case and with the numbers in them by size (P-2 before P-10); empty cells stand last either
        way; equal rows keep their order.
    """
    numbers: list[tuple[float, int]] = []
    words: list[tuple[str, int]] = []
    empty: list[int] = []
    for row, text in enumerate(texts):
        number = _number(text)
        if number is not None:
            numbers.append((number, row))
        elif text.strip():
            words.append((_natural(text), row))
        else:
            empty.append(row)
    # A reversed sort in Python keeps the order of equals, as wanted.
    numbers.sort(key=itemgetter(0), reverse=descending)
    words.sort(key=itemgetter(0), reverse=descending)
    filled = [*words, *numbers] if descending else [*numbers, *words]
    return [row for _, row in filled] + empty


def _number(text: str) -> float | None:
    if _PLAIN_NUMBER.fullmatch(text):
        return float(text)
    if not _STARTS_LIKE_NUMBER.match(text):
        return None
    try:
        return read_number(text)
    except UnreadableNumber:
        return None


def _natural(text: str) -> str:
    """Return a text that sorts as people count: each run of digits led by its length, after a mark below any letter."""
    return _DIGITS.sub(_counted, text.strip().casefold())


def _counted(digits: re.Match[str]) -> str:
    # Longer is larger once leading zeros are gone; int() would refuse some thousands of digits.
    significant = digits[0].lstrip("0")
    length = len(significant)
    return f"\0{chr(length if length < sys.maxunicode else sys.maxunicode)}{significant}"
