"""Curve: what every picture is made of."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Curve:
    """A line over age with its pointwise bounds.

    Attributes
    ----------
    x, y : ndarray, shape (n,)
        Age (in the unit of the data) and value.
    lower, upper : ndarray, shape (n,), or None
        The bounds at each x; None on a side that is open, NaN where a bound does not exist.
    """

    x: Array
    y: Array
    lower: Array | None = None
    upper: Array | None = None
