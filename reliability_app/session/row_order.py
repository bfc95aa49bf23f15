"""The order of rows when they are sorted by one column."""

from __future__ import annotations

import re
from collections.abc import Sequence

from reliability_app.session.numbers import UnreadableNumber, read_number

_DIGITS = re.compile(r"([0-9]+)")

# Numbers come before words, as in every spreadsheet.
_NUMBER, _WORDS = 0, 1

Key = tuple[int, float, tuple[str | tuple[int, str], ...]]


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
    keys = {row: _key(text) for row, text in enumerate(texts) if text.strip()}
    # A reversed sort in Python keeps the order of equals, as wanted.
    filled = sorted(keys, key=keys.__getitem__, reverse=descending)
    return filled + [row for row in range(len(texts)) if row not in keys]


def _key(text: str) -> Key:
    try:
        return (_NUMBER, read_number(text), ())
    except UnreadableNumber:
        # Splitting at digits makes words and numbers alternate, so that like is always compared with like.
        parts = _DIGITS.split(text.strip().casefold())
        natural = tuple(_size(part) if place % 2 else part for place, part in enumerate(parts))
        return (_WORDS, 0.0, natural)


def _size(digits: str) -> tuple[int, str]:
    # Longer is larger once leading zeros are gone; int() would refuse some thousands of digits.
    significant = digits.lstrip("0")
    return (len(significant), significant)
