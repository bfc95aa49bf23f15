"""Curve: points (a, b) on which a measure keeps its value, by one free coordinate u with two derivatives."""

from __future__ import annotations

from abc import ABC, abstractmethod
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


class CurvePoints(NamedTuple):
    """Points of a curve and their derivatives in u; each of the shape of u."""

    a: Array
    b: Array
    a_first: Array
    b_first: Array
    a_second: Array
    b_second: Array


class Curve(ABC):
    """Points (a, b) on which a measure keeps its value."""

    @abstractmethod
    def points(self, u: Array) -> CurvePoints:
        """Return the points at the free coordinate u, with derivatives."""

    @abstractmethod
    def start(self, a: float, b: float) -> float:
        """Return the u of the curve's point nearest in spirit to (a, b)."""
