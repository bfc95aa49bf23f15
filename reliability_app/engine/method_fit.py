"""MethodFit: a fit whose estimate is not the maximum of the likelihood, and the bounds that go with it all the same."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.bounder import Bounder
from reliability_app.engine.bounds.wald import wald_end
from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.life_measures import Measure
from reliability_app.engine.median_rank_regression import line_through_ranks
from reliability_app.engine.methods import AGE_ON_RANK, CORRECTED_SHAPE, MAXIMUM_LIKELIHOOD, UNBIASED_VARIANCE
from reliability_app.engine.small_sample import (
    UnbiasedVarianceEstimate,
    with_corrected_shape,
    with_unbiased_variance,
)

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class MethodBounder(Bounder):
    """Finds the bounds that do not rest on the likelihood at the estimate.

    Exact bounds rest on the data alone and are those of `estimate`, the maximum likelihood estimate; Wald bounds are
    those of the method's own estimate where its covariance is known.
    """

    own: Estimate | None = None
    method: str = MAXIMUM_LIKELIHOOD

    def choices(self, kind: str, measure: Measure) -> tuple[str, ...]:
        """Return the kind that `kind` stands for; raise BoundUnavailable for one that does not go with the method."""
        has_exact = self._has_exact(measure)
        if kind in ("exact", "automatic") and has_exact:
            return ("exact",)
        if kind == "wald" and isinstance(self.own, UnbiasedVarianceEstimate):
            return (kind,)
        raise BoundUnavailable(_no_bound(kind, self.method, has_exact=has_exact))

    def end(self, measure: Measure, kind: str, tail: float, sign: float) -> Array:
        """Return the ends, shape (measure.size,); infinite where the bound is open to that side."""
        if self.choices(kind, measure) == ("wald",) and self.own is not None:
            return wald_end(self.own, measure, -float(ndtri(tail)), sign)
        return self.exact.end(measure, tail, sign)


@dataclass(frozen=True, eq=False)
class MethodFit(Fit):
    """A fit by another method than maximum likelihood.

    Its log-likelihood is that at its own estimate. There is neither an AICc nor a BIC, which belong to the maximum, and
    a covariance only for sigma with n - 1.

    Attributes
    ----------
    method : str
        One of `METHODS`.
    likeliest : Estimate or None
        The maximum likelihood estimate from the same data.
    """

    method: str = MAXIMUM_LIKELIHOOD
    likeliest: Estimate | None = None

    @property
    def covariance(self) -> Array | None:
        """Covariance of `coordinates` where it is known."""
        return self.estimate.covariance if isinstance(self.estimate, UnbiasedVarianceEstimate) else None

    @property
    def aicc(self) -> float | None:
        """None: the criterion is one of the maximum of the likelihood."""
        return None

    @property
    def bic(self) -> float | None:
        """None: the criterion is one of the maximum of the likelihood."""
        return None

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """What must be known before relying on anything read off this fit."""
        if self.estimate is None:
            return super().cautions
        return (*super().cautions, Caution("not-maximum-likelihood", Severity.NOTE, _note(self.method)))

    @cached_property
    def bounder(self) -> Bounder:
        """The bounds that go with this method."""
        own = self._found()
        return MethodBounder(self.likeliest or own, self.data, self.proceed, own=own, method=self.method)

    def _standard_error(self, name: str) -> float | None:
        return None if self.covariance is None else super()._standard_error(name)


def fit_by_method(found: Fit, method: str) -> Fit:
    """Return a fit by another method, from the maximum likelihood fit of the same data and family."""
    likeliest = found.estimate
    if likeliest is None:
        return MethodFit(found.data, found.family, found.outcome, None, method=method)
    if method == UNBIASED_VARIANCE:
        own = _estimate_at(UnbiasedVarianceEstimate, likeliest, *with_unbiased_variance(likeliest))
    elif method == CORRECTED_SHAPE:
        own = _estimate_at(Estimate, likeliest, *with_corrected_shape(likeliest))
    else:
        of_age = method == AGE_ON_RANK
        line = line_through_ranks(found.data, likeliest.sample, found.family, of_age=of_age)
        own = _estimate_at(Estimate, likeliest, *line)
    return MethodFit(found.data, found.family, found.outcome, own, method=method, likeliest=likeliest)


def _estimate_at(kind: type[Estimate], likeliest: Estimate, a: float, b: float) -> Estimate:
    terms = likeliest.evaluate(np.array([a]), np.array([b]))
    return kind(likeliest.family, likeliest.sample, a, b, terms, gradient_norm=0.0, decrement=0.0, steps=0)


def _note(method: str) -> str:
    if method == UNBIASED_VARIANCE:
        return "Sigma has the divisor n - 1: exact and Wald bounds go with it, likelihood and calibrated bounds do not."
    return (
        f'The method is "{method}": exact bounds, where they exist, rest on the data alone and go with it; Wald, '
        f"likelihood and calibrated bounds belong to {MAXIMUM_LIKELIHOOD}."
    )


def _no_bound(kind: str, method: str, *, has_exact: bool) -> str:
    exact = "the exact bound, or " if has_exact else ""
    choice = f'choose {exact}the method "{MAXIMUM_LIKELIHOOD}".'
    if kind in ("exact", "automatic"):
        return f'For these units and this reading no exact bound is known to go with the method "{method}": {choice}'
    return f'{_CALLED[kind]} bounds do not go with the method "{method}": {choice}'


_CALLED = {"wald": "Wald", "likelihood": "Likelihood", "calibrated": "Calibrated"}
