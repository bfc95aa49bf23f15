"""Wald bounds: the measure at the estimate, plus or minus normal quantiles of its delta-method standard error."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.estimate import Estimate
from reliability_app.engine.life_measures import Measure

Array = NDArray[np.float64]


def wald_end(estimate: Estimate, measure: Measure, root: float, sign: float) -> Array:
    """Return the lower (sign -1) or upper (sign 1) ends, shape (measure.size,), `root` standard errors away."""
    terms = measure.terms(np.array([estimate.a]), np.array([estimate.b]))
    gradient = np.stack([terms.d_a, terms.d_b], axis=-1)
    error = np.sqrt(np.einsum("ij,jk,ik->i", gradient, estimate.covariance_ab, gradient))
    return np.asarray(terms.value + sign * root * error)
