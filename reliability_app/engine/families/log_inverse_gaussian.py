"""The standardised logarithm of an inverse Gaussian life.

With shape q and 1/q^2 = (shape of the life)/(mean of the life), u = ln(life/mean). The life is the first passage of a
drifting Brownian motion:

    S = Phi(-x) - exp(2/q^2) Phi(-y) = phi(x) (M(x) - M(y)),    x = 2 sinh(u/2)/q,  y = 2 cosh(u/2)/q

with M Mills' ratio, because y^2 = x^2 + 4/q^2. Taken this way neither tail underflows.

It is standardised about a location near the median and by a spread that stay where they are as the mean runs to
infinity and the drift to 0: u = s z - c with s = q/sqrt(1 + q^2/4), c = ln(1 + 0.455 q^2).
"""

from __future__ import annotations

import numpy as np
from scipy.special import ndtri

from reliability_app.engine.families.base import Array, Derivatives
from reliability_app.engine.families.mills_ratio import mills_ratio, mills_remainder
from reliability_app.engine.families.shaped_standard import ShapedStandard, solved

_HALF_LOG_TWO_PI = 0.5 * np.log(2.0 * np.pi)
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
# Where y is nearer to x than this part of its size, M(x) - M(y) is integrated from the slope of M.
_NARROW = 0.5
# Without drift shape/life is chi-square with 1 degree of freedom; this is its median.
_MEDIAN = 0.4549364231195724
# Beyond this, tails and the squares of hazards leave the range of doubles.
_MOST_U = 300.0


def spread_of(q: Array) -> Array:
    """Return s."""
    return q / np.hypot(1.0, 0.5 * q)


def centre_of(q: Array) -> Array:
    """Return c = ln(mean) - (location of ln life)."""
    return np.log1p(_MEDIAN * q * q)


class LogInverseGaussian(ShapedStandard):
    """The standardised logarithm of an inverse Gaussian life; the shape is q."""

    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z) = ln(s/q) - ln(2 pi)/2 - u/2 - x^2/2."""
        q, s, u = self._at(z)
        with np.errstate(over="ignore"):
            x = 2.0 * np.sinh(0.5 * u) / q
            value = np.log(s / q) - _HALF_LOG_TWO_PI - 0.5 * u - 0.5 * x * x
            return Derivatives(value, -s * (0.5 + np.sinh(u) / q**2), -((s / q) ** 2) * np.cosh(u))

    def _at(self, z: Array) -> tuple[Array, Array, Array]:
        """Return q, s and u."""
        q = self.against(z)
        s = spread_of(q)
        return q, s, np.clip(s * z - centre_of(q), -_MOST_U, _MOST_U)

    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z)."""
        return self._tail(z, 1.0)

    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z)."""
        return self._tail(z, -1.0)

    def _tail(self, z: Array, side: float) -> Derivatives:
        """Return the upper (side 1) or lower (side -1) tail: a small one from its ratio to f, else from the other."""
        q, s, u = self._at(z)
        density = self.log_density(z)
        with np.errstate(over="ignore", under="ignore", invalid="ignore", divide="ignore"):
            upper, lower = _ratios(q, u)
            own, other = (upper, lower) if side > 0 else (lower, upper)
            # f/phi(x) is exp(-u/2) s/q.
            log_phi = density.value + 0.5 * u - np.log(s / q)
            log_own, log_other = log_phi + np.log(own), np.minimum(log_phi + np.log(other), 0.0)
            few = log_own < -np.log(2.0)
            value = np.where(few, log_own, np.log1p(-np.exp(log_other)))
            rate = np.where(few, np.exp(-0.5 * u) * s / (q * own), np.exp(density.value - value))
            return Derivatives(value, -side * rate, -rate * (side * density.first + rate))

    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""
        return self._inverse(fraction, 1.0 - fraction, np.log(fraction), np.log1p(-fraction))

    def rough_quantile(self, fraction: Array) -> Array:
        """Return the quantile where x alone is normal."""
        return self._where_x_is(ndtri(fraction))

    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share."""
        return self._inverse(1.0 - share, share, np.log1p(-share), np.log(share))

    def _inverse(self, fraction: Array, share: Array, log_fraction: Array, log_share: Array) -> Array:
        """Solve for the smaller tail, from the quantile that has x alone normal."""
        start = self._where_x_is(np.where(fraction < 0.5, ndtri(fraction), -ndtri(share)))
        lower, upper = np.zeros_like(start) + log_fraction, np.zeros_like(start) + log_share
        below = solved(self.log_cdf, np.where(lower < upper, lower, -np.log(2.0)), start)
        above = solved(self.log_survival, np.where(lower < upper, -np.log(2.0), upper), start)
        return np.where(lower < upper, below, above)

    def _where_x_is(self, x: Array) -> Array:
        q = self.against(x)
        return (2.0 * np.arcsinh(0.5 * q * x) + centre_of(q)) / spread_of(q)

    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power z) for power = s, the mean of the life over its location: c."""
        q = self.against(power)
        if not np.allclose(power, spread_of(q)):
            raise NotImplementedError("Only the mean life of an inverse Gaussian is known here.")
        return centre_of(q) + np.zeros_like(power)


def _ratios(q: Array, u: Array) -> tuple[Array, Array]:
    """Return S/phi(x) = M(x) - M(y) and F/phi(x) = M(-x) + M(y)."""
    x, y = 2.0 * np.sinh(0.5 * u) / q, 2.0 * np.cosh(0.5 * u) / q
    gap = 2.0 * np.exp(-0.5 * u) / q
    of_y = mills_ratio(y)
    narrow = gap < _NARROW * (1.0 + np.maximum(x, 0.0))
    upper = mills_ratio(x) - of_y
    if narrow.any():
        half = 0.5 * np.where(narrow, gap, 1.0)
        nodes = (x + half)[..., None] + half[..., None] * _NODES
        upper = np.where(narrow, half * (mills_remainder(nodes) @ _WEIGHTS), upper)
    return upper, mills_ratio(-x) + of_y
