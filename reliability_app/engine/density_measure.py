"""The logarithm of the density at an age as a smooth function of (a, b), for the band of a density curve."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import StandardDistribution
from reliability_app.engine.life_measures import Measure, column
from reliability_app.engine.likelihood import Terms

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class DensityMeasure(Measure):
    """Logarithm of the standardised density at y: ln b + ln f(a + b y).

    It has no extreme inside a region of (a, b): where its slope in a vanishes, the one in b is 1/b. So its extremes
    over a likelihood region lie on the outline, as those of the other measures do.
    """

    y: Array
    standard: StandardDistribution

    @property
    def size(self) -> int:
        """How many ages."""
        return self.y.size

    def at(self, places: NDArray[np.intp]) -> DensityMeasure:
        """Return the densities at the chosen ages."""
        return DensityMeasure(self.y[places], self.standard)

    def terms(self, a: Array, b: Array) -> Terms:
        """Return the log density and its derivatives."""
        y = column(self.y, a)
        inverse = 1.0 / b
        with np.errstate(over="ignore", invalid="ignore"):  # far out in a short tail the density is 0
            value, first, second = self.standard.log_density(a + b * y)
            return Terms(
                np.log(b) + value,
                first,
                inverse + first * y,
                second,
                second * y,
                second * y * y - inverse * inverse,
            )
