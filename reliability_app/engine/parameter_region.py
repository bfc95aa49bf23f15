"""Outlines of the likelihood region of two parameters in their customary form: Weibull shape and scale, mu and sigma.

The region {2 (l_max - l) <= root^2} holds all pairs at once with the confidence of the chi-square distribution with two
degrees of freedom where root^2 is its quantile, -2 ln(1 - confidence); at the root of a single bound (one degree) its
outline is the one over which likelihood-ratio bounds are extremes. Both hold for large samples.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.families import Rule
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.methods import MAXIMUM_LIKELIHOOD
from reliability_app.engine.shaped.measures import ShapedCoordinate
from reliability_app.engine.shaped.outline import outline_of
from reliability_app.engine.shaped.shaped_fit import ShapedFit

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class ParameterOutline:
    """The outline of a region in its two customary parameters, in order round the maximum.

    Attributes
    ----------
    names : (str, str)
        The customary parameters, in customary order.
    first, second : ndarray, shape (n,)
        NaN where the region runs on without an end.
    is_closed : bool
        False where it does so in any direction.
    """

    names: tuple[str, str]
    first: Array
    second: Array
    is_closed: bool


def joint_root(confidence: float) -> float:
    """Return the signed root at which a region holds two parameters at once with this confidence."""
    return float(np.sqrt(-2.0 * np.log1p(-confidence)))


def parameter_outline(found: Fit, root: float) -> ParameterOutline:
    """Return the outline at a signed root.

    Raises
    ------
    NoEstimate
        Without a fit.
    BoundUnavailable
        Where there are not two parameters, or the fit is not the maximum of the likelihood.
    """
    names = found.family.parameter_names
    if found.method != MAXIMUM_LIKELIHOOD:
        raise BoundUnavailable(
            f'The region surrounds the maximum of the likelihood: choose the method "{MAXIMUM_LIKELIHOOD}".'
        )
    if found.family.parameter_count == 1:
        raise BoundUnavailable(f"The {found.family.title} family has one parameter, which has a bound and no region.")
    if len(names) != 2:
        raise BoundUnavailable(
            f"The {found.family.title} family has {len(names)} parameters; a region is drawn for families with two."
        )
    pair = (names[0], names[1])
    return _shaped_outline(found, pair, root) if isinstance(found, ShapedFit) else _plain_outline(found, pair, root)


def _plain_outline(found: Fit, names: tuple[str, str], root: float) -> ParameterOutline:
    estimate, region = found._found(), found.bounder.region(root)
    with np.errstate(over="ignore", divide="ignore", invalid="ignore"):
        mu = estimate.sample.shift - estimate.sample.spread * region.a / region.b
        sigma = estimate.sample.spread / region.b
        first, second = (_by_rule(found.family.rules[name], mu, sigma) for name in names)
    first, second = (np.where(region.closed & np.isfinite(values), values, np.nan) for values in (first, second))
    return ParameterOutline(names, first, second, bool(region.closed.all()))


def _by_rule(rule: Rule, mu: Array, sigma: Array) -> Array:
    return {Rule.MU: mu, Rule.EXP_MU: np.exp(mu), Rule.SIGMA: sigma, Rule.ONE_OVER_SIGMA: 1.0 / sigma}[rule]


def _shaped_outline(found: ShapedFit, names: tuple[str, str], root: float) -> ParameterOutline:
    """Return the outline of a family of which kappa and one of a, b are free: up one side, down the other."""
    estimate = found._shaped()
    sheaf, outline = estimate.sheaf, outline_of(estimate, root)
    low, high = outline.low, outline.high
    kappa = np.concatenate([[low.kappa], outline.kappa, [high.kappa], outline.kappa[::-1]])
    a = np.concatenate([[low.a], outline.a[:, 0], [high.a], outline.a[::-1, 1]])
    b = np.concatenate([[low.b], outline.b[:, 0], [high.b], outline.b[::-1, 1]])
    ends = (low.end is None, high.end is None)
    closed = np.concatenate([[ends[0]], outline.closed[:, 0], [ends[1]], outline.closed[::-1, 1]])
    a, b = sheaf.placed(a, b, kappa)
    values = []
    for name in names:
        place = next(place for place, entry in enumerate(sheaf.coordinates) if entry.name == name)
        value = ShapedCoordinate(sheaf, place).terms(a, b, kappa).value
        parameter = sheaf.coordinates[place].parameter(value)
        values.append(np.where(closed & np.isfinite(parameter), parameter, np.nan))
    return ParameterOutline(names, values[0], values[1], bool(closed.all()))
