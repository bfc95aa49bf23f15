"""Line: how an age grows along the standardised line of a family, which is what a mean, a mode or a hazard needs.

At a place y the age rises by exp(offset + slope y) per unit of y: slope 0 where the line is life itself, the spread
where it is ln life. In terms of z = a + b y the slope per unit of z is sigma = slope/b.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_scale import LOG_LIFE
from reliability_app.engine.sample import Sample

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Line:
    """The standardised line of a family.

    Attributes
    ----------
    offset, slope : ndarray or float
        ln(d age/dy) = offset + slope y; they broadcast against the points (a, b) they are used with.
    """

    offset: Array | float
    slope: Array | float

    @staticmethod
    def of(sample: Sample) -> Line:
        """Return the line on which a sample is laid."""
        spread = np.log(sample.spread)
        return Line(sample.shift + spread, sample.spread) if sample.life_scale is LOG_LIFE else Line(spread, 0.0)

    @property
    def log_shift(self) -> Array | float:
        """ln age at y = 0, on a line of ln life."""
        return self.offset - np.log(self.slope)

    def in_scores(self, a: float, b: float) -> Line:
        """Return the same line measured in z = a + b y."""
        return Line(self.offset - self.slope * a / b - np.log(b), self.slope / b)
