"""Derivatives in (a, b, kappa) together: exact in a and b, by differences of sixth order in kappa.

The differences are taken of the value and of its exact derivatives in a and b, over a step (`Sheaf.step`) at which
truncation and rounding are both near 1e-12.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.likelihood import Terms
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]
# terms(a, b, kappa): values and derivatives in (a, b) at points of shape (stencil, m), of m functions or one.
PointTerms = Callable[[Array, Array, Array], Terms]

_OFFSETS = np.arange(-3.0, 4.0)
_FIRST = np.array([-1 / 60, 3 / 20, -3 / 4, 0.0, 3 / 4, -3 / 20, 1 / 60])
_SECOND = np.array([1 / 90, -3 / 20, 3 / 2, -49 / 18, 3 / 2, -3 / 20, 1 / 90])
_MIDDLE = 3


class Jet(NamedTuple):
    """Values, shape (m,), gradients, shape (m, 3), and Hessians, shape (m, 3, 3), in (a, b, kappa)."""

    value: Array
    gradient: Array
    hessian: Array

    def of(self, free: tuple[int, ...]) -> Jet:
        """Return the derivatives in the chosen coordinates only."""
        chosen = list(free)
        return Jet(self.value, self.gradient[:, chosen], self.hessian[:, chosen][:, :, chosen])


def jet(sheaf: Sheaf, terms: PointTerms, point: Array) -> Jet:
    """Return value, gradient and Hessian of `terms` at points of shape (m, 3).

    `terms(a, b, kappa)` is called once with arrays of shape (7, m) in which what is pinned is put right.
    """
    a, b, kappa = (np.tile(column, (_OFFSETS.size, 1)) for column in point.T)
    step = sheaf.step(point[:, 2])
    kappa = kappa + _OFFSETS[:, None] * step
    a, b = (values.reshape(kappa.shape) for values in sheaf.placed(a.ravel(), b.ravel(), kappa.ravel()))
    columns = terms(a, b, kappa)
    value, d_a, d_b, d_aa, d_ab, d_bb = columns.columns()
    first, second = _FIRST / step[:, None], _SECOND / step[:, None] ** 2
    d_kappa, d_a_kappa, d_b_kappa = (np.einsum("mj,jm->m", first, values) for values in (value, d_a, d_b))
    at = _MIDDLE
    d_kappa_kappa = np.einsum("mj,jm->m", second, value - value[at])
    gradient = np.stack([d_a[at], d_b[at], d_kappa], axis=-1)
    rows = (
        (d_aa[at], d_ab[at], d_a_kappa),
        (d_ab[at], d_bb[at], d_b_kappa),
        (d_a_kappa, d_b_kappa, d_kappa_kappa),
    )
    return Jet(value[at], gradient, np.stack([np.stack(row, axis=-1) for row in rows], axis=-2))


def likelihood_jet(sheaf: Sheaf, point: Array) -> Jet:
    """Return the log-likelihood with its derivatives at points of shape (m, 3)."""

    def terms(a: Array, b: Array, kappa: Array) -> Terms:
        with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
            flat = sheaf.slices(kappa.ravel()).evaluate(a.ravel(), b.ravel())
        return Terms(*(column.reshape(kappa.shape) for column in flat.columns()))

    return jet(sheaf, terms, point)
