"""Integrals over exponentials of concave functions, with derivatives: mean residual lives and moments of a life.

With f the logarithm of a survival function or of a density, concave in z, the integrand exp(sigma z + f(z)) has one
peak. It is found, then how far it reaches to both sides until nothing of it is left, and each stretch is integrated by
the double exponential rule (Takahasi & Mori 1974, cited from memory), which crowds its points at the ends. So the tail
may be as long and the peak as far from the start as they like.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families import Derivatives, StandardDistribution
from reliability_app.engine.families.shaped_standard import ShapedStandard

Array = NDArray[np.float64]
Concave = Callable[[Array], Derivatives]

# What lies so far below the peak, in ln, is less than the last digit.
_DEPTH = 40.0
_BLOCK = 2_048
_POINTS, _REACH = 97, 3.1
_MOST_DOUBLINGS, _MOST_STEPS, _HALVINGS = 64, 60, 9
_PEAK_REACHED = 1e-4


class Tilted(NamedTuple):
    """Moments under the weight exp(sigma z + f(z)), each of the shape of what was asked.

    `log_total` is the logarithm of the integral, infinite where it diverges; x is the distance from the start.
    """

    log_total: Array
    x: Array
    slope: Array
    x_x: Array
    x_slope: Array
    slope_slope: Array
    bend: Array


class ResidualMean(NamedTuple):
    """M(z, sigma) = ln of the integral over x > 0 of exp(sigma x) S(z + x)/S(z), with its derivatives."""

    value: Array
    d_z: Array
    d_sigma: Array
    d_zz: Array
    d_z_sigma: Array
    d_sigma_sigma: Array


def residual_mean(standard: StandardDistribution, z: Array, sigma: Array) -> ResidualMean:
    """Return M at points of shape (n,); infinite, with derivatives 0, where the tail is too heavy for a mean."""
    start = standard.log_survival(z)
    found = _in_blocks(standard, z, sigma, lambda part: part.log_survival)
    value = found.log_total - start.value
    finite = np.isfinite(value)
    variance = found.slope_slope - found.slope**2
    parts = (
        found.slope - start.first,
        found.x,
        found.bend + variance - start.second,
        found.x_slope - found.x * found.slope,
        found.x_x - found.x**2,
    )
    return ResidualMean(value, *(np.where(finite, part, 0.0) for part in parts))


def log_moment(standard: StandardDistribution, sigma: Array) -> Derivatives:
    """Return ln E exp(sigma z) with derivatives in sigma, shape (n,); infinite where the tail is too heavy."""
    found = _in_blocks(standard, np.full_like(sigma, -np.inf), sigma, lambda part: part.log_density)
    finite = np.isfinite(found.log_total)
    spread = found.x_x - found.x**2
    value = np.where(finite, standard.log_moment(np.where(finite, sigma, 0.0)), np.inf)
    return Derivatives(value, np.where(finite, found.x, 0.0), np.where(finite, spread, 0.0))


def _in_blocks(
    standard: StandardDistribution,
    low: Array,
    sigma: Array,
    concave_of: Callable[[StandardDistribution], Concave],
) -> Tilted:
    blocks = []
    with np.errstate(over="ignore", under="ignore", invalid="ignore", divide="ignore"):
        for start in range(0, low.size, _BLOCK):
            rows = np.arange(start, min(start + _BLOCK, low.size))
            part = standard.rows(rows) if isinstance(standard, ShapedStandard) else standard
            blocks.append(_tilted(concave_of(part), low[rows], sigma[rows]))
    return Tilted(*(np.concatenate(columns) for columns in zip(*blocks, strict=True)))


def _tilted(concave: Concave, low: Array, sigma: Array) -> Tilted:
    """Return the moments from `low` up, which may be minus infinity; x is then z itself."""
    middle = peak(concave, low, sigma)
    top = concave(middle)
    height = sigma * middle + top.value
    # In the far end of a short tail the integrand falls within a small part of 1.
    first = 0.1 / np.maximum(1.0, np.abs(top.first + sigma) + np.sqrt(np.abs(top.second)))

    def depth(z: Array) -> Array:
        return np.asarray(height - (sigma * z + concave(z).value))

    left = np.maximum(middle - _reach(depth, middle, -first, furthest=middle - low), low)
    right = middle + _reach(depth, middle, first, furthest=np.full_like(middle, np.inf))
    # Standard distributions change their course about 0.
    turn = np.clip(0.0, left, right)
    ends = np.stack([left, np.minimum(middle, turn), np.maximum(middle, turn), right], axis=-1)
    z, weight = nodes_between(ends)
    at = concave(z)
    weight = weight * np.exp(sigma[:, None] * z + at.value - height[:, None])
    weight = np.where(np.isfinite(weight), weight, 0.0)
    total = weight.sum(axis=1)
    share = weight / total[:, None]
    x = z - np.where(np.isfinite(low), low, 0.0)[:, None]
    # The integral of exp(sigma x): the start is where x is 0.
    log_total = np.log(total) + height - sigma * np.where(np.isfinite(low), low, 0.0)
    log_total = np.where(np.isfinite(right), log_total, np.inf)

    def mean(values: Array) -> Array:
        return np.asarray(np.sum(share * np.where(share > 0, values, 0.0), axis=1))

    slope, bend = at.first, at.second
    return Tilted(log_total, mean(x), mean(slope), mean(x * x), mean(x * slope), mean(slope * slope), mean(bend))


def peak(concave: Concave, low: Array, sigma: Array, *, reached: float = _PEAK_REACHED) -> Array:
    """Return where sigma z + f(z) is highest from `low` up, to a part `reached` of its width there.

    Where it only rises to the left or only to the right, that is a point far out on that side.
    """
    z = np.maximum(low, 0.0)
    way = np.sign(concave(z).first + sigma)
    step = np.ones_like(z)
    inside, outside, bracketed = z.copy(), z.copy(), (way == 0) | ((way < 0) & (z <= low))
    for _ in range(_MOST_DOUBLINGS):
        if bracketed.all():
            break
        tried = np.maximum(inside + way * step, low)
        on = way * (concave(tried).first + sigma) > 0
        ended = ~bracketed & (~on | (tried <= low))
        outside = np.where(ended, tried, outside)
        inside = np.where(bracketed | ended, inside, tried)
        bracketed |= ended
        step = 2.0 * step
    # A slope that never turns: the integral diverges, which the reach to the right will show.
    outside = np.where(bracketed, outside, inside)
    a, b = np.minimum(inside, outside), np.maximum(inside, outside)
    z = 0.5 * (a + b)
    for _ in range(_MOST_STEPS):
        at = concave(z)
        slope = at.first + sigma
        a, b = np.where(slope > 0, z, a), np.where(slope > 0, b, z)
        moved = z - slope / at.second
        moved = np.where((moved > a) & (moved < b), moved, 0.5 * (a + b))
        near = np.abs(moved - z) <= reached * np.minimum(1.0, 1.0 / np.sqrt(np.abs(at.second) + 1e-300))
        z = moved
        if (near | (b - a <= 1e-15 * np.abs(z))).all():
            break
    return z


def _reach(depth: Callable[[Array], Array], peak: Array, first: Array, *, furthest: Array) -> Array:
    """Return how far from the peak the integrand reaches in the direction of `first`; infinite where it never ends."""
    way, distance, known = np.sign(first), np.abs(first), np.zeros(peak.size, dtype=bool)
    for _ in range(_MOST_DOUBLINGS):
        deep = ~(depth(peak + way * distance) < _DEPTH)
        known |= deep | (distance >= furthest)
        if known.all():
            break
        distance = np.where(known, distance, 2.0 * distance)
    inner = 0.5 * distance
    for _ in range(_HALVINGS):
        middle = 0.5 * (inner + distance)
        deep = ~(depth(peak + way * middle) < _DEPTH)
        inner, distance = np.where(deep, inner, middle), np.where(deep, middle, distance)
    return np.where(known, np.minimum(distance, furthest), np.inf)


def _double_exponential() -> tuple[Array, Array, Array]:
    """Return distances from the left and from the right end of (0, 1), and weights."""
    t = np.linspace(-_REACH, _REACH, _POINTS)
    inner = 0.5 * np.pi * np.sinh(t)
    left, right = 1.0 / (1.0 + np.exp(-2.0 * inner)), 1.0 / (1.0 + np.exp(2.0 * inner))
    weight = np.pi * np.cosh(t) * left * right * (t[1] - t[0])
    return left, right, weight


_LEFT, _RIGHT, _WEIGHT = _double_exponential()


def nodes_between(ends: Array) -> tuple[Array, Array]:
    """Return points and weights on the stretches between `ends`, shape (n, stretches + 1), as (n, points)."""
    begin, width = ends[:, :-1, None], np.diff(ends, axis=1)[:, :, None]
    end = ends[:, 1:, None]
    # Measured from the nearer end, so that points crowd there to the last digit.
    z = np.where(_LEFT < 0.5, begin + width * _LEFT, end - width * _RIGHT)
    weight = width * _WEIGHT
    return z.reshape(len(ends), -1), np.broadcast_to(weight, z.shape).reshape(len(ends), -1)
