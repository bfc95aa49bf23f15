"""The standardised logarithm of an inverse Gaussian life.

With shape q and phi = 1/q^2 = (shape of the life)/(mean of the life), z = ln(life/mean)/q. The life is the first passage
of a drifting Brownian motion:

    S = Phi(-x) - exp(2 phi) Phi(-y) = phi(x) (M(x) - M(y)),    x = 2 sinh(q z/2)/q,  y = 2 cosh(q z/2)/q

with M Mills' ratio, because y^2 = x^2 + 4 phi. Taken this way neither tail underflows.
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


class LogInverseGaussian(ShapedStandard):
    """The standardised logarithm of an inverse Gaussian life; the shape is q."""

    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z) = -ln(2 pi)/2 - q z/2 - x^2/2."""
        q = self.against(z)
        u = q * z
        with np.errstate(over="ignore"):
            x = 2.0 * np.sinh(0.5 * u) / q
            return Derivatives(
                -_HALF_LOG_TWO_PI - 0.5 * u - 0.5 * x * x, -0.5 * q - np.sinh(u) / q, -np.cosh(u) + np.zeros_like(x)
            )

    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z)."""
        return self._tail(z, 1.0)

    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z)."""
        return self._tail(z, -1.0)

    def _tail(self, z: Array, side: float) -> Derivatives:
        """Return the upper (side 1) or lower (side -1) tail: the smaller one from its ratio to f, the other as the rest."""
        q = self.against(z)
        density = self.log_density(z)
        with np.errstate(over="ignore", under="ignore", invalid="ignore", divide="ignore"):
            upper, lower = _ratios(q, q * z)
            # phi(x)/f is exp(u/2).
            log_upper, log_lower = (density.value + 0.5 * q * z + np.log(ratio) for ratio in (upper, lower))
            own, other = (log_upper, log_lower) if side > 0 else (log_lower, log_upper)
            value = np.where(own < -np.log(2.0), own, np.log1p(-np.exp(np.minimum(other, 0.0))))
            rate = np.exp(density.value - value)
            return Derivatives(value, -side * rate, -rate * (side * density.first + rate))

    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""
        return self._inverse(fraction, 1.0 - fraction, np.log(fraction), np.log1p(-fraction))

    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share."""
        return self._inverse(1.0 - share, share, np.log1p(-share), np.log(share))

    def _inverse(self, fraction: Array, share: Array, log_fraction: Array, log_share: Array) -> Array:
        """Solve for the smaller tail, from the quantile that has x alone normal."""
        q = self.against(fraction)
        score = np.where(fraction < 0.5, ndtri(fraction), -ndtri(share))
        start = 2.0 * np.arcsinh(0.5 * q * score) / q
        lower, upper = np.zeros_like(start) + log_fraction, np.zeros_like(start) + log_share
        below = solved(self.log_cdf, np.where(lower < upper, lower, -np.log(2.0)), start)
        above = solved(self.log_survival, np.where(lower < upper, -np.log(2.0), upper), start)
        return np.where(lower < upper, below, above)

    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power z) for power = q, the mean of the life over its mean: 0."""
        if not np.allclose(power, self.against(power)):
            raise NotImplementedError("Only the mean life of an inverse Gaussian is known here.")
        return np.zeros_like(power)


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
