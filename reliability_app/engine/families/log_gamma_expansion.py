"""Tails of the standardised logarithm of a gamma life with a large shape, expanded about the normal distribution.

Temme's uniform expansion of the incomplete gamma functions (DLMF 8.12.3-8.12.8): with eta = zeta q,

    S(w) = Phi(-zeta) + q phi(zeta) sum_j c_j(eta) q^(2j)

It is taken in ratios to phi(zeta), which neither underflow nor lose digits, in w instead of in the life, which would.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import Array, Derivatives
from reliability_app.engine.families.log_gamma_density import bend, log_gamma_density, stirling_remainder
from reliability_app.engine.families.mills_ratio import mills_ratio

_BELOW, _WITHIN = 0.15, 0.65
_ORDERS, _TERMS = 8, 26
# Gamma(k) = sqrt(2 pi/k) (k/e)^k (1 + 1/(12 k) + ...) (DLMF 5.11.3).
_STIRLING = (
    1.0, 1 / 12, 1 / 288, -139 / 51840, -571 / 2488320,
    163879 / 209018880, 5246819 / 75246796800, -534703531 / 902961561600,
)  # fmt: skip


def is_expanded(q: Array, w: Array) -> NDArray[np.bool_]:
    """Return where the expansion is exact to machine precision."""
    return np.asarray((q < _BELOW) & (np.abs(q * w) < _WITHIN))


def _coefficients() -> list[list[float]]:
    """Return the power series in eta of c_0, c_1, ... (DLMF 8.12.7, 8.12.8)."""
    count = _TERMS + 2 * _ORDERS + 2
    # mu with eta^2/2 = mu - ln(1 + mu), from mu mu' = eta (1 + mu).
    mu = [0.0, 1.0]
    for n in range(2, count + 1):
        mu.append((mu[n - 1] - sum(mu[i] * (n + 1 - i) * mu[n + 1 - i] for i in range(2, n))) / (n + 1))
    reciprocal = [1.0]
    for n in range(1, count):
        reciprocal.append(-sum(mu[i + 1] * reciprocal[n - i] for i in range(1, n + 1)))
    # 1/mu = 1/eta + sum_n of reciprocal[n + 1] eta^n; the first term is that of 1/eta in c_0 and cancels ever after.
    series = [reciprocal[1:]]
    for order in range(1, _ORDERS):
        sign = -_STIRLING[order] if order % 2 else _STIRLING[order]
        before = series[-1]
        series.append([(n + 2) * before[n + 2] + sign * reciprocal[n + 1] for n in range(len(before) - 2)])
    return [coefficients[:_TERMS] for coefficients in series]


_SERIES = _coefficients()


def _beyond_normal(q: Array, eta: Array) -> Array:
    """Return q sum_j c_j(eta) q^(2j)."""
    square = q * q
    total = np.zeros_like(eta)
    for coefficients in reversed(_SERIES):
        value = np.zeros_like(eta)
        for coefficient in reversed(coefficients):
            value = value * eta + coefficient
        total = total * square + value
    return q * total


def expanded_upper(q: Array, w: Array) -> Derivatives:
    """Return ln S(w) with its derivatives."""
    return _expanded(q, w, 1.0)


def expanded_lower(q: Array, w: Array) -> Derivatives:
    """Return ln F(w) with its derivatives."""
    return _expanded(q, w, -1.0)


def _expanded(q: Array, w: Array, side: float) -> Derivatives:
    """Return the upper (side 1) or lower (side -1) tail: the smaller one from its ratio to f, the other as the rest."""
    zeta = w * np.sqrt(bend(q * w))
    density = log_gamma_density(q, w)
    way = np.where(zeta > 0, 1.0, -1.0)
    # phi(zeta)/f is exp of Stirling's remainder.
    ratio = (mills_ratio(np.abs(zeta)) + way * _beyond_normal(q, q * zeta)) * np.exp(stirling_remainder(q))
    own = way == side
    log_small = density.value + np.log(ratio)
    value = np.where(own, log_small, np.log1p(-np.exp(log_small)))
    rate = np.where(own, 1.0 / ratio, np.exp(density.value - np.where(own, 0.0, value)))
    return Derivatives(value, -side * rate, -rate * (side * density.first + rate))
