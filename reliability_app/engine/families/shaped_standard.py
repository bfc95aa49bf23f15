"""What standard distributions with a shape have in common: one shape a row, and quantiles by Newton's method."""

from __future__ import annotations

from abc import abstractmethod
from collections.abc import Callable
from typing import Self

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import Array, Derivatives, StandardDistribution

_MOST_STEPS = 60
_STEP_REACHED = 4e-16


class ShapedStandard(StandardDistribution):
    """A standard distribution with a shape: an array, which broadcasts against z once axes are added at its end.

    Against z of shape (points, n) a shape for every point is given as (points, 1).
    """

    # The mean of z differs from shape to shape; no family of life itself needs it.
    mean = float("nan")

    def __init__(self, shape: Array) -> None:
        self.shape = shape

    def rows(self, index: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        """Return the distributions of the chosen rows; a single one serves all rows."""
        return self if self.shape.shape[0] == 1 else type(self)(self.shape[index])

    def picked(self, chosen: NDArray[np.bool_]) -> Self:
        """Return the distributions for the chosen places of an array of z, a shape for each."""
        return type(self)(np.broadcast_to(self.against(chosen), chosen.shape)[chosen])

    def against(self, z: Array | NDArray[np.bool_]) -> Array:
        """Return the shape with as many axes as z."""
        return self.shape.reshape(self.shape.shape + (1,) * (z.ndim - self.shape.ndim))

    @abstractmethod
    def rough_quantile(self, fraction: Array) -> Array:
        """Return the quantile to a few digits, quickly: a start for a search."""

    @abstractmethod
    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z)."""

    @abstractmethod
    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z)."""

    def cdf(self, z: Array) -> Array:
        """Return F(z)."""
        return np.exp(self.log_cdf(z).value)

    def survival(self, z: Array) -> Array:
        """Return S(z)."""
        return np.exp(self.log_survival(z).value)


def solved(function: Callable[[Array], Derivatives], target: Array, start: Array) -> Array:
    """Return where a monotone concave function, the logarithm of a tail, takes the value `target`, from `start`.

    Newton's method overshoots at most once: from there on a concave function is approached from one side.
    """
    z = start.copy()
    for _ in range(_MOST_STEPS):
        at = function(z)
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            step = (target - at.value) / at.first
        # Where the function is flat to the last digit a step means nothing.
        step = np.clip(np.where(np.isfinite(step), step, 0.0), -10.0, 10.0)
        z = z + step
        if not (np.abs(step) > _STEP_REACHED * (1.0 + np.abs(z))).any():
            break
    return z
