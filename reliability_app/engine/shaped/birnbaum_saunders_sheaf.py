"""Birnbaum-Saunders: with v = 2 sinh((ln life - ln scale)/2), v/shape is standard normal.

kappa is ln scale on the standardised line, a = 0, and b is 1/shape times the root mean square of v over the failures,
by which v is divided. Because v/shape = A sqrt(life) - B/sqrt(life) with A = 1/(shape sqrt(scale)) and
B = sqrt(scale)/shape, the log-likelihood is concave in (A, B) (unless units entered late), so it has one maximum, and
the problem at every kappa has one too. A problem at a fixed shape may have two: the density of ln life has two peaks
where the shape is above 2 (Rieck & Nedelman 1991, Technometrics 33, 51-60, cited from memory).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families import Derivatives, StandardDistribution
from reliability_app.engine.families.normal import Normal
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.sample import sample_of, telling_ends
from reliability_app.engine.shaped.sheaf import Coordinate, End, Sheaf, Slices
from reliability_app.engine.shaped.transformed_sample import RawSample

Array = NDArray[np.float64]

_NORMAL = Normal()
_NEAR, _STEP = 3.0, 0.6
# Beyond this, in ln life, the scale is 0 or infinite as far as the units can tell.
_FURTHEST, _FAR_POINTS = 40.0, 12
_DIFFERENCE = 0.03
_SIZED_BY = 100


class BirnbaumSaundersSheaf(Sheaf):
    """Birnbaum-Saunders laid over some units."""

    a_is_pinned = True
    coordinates = (Coordinate("shape", True), Coordinate("scale", True))
    ends = (
        End(
            "scale-runs-down",
            "the scale falls to 0, where half of the units are given no life at all",
            "a family of ln life, such as lognormal or Weibull",
        ),
        End(
            "scale-runs-up",
            "the scale grows without end, where half of the units never fail",
            "a family of ln life, such as lognormal or Weibull",
        ),
    )

    def __init__(self, data: LifeData, raw: RawSample | None = None) -> None:
        self.data = data
        self.raw = RawSample.of(data, 0.0) if raw is None else raw
        centred = sample_of(data)
        self.shift, self.spread = centred.shift, centred.spread
        ages = telling_ends(data)
        y = (np.log(ages) - self.shift) / self.spread
        self._low, self._high = float(y.min()), float(y.max())
        ends = np.unique(ages[~data.is_running])
        if ends[0] == ends[-1]:
            ends = np.unique(ages)
        self._sized_by = ends[:: max(1, ends.size // _SIZED_BY)]

    @property
    def failures(self) -> float:
        """The units that failed."""
        return self.raw.failures

    @property
    def records(self) -> int:
        """The records that an evaluation sums over."""
        return self.raw.records

    def thinned(self, most: int) -> BirnbaumSaundersSheaf:
        """Return the family laid over a smaller sample."""
        return BirnbaumSaundersSheaf(self.data, self.raw.thinned(most))

    def grid(self) -> Array:
        """Return places of ln scale: close over the units, wide beyond."""
        low, high = self._low - _NEAR, self._high + _NEAR
        inner = np.linspace(low, high, 1 + int(np.ceil((high - low) / _STEP)))
        far = _FURTHEST / self.spread * np.linspace(0.0, 1.0, _FAR_POINTS)[1:] ** 2
        return np.concatenate([(low - far)[::-1], inner, high + far])

    def step(self, kappa: Array) -> Array:
        """Return 0.03 of the smaller of the spread of ln life and of 1."""
        return np.full_like(kappa, _DIFFERENCE / max(self.spread, 1.0))

    def standard(self, kappa: Array) -> StandardDistribution:  # noqa: ARG002 - the same at every kappa
        """Return the standard normal distribution."""
        return _NORMAL

    def _x(self, age: Array, kappa: Array) -> Array:
        return np.log(age) - (self.shift + self.spread * kappa)

    def slices(self, kappa: Array) -> Slices:
        """Return the problems at a list of kappa: the units on another line each."""
        column = kappa[:, None]

        def half_width(lower: Array, upper: Array) -> Array:
            half = 0.5 * np.log1p((upper - lower) / lower)
            return 2.0 * np.cosh(0.5 * (self._x(lower, column) + half)) * np.sinh(0.5 * half) / self.size(column)

        failed = self.raw.failed
        x = np.abs(self._x(failed.age, column))
        log_cosh = 0.5 * x + np.log1p(np.exp(-x)) - np.log(2.0)
        log_slope = (log_cosh - np.log(failed.age) - np.log(self.size(column))) @ failed.quantity
        return Slices(self.raw.carried(lambda age: self.to_y(age, column), half_width), _NORMAL, log_slope, True)

    def pinned_b(self, kappa: Array) -> Array:
        """Return nothing of use: b is free."""
        return np.ones_like(kappa)

    def starts(self, kappa: Array) -> tuple[Array, Array]:
        """Return a = 0, and as b 1: the failures have the root mean square of all."""
        return np.zeros_like(kappa), np.ones_like(kappa)

    def size(self, kappa: Array) -> Array:
        """Return the root mean square over the failures of 2 sinh((ln age - ln scale)/2)."""
        v = 2.0 * np.sinh(0.5 * self._x(self._sized_by, kappa[..., None]))
        return np.asarray(np.sqrt(np.mean(np.square(v), axis=-1)))

    def to_y(self, age: Array, kappa: Array) -> Array:
        """Return 2 sinh((ln age - ln scale)/2), over its root mean square."""
        return np.asarray(2.0 * np.sinh(0.5 * self._x(age, kappa)) / self.size(kappa))

    def log_slope_at(self, age: Array, kappa: Array) -> Array:
        """Return ln(dy/d age)."""
        x = np.abs(self._x(age, kappa))
        return np.asarray(0.5 * x + np.log1p(np.exp(-x)) - np.log(2.0 * age * self.size(kappa)))

    def life_reading(self, y: Array, kappa: Array) -> Derivatives:
        """Return ln age at a place on the line, with derivatives in y."""
        half = 0.5 * self.size(kappa)
        root = np.hypot(1.0, half * y)
        value = self.shift + self.spread * kappa + 2.0 * np.arcsinh(half * y)
        return Derivatives(value, 2.0 * half / root, -2.0 * half**3 * y / root**3)

    def age_of(self, reading: Array) -> Array:
        """Return the age of a ln age."""
        with np.errstate(over="ignore"):
            return np.exp(reading)

    def parts(self, kappa: Array) -> Sequence[tuple[Array | float, Array | float, Array | float]]:
        """Return ln shape and ln scale."""
        return ((np.log(self.size(kappa)), 0.0, -1.0), (self.shift + self.spread * kappa, 0.0, 0.0))

    def mean_life(self, a: float, b: float, kappa: float) -> float:  # noqa: ARG002 - a is 0
        """Return scale (1 + shape^2/2)."""
        with np.errstate(over="ignore"):
            shape = self.size(np.array(kappa)) / b
            return float(np.exp(self.shift + self.spread * kappa) * (1.0 + 0.5 * shape**2))
