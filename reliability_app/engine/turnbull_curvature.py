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
_LEAST = 1.0
# Records over at most so many held cells go into the preconditioner, which may hold at most so many numbers.
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

    def newton_direction(self, slope: Array, records: Records, increment: Array, *, precision: float) -> Array:
        """Return the step in the increments to the top of the quadratic that has this slope and curvature.

        By conjugate gradients, preconditioned with what lies near the diagonal: a turn costs a few passes over the
        records, whereas the matrix of ten thousand cells would fill a gigabyte.
        """
        least = np.maximum(increment, _LEAST / np.maximum(records.passing, 1.0))
        steady = Curvature(self.near + _PRETENDED / least**2, self.start, self.stop, self.far)
        rise = steady._solve(slope - np.append(slope[1:], 0.0), precision)
        return np.diff(rise, prepend=0.0)

    def _solve(self, right: Array, precision: float) -> Array:
        factor = self._factor()
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
        return potential

    def _factor(self) -> Array:
        """Return the Cholesky factor of the band around the diagonal, or of the diagonal itself where rounding forbids."""
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
