"""Reads many rows at once, column by column: what each says of its unit, and which ones cannot be read."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from reliability_app.session.numbers import are_plain, is_plain
from reliability_app.session.row_reading import MOST_UNITS, READ_COLUMNS
from reliability_app.session.states import FAILED, FOUND_FAILED, RUNNING

Array = NDArray[np.float64]
Codes = NDArray[np.int8]
Mask = NDArray[np.bool_]

# Codes of a row's status; the first three are also the codes of the states.
IS_FAILED, IS_RUNNING, IS_FOUND_FAILED, IS_UNREAD, IS_EMPTY = range(5)
_NO_STATE, _UNKNOWN_STATE = 5, 6
_STATE_CODES = {FAILED: IS_FAILED, RUNNING: IS_RUNNING, FOUND_FAILED: IS_FOUND_FAILED, "": _NO_STATE}


@dataclass(frozen=True)
class RowReadings:
    """What n rows say, as arrays of shape (n,); ages in the unit of the table.

    `status` holds one IS_... code per row; the other arrays mean something only where a row was read:
    lower == upper for failed, upper = inf for running, lower < upper for found failed.
    """

    lower: Array
    upper: Array
    quantity: Array
    entered: Array
    status: Codes

    def with_rows(self, rows: slice, readings: RowReadings) -> RowReadings:
        """Return a copy in which `rows` have other readings."""
        fresh = {}
        for field in fields(self):
            fresh[field.name] = getattr(self, field.name).copy()
            fresh[field.name][rows] = getattr(readings, field.name)
        return RowReadings(**fresh)


def read_rows(cells: Mapping[str, Sequence[str]]) -> RowReadings:
    """Read rows given column by column.

    Parameters
    ----------
    cells : mapping of str to sequence of str
        The texts of all columns, each of length n, in canonical form. READ_COLUMNS are read; a row counts as
        empty only if no column has text.

    Returns
    -------
    RowReadings
        The rules are those of `row_reading.row_faults`: a row is read exactly when that gives no fault.
    """
    life, until, state, quantity, entered = (cells[column] for column in READ_COLUMNS)
    age, _ = _numbers(life)
    end, has_end = _numbers(until)
    count, has_count = _numbers(quantity)
    start, has_start = _numbers(entered)
    code = np.fromiter((_STATE_CODES.get(text, _UNKNOWN_STATE) for text in state), np.int8, len(state))
    found = (code == IS_FOUND_FAILED) | ((code == _NO_STATE) & has_end)
    count[~has_count], start[~has_start] = 1.0, 0.0
    # Comparisons with nan, which stands for text that is no number, are False: such rows are not read.
    good = (age > 0) | (found & (age == 0))
    good &= np.where(found, end > age, ~has_end)
    good &= found | (code == IS_FAILED) | (code == IS_RUNNING)
    good &= (count >= 1) & (count <= MOST_UNITS) & (count == np.floor(count))
    late = (start > 0) & (start < np.where(found, end, age))
    # Of a unit found failed nothing need be known before it came under observation.
    good &= (start == 0) | (late & ((start < age) | (found & ((age == 0) | (start == age)))))
    status = np.where(found, IS_FOUND_FAILED, code).astype(np.int8)
    status[~good] = IS_UNREAD
    _mark_empty_rows(status, np.isnan(age), cells.values())
    upper = np.where(found, end, np.where(code == IS_RUNNING, math.inf, age))
    return RowReadings(lower=age, upper=upper, quantity=count, entered=start, status=status)


def _numbers(texts: Sequence[str]) -> tuple[Array, Mask]:
    """Return the numbers in `texts` (nan: none there, or not readable) and where there is any text."""
    given: Mask = np.fromiter(map(bool, texts), np.bool_, len(texts))
    if not given.any():
        return np.full(len(texts), math.nan), given
    readable = texts
    if not given.all() or not are_plain(texts):
        readable = [text if is_plain(text) else "nan" for text in texts]
    numbers: Array = np.fromiter(map(float, readable), np.float64, len(texts))
    numbers[np.isinf(numbers)] = math.nan
    return numbers, given


def _mark_empty_rows(status: Codes, without_life: Mask, columns: Iterable[Sequence[str]]) -> None:
    """Set IS_EMPTY where no column has text; only rows without a life need looking at."""
    used = [column for column in columns if any(column)]
    for row in np.flatnonzero(without_life).tolist():
        if not any(column[row] for column in used):
            status[row] = IS_EMPTY
