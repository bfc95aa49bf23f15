"""ShapedEstimate: a joint maximum in (a, b, kappa) and the profile on which it stands."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.likelihood import Terms
from reliability_app.engine.shaped.jets import jet, likelihood_jet
from reliability_app.engine.shaped.measures import ShapedCoordinate, ShapedMeasure
from reliability_app.engine.shaped.profile import Peak, Profile
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class ShapedEstimate:
    """The maximum likelihood estimate of a family with a further parameter.

    Attributes
    ----------
    sheaf : Sheaf
        The family laid over the units.
    peak : Peak
        The highest maximum inside the range of kappa, or the highest point of a range that ends in a maximum.
    seen : Profile
        The profile over the whole range of kappa on which it was found.
    others : tuple of Peak
        Further maxima, highest first.
    is_edge : bool
        True where the likelihood is highest at the end of the range, with a finite value (the exponential family with
        a threshold): no error can be given from its curvature.
    """

    sheaf: Sheaf
    peak: Peak
    seen: Profile
    others: tuple[Peak, ...] = ()
    is_edge: bool = False

    @property
    def point(self) -> Array:
        """The point (a, b, kappa)."""
        return self.peak.point

    @property
    def log_likelihood(self) -> float:
        """Log-likelihood of the lives themselves."""
        return self.peak.value

    @cached_property
    def free_covariance(self) -> Array:
        """Inverse observed information of what is free of (a, b, kappa)."""
        # Taken anew: the climb ends with a step, and a flat maximum is not as curved a step away.
        here = likelihood_jet(self.sheaf, self.point[None]).of(self.sheaf.free)
        return np.asarray(np.linalg.inv(-here.hessian[0]))

    @cached_property
    def covariance(self) -> Array:
        """Inverse observed information of the named coordinates."""
        measures = [ShapedCoordinate(self.sheaf, place) for place in range(len(self.sheaf.coordinates))]
        slopes = np.concatenate([self.gradient(measure) for measure in measures])
        return np.asarray(slopes @ self.free_covariance @ slopes.T)

    def value(self, measure: ShapedMeasure) -> Array:
        """Return a measure at the estimate, shape (size,)."""
        return measure.terms(*(np.array([place]) for place in self.point)).value

    def gradient(self, measure: ShapedMeasure) -> Array:
        """Return the gradient of a measure in what is free, shape (size, free)."""
        return measure_jet(measure, np.tile(self.point, (measure.size, 1)), self.sheaf)[1]

    def errors(self, measure: ShapedMeasure) -> Array:
        """Return the standard errors of a measure by the delta method, shape (size,)."""
        slopes = self.gradient(measure)
        return np.asarray(np.sqrt(np.einsum("ij,jk,ik->i", slopes, self.free_covariance, slopes)))


def measure_jet(measure: ShapedMeasure, point: Array, sheaf: Sheaf) -> tuple[Array, Array, Array]:
    """Return values, gradients and Hessians in what is free of measures, each at its own point, shape (size, 3)."""

    def terms(a: Array, b: Array, kappa: Array) -> Terms:
        columns = np.broadcast_arrays(*measure.terms(a, b, kappa).columns())
        return Terms(*columns)

    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        found = jet(sheaf, terms, point).of(sheaf.free)
    return found.value, found.gradient, found.hessian
