"""What a family with a further parameter must give: for each value of it a problem in (a, b) that the engine solves.

The further parameter is kappa: a shape of the standard distribution, or what carries lives to the line on which they
have a location and a spread. With it fixed the log-likelihood is that of a location-scale family, concave in (a, b)
unless units entered late, with one of a and b possibly pinned to a value that follows from kappa.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families import Derivatives, StandardDistribution
from reliability_app.engine.families.shaped_standard import ShapedStandard
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.likelihood import Terms, log_likelihood
from reliability_app.engine.sample import Sample

Array = NDArray[np.float64]
Index = NDArray[np.intp] | NDArray[np.bool_]


@dataclass(frozen=True, eq=False)
class Slices:
    """Problems in (a, b), one for each of some values of kappa.

    Attributes
    ----------
    sample : Sample
        With one row that serves all, or a row for each.
    standard : StandardDistribution
    log_slope : ndarray, shape (points,)
        Sum over the failures of ln(dy/d life).
    a_is_pinned : bool
        Then a = 0; the log-likelihood is returned with a pull to it that vanishes there.
    """

    sample: Sample
    standard: StandardDistribution
    log_slope: Array
    a_is_pinned: bool

    def rows(self, index: Index) -> Slices:
        """Return the chosen problems."""
        standard = self.standard.rows(index) if isinstance(self.standard, ShapedStandard) else self.standard
        return Slices(self.sample.rows(index), standard, self.log_slope[index], self.a_is_pinned)

    def evaluate(self, a: Array, b: Array) -> Terms:
        """Return the log-likelihood of the lives themselves and its derivatives in (a, b), problem by problem."""
        terms = log_likelihood(self.sample, self.standard, a, b)
        value = terms.value + self.log_slope
        if self.a_is_pinned:
            zero = np.zeros_like(a)
            return Terms(value - 0.5 * a * a, -a, terms.d_b, zero - 1.0, zero, terms.d_bb)
        return replace(terms, value=value)


@dataclass(frozen=True)
class Coordinate:
    """A parameter, or the logarithm of one: base + of_location (-a/b) + of_slope ln b, the three depending on kappa.

    Attributes
    ----------
    name : str
        The customary name of the parameter.
    is_logarithm : bool
        True where the coordinate is the logarithm of the parameter.
    falls : bool
        True where the parameter itself falls as the coordinate rises (a shape that is 1/sigma).
    stays_finite : bool
        True where the coordinate has a limit at an end of the range of kappa that the likelihood can leave open.
    called : str
        The name of the coordinate where it is not that of the parameter.
    """

    name: str
    is_logarithm: bool
    falls: bool = False
    stays_finite: bool = False
    called: str = ""

    @property
    def title(self) -> str:
        """The name of the coordinate itself."""
        return self.called or (f"ln {self.name}" if self.is_logarithm else self.name)

    def parameter(self, value: Array) -> Array:
        """Return the parameter at a value of the coordinate."""
        with np.errstate(over="ignore"):
            return np.exp(-value if self.falls else value) if self.is_logarithm else value


@dataclass(frozen=True)
class End:
    """What a family turns into as kappa runs to an end of its range.

    Attributes
    ----------
    code : str
        For the caution that names it.
    text : str
        What happens there, to follow "The likelihood keeps rising as ": one clause without a full stop.
    advice : str
        What to choose instead, to follow "choose ": without a full stop.
    is_limit : bool
        True where the family has a limit there that the range of kappa reaches, so that a bound may lie on it.
    """

    code: str
    text: str
    advice: str
    is_limit: bool = True


class Sheaf(ABC):
    """A family with a further parameter, laid over some units.

    Arrays of kappa, a and b broadcast against each other wherever points are meant; `slices` takes a plain list.
    """

    data: LifeData
    a_is_pinned: bool = False
    b_is_pinned: bool = False

    @property
    @abstractmethod
    def coordinates(self) -> tuple[Coordinate, ...]:
        """The named coordinates, as many as there are parameters."""

    @property
    @abstractmethod
    def ends(self) -> tuple[End, End]:
        """What the lower and the upper end of the range of kappa mean."""

    @property
    @abstractmethod
    def failures(self) -> float:
        """The units that failed."""

    @property
    @abstractmethod
    def records(self) -> int:
        """The records that an evaluation sums over."""

    @abstractmethod
    def thinned(self, most: int) -> Sheaf:
        """Return the family laid over every k-th record of the large kinds: a quick first look at a large sample."""

    @property
    def free(self) -> tuple[int, ...]:
        """The places in (a, b, kappa) of what is free."""
        pinned = (self.a_is_pinned, self.b_is_pinned, False)
        return tuple(place for place, fixed in enumerate(pinned) if not fixed)

    @abstractmethod
    def grid(self) -> Array:
        """Return values of kappa, rising, over the whole range, near enough to each other to miss no maximum."""

    @abstractmethod
    def step(self, kappa: Array) -> Array:
        """Return the distance over which everything is smooth in kappa to some 1e-12: the step of differences."""

    @abstractmethod
    def slices(self, kappa: Array) -> Slices:
        """Return the problems at a list of kappa, shape (points,)."""

    @abstractmethod
    def standard(self, kappa: Array) -> StandardDistribution:
        """Return the standard distribution at kappa, which must have as many axes as the z it is asked about."""

    @abstractmethod
    def pinned_b(self, kappa: Array) -> Array:
        """Return b where it is pinned, at a list of kappa."""

    @abstractmethod
    def starts(self, kappa: Array) -> tuple[Array, Array]:
        """Return points (a, b) at a list of kappa from which their problems can be climbed."""

    @abstractmethod
    def to_y(self, age: Array, kappa: Array) -> Array:
        """Return the place on the line of an age; minus infinity where no life can be so short."""

    @abstractmethod
    def log_slope_at(self, age: Array, kappa: Array) -> Array:
        """Return ln(dy/d age) at an age; minus infinity where no life can be so short."""

    @abstractmethod
    def life_reading(self, y: Array, kappa: Array) -> Derivatives:
        """Return the reading of a life, ln age or the age itself, at a place on the line, with derivatives in y."""

    @abstractmethod
    def age_of(self, reading: Array) -> Array:
        """Return the age that a reading of a life stands for."""

    @abstractmethod
    def parts(self, kappa: Array) -> Sequence[tuple[Array | float, Array | float, Array | float]]:
        """Return base, of_location and of_slope of each coordinate at kappa (see `Coordinate`)."""

    @abstractmethod
    def mean_life(self, a: float, b: float, kappa: float) -> float:
        """Return the mean life; infinite where there is none."""

    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the log-likelihood and its derivatives in (a, b) at a list of points; what is pinned is put right."""
        return self.slices(kappa).evaluate(*self.placed(a, b, kappa))

    def placed(self, a: Array, b: Array, kappa: Array) -> tuple[Array, Array]:
        """Return (a, b) with what is pinned put right."""
        return np.zeros_like(a) if self.a_is_pinned else a, self.pinned_b(kappa) if self.b_is_pinned else b

    def put_right(self, point: Array) -> Array:
        """Return points (a, b, kappa), on the last axis, with what is pinned put right."""
        kappa = point[..., 2]
        a, b = self.placed(point[..., 0].ravel(), point[..., 1].ravel(), kappa.ravel())
        return np.stack([a.reshape(kappa.shape), b.reshape(kappa.shape), kappa], axis=-1)
