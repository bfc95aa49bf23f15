"""What a unit table says of its rows: counts, faults and the units read; and the errors it raises."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.errors import RigpaperError


class NothingToAnalyse(RigpaperError):
    """No row of the table can be read."""


class ColumnNameRefused(RigpaperError):
    """A column cannot have this name."""


@dataclass(frozen=True)
class CellFault:
    """A cell that keeps its row out of the analysis.

    `row` counts from 0; `typed` is the text in the cell; `reason` says what is wrong and what to do.
    """

    row: int
    column: str
    typed: str
    reason: str


@dataclass(frozen=True)
class Counts:
    """Units by state, quantities included, and the number of rows that cannot be read."""

    failed: int
    running: int
    found_failed: int
    unread: int


@dataclass(frozen=True, eq=False)
class ReadUnits:
    """The rows that can be read, in table order; arrays of shape (n,), ages in the unit of the table.

    failed: lower == upper; running: upper = inf; found failed: lower < upper. `rows` are their places in
    the table.
    """

    lower: NDArray[np.float64]
    upper: NDArray[np.float64]
    quantity: NDArray[np.float64]
    entered: NDArray[np.float64]
    rows: tuple[int, ...]
