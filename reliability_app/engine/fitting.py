"""fit(data, family) -> Fit: the family meant, the method, and the maximum of the likelihood."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.errors import MethodUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.existence import Outcome, outcome_before_fitting
from reliability_app.engine.families import Family, ShapedFamily, family
from reliability_app.engine.families.shaped_family import with_threshold
from reliability_app.engine.families.weibull import WEIBULL, weibull_of_given_shape
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.likelihood import Terms, log_likelihood
from reliability_app.engine.method_fit import fit_by_method
from reliability_app.engine.methods import MAXIMUM_LIKELIHOOD, check_method
from reliability_app.engine.newton import Maximum, maximise
from reliability_app.engine.sample import Sample, sample_of
from reliability_app.engine.shaped.shaped_fitting import fit_shaped
from reliability_app.engine.zero_failure import ZeroFailureFit

Array = NDArray[np.float64]

# A larger sample is first climbed on a part of it; from there the whole needs two or three steps instead of six.
_THIN_ABOVE = 40_000
_THIN_TO = 4_000
_FURTHEST_START = 30.0


def fit(
    data: LifeData,
    family_name: str,
    *,
    threshold: bool = False,
    method: str = MAXIMUM_LIKELIHOOD,
    shape: float | None = None,
) -> Fit:
    """Fit a family.

    Parameters
    ----------
    data : LifeData
    family_name : str
        One of `FAMILY_NAMES`.
    threshold : bool
        Fit ln(life - threshold) in the place of ln life: Weibull, lognormal, exponential, loglogistic.
    method : str
        One of `METHODS`.
    shape : float, optional
        Weibull only: hold the shape at this value and estimate the scale.

    Returns
    -------
    Fit
        With `outcome` ESTIMATED, or another outcome and no numbers where no estimate exists or none was reached.

    Raises
    ------
    UnknownName
        If there is no such family or method, or the family has no form with a threshold.
    MethodUnavailable
        If the method does not apply to the family or the data, or a shape is given to another family.
    DataError
        If the family is one of ln life, and some lives are not positive; or the shape is out of range.
    """
    chosen = _chosen(family_name, threshold=threshold, shape=shape)
    check_method(method, data, chosen)
    if isinstance(chosen, ShapedFamily):
        return fit_shaped(data, chosen)
    found = _likeliest(data, chosen)
    return found if method == MAXIMUM_LIKELIHOOD else fit_by_method(found, method)


def _chosen(family_name: str, *, threshold: bool, shape: float | None) -> Family:
    chosen = family(family_name)
    if shape is None:
        return with_threshold(chosen) if threshold else chosen
    if chosen is not WEIBULL or threshold:
        what = f"{chosen.title} family{' with threshold' if threshold else ''}"
        raise MethodUnavailable(
            f"A shape can be given to the Weibull family without a threshold only, not to the {what}: leave it empty."
        )
    return weibull_of_given_shape(shape)


def _likeliest(data: LifeData, chosen: Family) -> Fit:
    """Fit a location-scale family by maximum likelihood."""
    data.check_beyond(chosen.life_scale.origin, chosen.title)
    outcome = outcome_before_fitting(data, chosen)
    if outcome is Outcome.NO_FAILURE and chosen.fixed_sigma is not None:
        return ZeroFailureFit(data, chosen, outcome, None)
    if outcome is not Outcome.ESTIMATED:
        return Fit(data, chosen, outcome, None)
    sample = sample_of(data, chosen.life_scale)
    top = fit_batch(sample, chosen)
    if not top.converged[0]:
        return Fit(data, chosen, Outcome.NOT_CONVERGED, None)
    found = Estimate(
        chosen,
        sample,
        float(top.a[0]),
        float(top.b[0]),
        top.terms,
        gradient_norm=float(top.gradient_norm[0]),
        decrement=float(top.decrement[0]),
        steps=int(top.steps[0]),
    )
    return Fit(data, chosen, Outcome.ESTIMATED, found)


def fit_batch(sample: Sample, chosen: Family) -> Maximum:
    """Fit every sample of a batch; a sample without a maximum comes back as not converged."""
    fixed = chosen.fixed_sigma is not None
    a, b = _starts(sample, chosen)
    single = sample.failed.y.shape[0] == 1
    size = sample.failed.size + sample.running.size
    if single and size > _THIN_ABOVE:
        first = _climb(sample.thinned(_THIN_TO), chosen, a, b)
        if first.converged.all():
            a, b = first.a, first.b
    top = _climb(sample, chosen, a, b)
    return top if not fixed else _with_fixed_sigma(top)


def _climb(sample: Sample, chosen: Family, a: Array, b: Array) -> Maximum:
    batch = a.size

    def evaluate(rows: NDArray[np.intp], at_a: Array, at_b: Array) -> Terms:
        part = sample if rows.size == batch else sample.rows(rows)
        return log_likelihood(part, chosen.standard, at_a, at_b)

    fixed = chosen.fixed_sigma is not None
    return maximise(evaluate, a, b, failures=_failures(sample) + np.zeros(batch), b_is_fixed=fixed)


def _starts(sample: Sample, chosen: Family) -> tuple[Array, Array]:
    """Start where half of the share failed lies at the mean of the failures, with their own spread.

    Where some unit would then lie so far out that its tail underflows, start with a wider spread, or, where that is
    fixed, further up.
    """
    failures = _failures(sample)
    share = failures / (failures + sample.running.total)
    a = chosen.standard.quantile(np.clip(0.5 * share, 1e-12, 0.5))
    places = [y for y in (sample.failed.y, sample.running.y, sample.left.y, sample.between.nearest) if y.size]
    highest, sigma = max(float(y.max()) for y in places), chosen.fixed_sigma
    if sigma is not None:
        b = sample.spread / sigma
        return np.minimum(a, _FURTHEST_START - b * highest), np.full_like(a, b)
    furthest = max(highest, *(-float(y.min()) for y in places))
    return a, np.full_like(a, min(1.0, _FURTHEST_START / max(furthest, 1.0)))


def _failures(sample: Sample) -> Array:
    return np.asarray(sample.failed.total + sample.left.total + sample.between.weight.sum(axis=1))


def _with_fixed_sigma(top: Maximum) -> Maximum:
    """Drop the derivatives in b, which mean nothing where sigma is fixed."""
    zero = np.zeros_like(top.a)
    terms = Terms(top.terms.value, top.terms.d_a, zero, top.terms.d_aa, zero, zero)
    return Maximum(top.a, top.b, terms, top.converged, top.decrement, top.gradient_norm, top.steps)
