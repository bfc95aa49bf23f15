"""The curvature of the likelihood of hazard increments: a network of conductances, solved and inverted."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.linalg.lapack import dpbtrf, dpbtrs

from reliability_app.engine.turnbull_cells import Records

Array = NDArray[np.float64]
Integers = NDArray[np.intp]

_MOST_TURNS = 2_000
# A pretended share of a unit in every cell, which keeps the equations solvable where the increments of some cells
# can be traded for each other.
_PRETENDED = 1e-9
_MOST_ROUNDS = 12
# Records over at most so many held cells go into the preconditioner, which may hold at most so many numbers. In wider
# bands the library shares tiny pieces of work among threads, which wait for each other on a busy machine.
_WIDEST_BAND = 16
_MOST_IN_BAND = 4_000_000


@dataclass(frozen=True, eq=False)
class Curvature:
    """Minus the second derivatives in the cumulative hazard H_k = h_1 + ... + h_k after each cell, H_0 = 0.

    Each record is a conductance w/(4 sinh(x/2)^2) between the nodes before its first and after its last cell.

    Attributes
    ----------
    near : ndarray, shape (cells,)
        Conductances across single cells.
    start, stop, far : ndarray, shape (records,)
        Nodes at the ends of the conductances across several cells, and those conductances.
    """

    near: Array
    start: Integers
    stop: Integers
    far: Array

    @classmethod
    def of(cls, records: Records, increment: Array) -> Curvature:
        """Return the curvature at increments above zero."""
        near = np.where(records.here > 0, records.here * _bend(increment), 0.0)
        return cls(near, records.first, records.last + 1, records.weight * _bend(records.sums(increment)))

    @property
    def size(self) -> int:
        """Cells, and nodes beside the grounded one."""
        return int(self.near.size)

    def step_to_top(self, slope: Array, increment: Array, passing: Array, *, precision: float) -> tuple[Array, bool]:
        """Return the step to the top of the quadratic with this slope and curvature, increments held at 0 or above.

        Cells that the free top would push below zero are set to zero and the rest solved anew, some rounds long.
        Where the outcome does not lead upward the free step is returned, which does until it is cut at zero.

        Returns
        -------
        step : ndarray, shape (cells,)
        is_newton : bool
            True where the free step keeps all cells above zero.
        """
        least = np.maximum(increment, 1.0 / np.maximum(passing, 1.0))
        steady = Curvature(self.near + _PRETENDED / least**2, self.start, self.stop, self.far)
        newton = steady._solve(slope, precision)
        is_free = increment + newton >= 0
        if is_free.all():
            return newton, True
        step = newton
        for _ in range(_MOST_ROUNDS):
            free = np.flatnonzero(is_free)
            if not free.size:
                break
            step = np.where(is_free, 0.0, -increment)
            step[free] = steady._among(free)._solve((slope - steady._pull(step))[free], precision)
            is_below = increment + step < 0
            if not is_below.any():
                break
            is_free &= ~is_below
        step = np.maximum(step, -increment)
        return (step if float(slope @ step) > 0 else newton), False

    def _among(self, cells: Integers) -> Curvature:
        """Return the curvature in some of the increments, the others held."""
        start, stop = np.searchsorted(cells, self.start), np.searchsorted(cells, self.stop)
        is_left = stop > start
        return Curvature(self.near[cells], start[is_left], stop[is_left], self.far[is_left])

    def _pull(self, step: Array) -> Array:
        """Return how much a step in the increments takes from the slope."""
        return np.asarray(np.cumsum(self._times(np.cumsum(step))[::-1])[::-1])

    def _solve(self, slope: Array, precision: float) -> Array:
        """Return the step in the increments to the free top.

        By conjugate gradients, preconditioned with what lies near the diagonal: a turn costs a few passes over the
        records, whereas the matrix of ten thousand cells would fill a gigabyte.
        """
        right, factor = slope - np.append(slope[1:], 0.0), self._factor()
        potential, rest = np.zeros_like(right), right.copy()
        search = dpbtrs(factor, rest)[0]
        length = first_length = float(rest @ search)
        for _ in range(_MOST_TURNS):
            if length <= precision**2 * first_length:
                break
            pulled = self._times(search)
            stride = length / float(search @ pulled)
            potential += stride * search
            rest -= stride * pulled
            smoothed = dpbtrs(factor, rest)[0]
            next_length = float(rest @ smoothed)
            search = smoothed + next_length / length * search
            length = next_length
        return np.diff(potential, prepend=0.0)

    def _factor(self) -> Array:
        """Return the Cholesky factor of the band around the diagonal, or of the diagonal where rounding forbids it."""
        span = self.stop - self.start
        width = int(min(span.max(initial=1), _WIDEST_BAND, max(1, _MOST_IN_BAND // self.size), self.size - 1))
        band = np.zeros((width + 1, self.size))
        band[width] = self.near + np.append(self.near[1:], 0.0)
        band[width] += np.bincount(self.start, self.far, self.size + 1)[1:]
        band[width] += np.bincount(self.stop, self.far, self.size + 1)[1:]
        factor, trouble = dpbtrf(self._with_neighbours(band, span, width))
        return np.asarray(np.sqrt(band[width:]) if trouble else factor)

    def _with_neighbours(self, band: Array, span: Integers, width: int) -> Array:
        full = band.copy()
        if width:
            full[width - 1, 1:] -= self.near[1:]
        inside = (span <= width) & (self.start > 0)
        place = (width - span[inside]) * self.size + self.stop[inside] - 1
        return full - np.bincount(place, self.far[inside], full.size).reshape(full.shape)

    def _times(self, potential: Array) -> Array:
        nodes = np.concatenate([[0.0], potential])
        along = self.near * np.diff(nodes)
        current = along - np.append(along[1:], 0.0)
        across = self.far * (nodes[self.stop] - nodes[self.start])
        flow = np.bincount(self.stop, across, self.size + 1) - np.bincount(self.start, across, self.size + 1)
        return np.asarray(current + flow[1:])


def _bend(x: Array) -> Array:
    """Return minus the second derivative of ln(1 - exp(-x)): 1/(4 sinh(x/2)^2)."""
    with np.errstate(over="ignore", divide="ignore", invalid="ignore"):
        return np.asarray(np.exp(-x) / np.expm1(-x) ** 2)
