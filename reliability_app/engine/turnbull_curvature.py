"""The curvature of the likelihood of hazard increments: a network of conductances, solved and inverted."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.linalg.lapack import dpttrf, dpttrs

from reliability_app.engine.turnbull_cells import Records

Array = NDArray[np.float64]
Integers = NDArray[np.intp]

_MOST_TURNS = 2_000
# A pretended share of a unit in every cell, which keeps the equations solvable where the increments of some cells
# can be traded for each other.
_PRETENDED = 1e-9
_LEAST = 1e-3


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

        By conjugate gradients, preconditioned with the tridiagonal part: the work of one turn is a few passes over
        the records, whereas the matrix of ten thousand cells would fill a gigabyte.
        """
        least = np.maximum(increment, _LEAST / np.maximum(records.passing, 1.0))
        steady = Curvature(self.near + _PRETENDED / least**2, self.start, self.stop, self.far)
        rise = steady._solve(slope - np.append(slope[1:], 0.0), precision)
        return np.diff(rise, prepend=0.0)

    def _solve(self, right: Array, precision: float) -> Array:
        factor = dpttrf(*self._tridiagonal())
        potential, rest = np.zeros_like(right), right.copy()
        search = dpttrs(factor[0], factor[1], rest)[0]
        length = first_length = float(rest @ search)
        for _ in range(_MOST_TURNS):
            if length <= precision**2 * first_length:
                break
            pulled = self._times(search)
            stride = length / float(search @ pulled)
            potential += stride * search
            rest -= stride * pulled
            smoothed = dpttrs(factor[0], factor[1], rest)[0]
            next_length = float(rest @ smoothed)
            search = smoothed + next_length / length * search
            length = next_length
        return potential

    def _tridiagonal(self) -> tuple[Array, Array]:
        diagonal = self.near.copy()
        diagonal[:-1] += self.near[1:]
        touched = np.bincount(self.start, self.far, self.size + 1) + np.bincount(self.stop, self.far, self.size + 1)
        beside = -self.near[1:] if self.size > 1 else np.zeros(1)
        return diagonal + touched[1:], beside

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
