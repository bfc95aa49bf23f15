"""The standard distribution of the generalized gamma family in its lambda form, and through it of the gamma family.

For lambda > 0 it is the standardised logarithm of a gamma life of shape 1/lambda^2; for lambda < 0 that mirrored; for
lambda = 0 the standard normal distribution (Prentice 1974, Biometrika 61, 539-544, cited from memory). lambda = 1 is
the smallest, lambda = -1 the largest extreme value distribution.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

import numpy as np
from scipy.special import gammainccinv, gammaincinv, gammaln, ndtri

from reliability_app.engine.families.base import Array, Derivatives
from reliability_app.engine.families.log_gamma_density import log_gamma_density, stirling_remainder
from reliability_app.engine.families.log_gamma_tails import lower_tail, upper_tail
from reliability_app.engine.families.shaped_standard import ShapedStandard, solved

Tail = Callable[[Array, Array], Derivatives]
Inverse = Callable[[Array, Array, bool], Array]

# Below this q the quantile of the incomplete gamma function is no better a start than that of the normal distribution.
_NORMAL_START_BELOW = 1e-3
_SMALL_X, _X_TERMS = 0.1, 16
_NO_LIFE = 1e-300
# Beyond this, tails and the squares of hazards leave the range of doubles.
_MOST_U = 300.0


class LogGamma(ShapedStandard):
    """The standardised logarithm of a gamma life; the shape is lambda."""

    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z)."""
        lam = self.against(z)
        q, way = np.abs(lam), np.where(lam < 0, -1.0, 1.0)
        value, first, second = log_gamma_density(q, _within_reach(q, way * z))
        return Derivatives(value, way * first, second)

    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z)."""
        return self._tail(z, upper_tail, lower_tail)

    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z)."""
        return self._tail(z, lower_tail, upper_tail)

    def _tail(self, z: Array, own: Tail, mirrored: Tail) -> Derivatives:
        """Take a tail from the core distribution, or the other one of its mirror image where lambda is negative."""
        lam, flat = np.broadcast_arrays(self.against(z), z)
        lam, flat = lam.ravel(), flat.ravel()
        out = Derivatives(*(np.empty_like(flat) for _ in range(3)))
        negative = lam < 0
        for chosen, tail, way in ((~negative, own, 1.0), (negative, mirrored, -1.0)):
            if chosen.any():
                q = np.abs(lam[chosen])
                value, first, second = tail(q, _within_reach(q, way * flat[chosen]))
                for column, part in zip(out, (value, way * first, second), strict=True):
                    column[chosen] = part
        shape = np.broadcast_shapes(self.against(z).shape, z.shape)
        return Derivatives(*(column.reshape(shape) for column in out))

    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""
        return self._inverse(fraction, lower=True)

    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share."""
        return self._inverse(share, lower=False)

    def rough_quantile(self, fraction: Array) -> Array:
        """Return the quantile to a few digits, quickly: a start for a search."""
        return self._inverse(fraction, lower=True, invert=_rough_inverse)

    def _inverse(self, probability: Array, *, lower: bool, invert: Inverse | None = None) -> Array:
        invert = _core_inverse if invert is None else invert
        lam, flat = np.broadcast_arrays(self.against(probability), probability)
        shape = lam.shape
        lam, flat = lam.ravel(), flat.ravel()
        out = np.empty_like(flat)
        negative = lam < 0
        for chosen, way in ((~negative, 1.0), (negative, -1.0)):
            if chosen.any():
                out[chosen] = way * invert(np.abs(lam[chosen]), flat[chosen], lower == (way > 0))
        return out.reshape(shape)

    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power z) = ln Gamma(k + s) - ln Gamma(k) - s ln k, s = power/lambda; infinite at k + s <= 0.

        Written with x = power lambda so that it runs into power^2/2 at lambda = 0.
        """
        lam = self.against(power)
        q, x = np.abs(lam), power * lam
        exists = x > -1.0
        x = np.where(exists, x, 0.0)
        further = stirling_remainder(q / np.sqrt(1.0 + x)) - stirling_remainder(q + 0.0 * x)
        value = power * power * _second_order(x) - 0.5 * np.log1p(x) + further
        return np.where(exists, value, np.inf)


def _within_reach(q: Array, w: Array) -> Array:
    """Return w, or where exp(q w) would overflow the greatest w where it does not: no life is told from that."""
    with np.errstate(divide="ignore"):
        return np.minimum(w, _MOST_U / q)


def _second_order(x: Array) -> Array:
    """Return ((1 + x) ln(1 + x) - x)/x^2, which is 1/2 at x = 0."""
    near = np.abs(x) < _SMALL_X
    small = np.where(near, x, 0.0)
    series = np.zeros_like(small)
    for power in range(_X_TERMS, -1, -1):
        series = (1.0 if power % 2 == 0 else -1.0) / ((power + 1.0) * (power + 2.0)) + series * small
    far = np.where(near, 1.0, x)
    return np.where(near, series, ((1.0 + far) * np.log1p(far) - far) / (far * far))


def _rough_inverse(q: Array, probability: Array, lower: bool) -> Array:
    """Return w with F(w) = probability (lower) or S(w) = probability, to a few digits; one-dimensional, q >= 0."""
    w = ndtri(probability) if lower else -ndtri(probability)
    shaped = q > _NORMAL_START_BELOW
    if not shaped.any():
        return np.asarray(w)
    k, p = 1.0 / q[shaped] ** 2, probability[shaped]
    x = gammaincinv(k, p) if lower else gammainccinv(k, p)
    log_small = np.log(p) if lower else np.log1p(-p)
    # At a life too small for a double F is x^k/Gamma(k + 1).
    log_x = np.where(x > _NO_LIFE, np.log(np.maximum(x, _NO_LIFE)), (log_small + gammaln(k + 1.0)) / k)
    w[shaped] = (log_x - np.log(k)) / q[shaped]
    return np.asarray(w)


def _core_inverse(q: Array, probability: Array, lower: bool) -> Array:
    """Return the same, right to the last digits: the rough one improved on the logarithm of the smaller tail."""
    w = _rough_inverse(q, probability, lower)
    few = probability < 0.5
    for chosen, target, own in ((few, np.log(probability), True), (~few, np.log1p(-probability), False)):
        if chosen.any():
            tail = partial(lower_tail if own == lower else upper_tail, q[chosen])
            w[chosen] = solved(tail, target[chosen], w[chosen])
    return w
