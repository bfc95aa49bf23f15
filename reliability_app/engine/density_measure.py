"""The logarithm of the density at an age as a smooth function of (a, b), for the band of a density curve."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import Derivatives
from reliability_app.engine.life_measures import RateMeasure

Array = NDArray[np.float64]


class DensityMeasure(RateMeasure):
    """Logarithm of the standardised density at y: ln b + ln f(a + b y).

    It has no extreme inside a region of (a, b): where its slope in a vanishes, the one in b is 1/b. So its extremes
    over a likelihood region lie on the outline, as those of the other measures do.
    """

    def log_rate(self, z: Array) -> Derivatives:
        """Return the log density of the standard distribution."""
        return self.standard.log_density(z)
