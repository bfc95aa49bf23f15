"""When units leave a test still running: the product-limit estimate of it, and draws from that beyond a failure."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_data import LifeData

Array = NDArray[np.float64]


def removal_steps(data: LifeData) -> tuple[Array, Array]:
    """Return the product-limit estimate of the age at which units leave the test still running.

    Failures, or the looks at which they are found, end the watch on a unit before it leaves; at equal ages they come
    first. A unit that came late counts from its entry.

    Returns
    -------
    age, stay : ndarray, shape (ages,)
        Ages at which units left, rising, and the share of the units there that stay on.
    """
    running = data.is_running
    age, where = np.unique(data.lower[running], return_inverse=True)
    left = np.bincount(where, weights=data.quantity[running], minlength=age.size).astype(np.float64)
    failed_beyond = _counted(data.upper[~running], data.quantity[~running], age, side="right")
    running_from = _counted(data.lower[running], data.quantity[running], age, side="left")
    late = data.entered > 0
    not_yet = _counted(data.entered[late], data.quantity[late], age, side="left")
    return age, np.asarray(1.0 - left / (running_from + failed_beyond - not_yet))


def _counted(ages: Array, weight: Array, at: Array, *, side: str) -> Array:
    """Return the units with an age from `at` on (side "left"), or beyond it ("right")."""
    order = np.argsort(ages, kind="stable")
    below = np.concatenate([[0.0], np.cumsum(weight[order])])
    places = np.searchsorted(ages[order], at, side="left" if side == "left" else "right")
    return np.asarray(below[-1] - below[places])


def drawn_ends(known_end: Array, drawn_beyond: Array, steps: tuple[Array, Array], uniform: Array) -> Array:
    """Return places at leaving, of the shape (batch, units) of `uniform`: known, or drawn beyond a unit's failure.

    Infinite where the estimate of leaving does not come down far enough: the unit then runs to failure.
    """
    age, stay = steps
    ends = np.broadcast_to(known_end, uniform.shape).copy()
    for unit in np.flatnonzero(np.isnan(known_end)).tolist():
        start = int(np.searchsorted(age, drawn_beyond[unit], side="left"))
        # The age drawn is that at which the share still under test, of those at the failure, falls to u or below. The
        # product starts there: with late entry it may come down to 0 early, among the few units first watched.
        share = np.cumprod(stay[start:])
        place = np.searchsorted(-share, -uniform[:, unit], side="left") + start
        ages = age[np.minimum(place, age.size - 1)]
        ends[:, unit] = np.where(place >= age.size, np.inf, ages)
    return ends
