"""Panels: integrals of smooth functions up to any point, from values at Gauss-Legendre nodes of adjoining panels."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

NODES = 12
_PLACES, _WEIGHTS = np.polynomial.legendre.leggauss(NODES)
# From values at the nodes to the coefficients of 1, x, x^2 ... on -1 ... 1: costs three digits of sixteen.
_TO_POWERS = np.linalg.inv(np.vander(_PLACES, increasing=True))


@dataclass(frozen=True, eq=False)
class Panels:
    """Integrals of functions in rows, each over adjoining panels of one width; nothing lies beyond the panels.

    Attributes
    ----------
    start, width : ndarray, shape (rows,)
        Where the first panel of each row begins, and how wide each is.
    powers : ndarray, shape (NODES + 1, rows, panels)
        The integral from the beginning of the row, on each panel a polynomial in -1 ... 1; constant term first.
    total : ndarray, shape (rows,)
        The whole integral.
    """

    start: Array
    width: Array
    powers: Array
    total: Array

    @classmethod
    def through(cls, start: Array, width: Array, values: Array) -> Panels:
        """Build from values at `nodes_of`, shape (rows, panels, NODES)."""
        half = 0.5 * width[:, None]
        ends = np.cumsum(half * (values @ _WEIGHTS), axis=1)
        rising = half * np.moveaxis(values @ _TO_POWERS.T, -1, 0) / np.arange(1.0, NODES + 1.0)[:, None, None]
        at_left = np.tensordot((-1.0) ** np.arange(1, NODES + 1), rising, axes=1)
        before = np.concatenate([np.zeros((start.size, 1)), ends[:, :-1]], axis=1)
        return cls(start, width, np.concatenate([(before - at_left)[None], rising]), ends[:, -1])

    def up_to(self, points: Array) -> tuple[Array, Array]:
        """Return the integral up to points, shape (..., rows), and the function there."""
        count = self.powers.shape[2]
        unclipped = (points - self.start) / self.width
        along = np.clip(unclipped, 0.0, count)
        panel = np.minimum(along.astype(np.intp), count - 1)
        x = 2.0 * (along - panel) - 1.0
        powers = self.powers[:, np.arange(self.start.size), panel]
        integral, slope = powers[NODES] + np.zeros_like(x), np.zeros_like(x)
        for power in range(NODES - 1, -1, -1):
            slope = slope * x + integral
            integral = integral * x + powers[power]
        return integral, np.where(along == unclipped, 2.0 * slope / self.width, 0.0)


def nodes_of(start: Array, width: Array, count: int) -> Array:
    """Return the nodes of `count` panels in each row, shape (rows, count, NODES)."""
    middle = start[:, None] + width[:, None] * (np.arange(count) + 0.5)
    return np.asarray(middle[:, :, None] + 0.5 * width[:, None, None] * _PLACES)


def node_weights(width: float) -> Array:
    """Return the weights of the nodes of one panel, shape (NODES,)."""
    return np.asarray(0.5 * width * _WEIGHTS)
