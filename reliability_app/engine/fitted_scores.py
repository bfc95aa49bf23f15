"""Ages as normal scores under a fit, from whichever tail is smaller; any fit that gives its two tails will do."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri_exp

from reliability_app.engine.estimate import Estimate
from reliability_app.engine.fit_result import Fit

Array = NDArray[np.float64]
Tails = tuple[Array, Array]


def log_tails(found: Fit, age: Array) -> Tails:
    """Return ln F and ln S at ages of any kind: infinite ones, and ones before the first at which a unit can fail."""
    inside, beyond = found.family.life_scale.admits(age), np.isposinf(age)
    places = np.where(inside, age, found.data.last_observation)
    if isinstance(found.estimate, Estimate):
        standard, z = found.family.standard, found.score(places)
        log_cdf, log_survival = standard.log_cdf(z).value, standard.log_survival(z).value
    else:
        log_cdf, log_survival = logs_of_tails(
            np.asarray(found.failure_probability(places)), np.asarray(found.reliability(places))
        )
    return (
        np.where(inside, log_cdf, np.where(beyond, 0.0, -np.inf)),
        np.where(inside, log_survival, np.where(beyond, -np.inf, 0.0)),
    )


def logs_of_tails(cdf: Array, survival: Array) -> Tails:
    """Return the logarithms of both tails, the greater one from the smaller."""
    with np.errstate(divide="ignore"):
        return (
            np.where(cdf < survival, np.log(cdf), np.log1p(-survival)),
            np.where(cdf < survival, np.log1p(-cdf), np.log(survival)),
        )


def log_complement(log_probability: Array) -> Array:
    """Return ln(1 - exp(x)) for x <= 0."""
    with np.errstate(divide="ignore"):
        return np.log(-np.expm1(np.minimum(log_probability, 0.0)))


def normal_score(log_cdf: Array, log_survival: Array) -> Array:
    """Return the normal quantile at a probability given by both its tails."""
    return np.where(log_cdf < log_survival, ndtri_exp(log_cdf), -np.asarray(ndtri_exp(log_survival)))
