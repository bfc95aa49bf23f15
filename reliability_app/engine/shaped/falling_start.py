"""How low the threshold may be where the density falls from it: the corner of the mode, and of the age at a hazard.

With sigma at its limit or above (1 for a Weibull life) the density falls from the threshold on, and the hazard is
highest there: then both readings are the threshold itself, else they lie beyond it. Along the limit the readings have a
corner, at which Lagrange's conditions say nothing, and their lowest value is as a rule taken there; so it is found from
the profile of the log-likelihood over the threshold with sigma held at its limit or above.
"""

from __future__ import annotations

from dataclasses import replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from reliability_app.engine.further_measures import most_sigma_of_mode
from reliability_app.engine.shaped.outline import Outline
from reliability_app.engine.shaped.profile import profile
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate
from reliability_app.engine.shaped.threshold_sheaf import ThresholdSheaf

Array = NDArray[np.float64]

_REACHED = 1e-13


class FallingStart:
    """The thresholds of one estimate at which the density may fall from the start."""

    def __init__(self, estimate: ShapedEstimate, sheaf: ThresholdSheaf) -> None:
        self.estimate = estimate
        self.sheaf = sheaf

    @cached_property
    def _held(self) -> ThresholdSheaf:
        """The family with sigma held at its limit."""
        limit = most_sigma_of_mode(self.sheaf.family.standard)
        return ThresholdSheaf(self.sheaf.data, replace(self.sheaf.family, fixed_sigma=limit), self.sheaf.raw)

    def lowest_threshold(self, outline: Outline) -> float:
        """Return the lowest such threshold inside the outline of the likelihood region; infinite where there is none.

        Where the region has no end below the dip before the first failure, a threshold beyond that is not the lowest.
        """
        if self.sheaf.b_is_pinned or not np.isfinite(most_sigma_of_mode(self.sheaf.family.standard)):
            return np.inf
        seen = self.estimate.seen
        kappa = seen.kappa[(seen.kappa > 0) & (seen.kappa <= outline.high.kappa)]
        inside = np.flatnonzero(self._profile(kappa) >= outline.target)
        if not inside.size:
            return np.inf
        first = int(inside[0])
        if first == 0:
            return -np.inf
        found = brentq(
            lambda at: float(np.maximum(self._profile(np.array([at]))[0], -1e300)) - outline.target,
            kappa[first - 1],
            kappa[first],
            rtol=_REACHED,
        )
        return float(self.sheaf.threshold(np.array([found]))[0])

    def _profile(self, kappa: Array) -> Array:
        """Return the greatest log-likelihood with sigma at its limit or above, at some values of kappa."""
        free, held = profile(self.sheaf, kappa), profile(self._held, kappa)
        return np.where(free.b <= self._held.pinned_b(kappa), free.value, held.value)
