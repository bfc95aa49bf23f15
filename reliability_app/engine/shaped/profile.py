"""The profile of the log-likelihood over kappa, and the climb from it to the joint maxima."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import minimize_scalar

from reliability_app.engine.likelihood import Terms
from reliability_app.engine.newton import DECREMENT_REACHED, maximise
from reliability_app.engine.shaped.jets import Jet, likelihood_jet
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]

_MOST_STEPS, _MOST_HALVINGS = 60, 40
# Halvings in all: where a climb needs more, what it climbs has a corner, and no smooth maximum is near.
_MOST_HALVINGS_IN_ALL = 300
_ROUNDING = 1e-12
_CREST = 1e-11
_PROFILE_TOLERANCE = 1e-7
_MOST_EVALUATIONS = 300


@dataclass(frozen=True, eq=False)
class Profile:
    """The highest points of the problems at some values of kappa, each array of shape (points,).

    `value` is minus infinity where none was reached. `curvature` holds minus the second derivatives d_aa, d_ab, d_bb.
    """

    kappa: Array
    a: Array
    b: Array
    value: Array
    curvature: tuple[Array, Array, Array]

    @property
    def points(self) -> Array:
        """Return (a, b, kappa), shape (points, 3)."""
        return np.stack([self.a, self.b, self.kappa], axis=-1)

    def above(self, target: float) -> Profile:
        """Return the points whose log-likelihood is above `target`."""
        chosen = self.value > target
        aa, ab, bb = (column[chosen] for column in self.curvature)
        return Profile(self.kappa[chosen], self.a[chosen], self.b[chosen], self.value[chosen], (aa, ab, bb))


@dataclass(frozen=True, eq=False)
class Peak:
    """A joint maximum: the point (a, b, kappa), the log-likelihood there, how it was reached."""

    point: Array
    value: float
    gradient_norm: float
    decrement: float
    steps: int


def profile(sheaf: Sheaf, kappa: Array, start: tuple[Array, Array] | None = None) -> Profile:
    """Return the profile at some values of kappa, shape (points,), climbing from starts (a, b) if given."""
    slices = sheaf.slices(kappa)
    a, b = sheaf.starts(kappa) if start is None else sheaf.placed(*start, kappa)
    tried = 0

    def evaluate(rows: NDArray[np.intp], at_a: Array, at_b: Array) -> Terms:
        nonlocal tried
        tried += 1
        if tried > _MOST_EVALUATIONS:
            # What has not been reached by now is given up: nothing is accepted any more.
            return Terms(*np.full((6, rows.size), np.nan))
        part = slices if rows.size == kappa.size else slices.rows(rows)
        return part.evaluate(at_a, at_b)

    failures = np.full(kappa.shape, sheaf.failures)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        top = maximise(evaluate, a, b, failures=failures, b_is_fixed=sheaf.b_is_pinned)
    value = np.where(top.converged & np.isfinite(top.terms.value), top.terms.value, -np.inf)
    a, b = sheaf.placed(top.a, top.b, kappa)
    return Profile(kappa, a, b, value, (-top.terms.d_aa, -top.terms.d_ab, -top.terms.d_bb))


def peaks_of(sheaf: Sheaf, seen: Profile) -> tuple[Peak, ...]:
    """Return the joint maxima that the profile shows inside its range, highest first."""
    climbed = (_climb_within(sheaf, seen, at) for at in crests_of(seen))
    return tuple(sorted((peak for peak in climbed if peak is not None), key=lambda peak: -peak.value))


def crests_of(seen: Profile) -> list[int]:
    """Return the places inside the range where the profile is higher than beside, by more than rounding."""
    value = seen.value
    inner = np.arange(1, value.size - 1)
    higher = inner[(value[inner] >= value[inner - 1]) & (value[inner] > value[inner + 1])]
    return [at for at in higher.tolist() if _stands_out(value, at)]


def _stands_out(value: Array, at: int) -> bool:
    """True where the profile falls to both sides of a crest by more than rounding before it rises above it."""
    least = _CREST * max(1.0, abs(float(value[at])))
    for side in (value[at::-1], value[at:]):
        above = np.flatnonzero(side > value[at])
        reach = side[: above[0]] if above.size else side
        if value[at] - reach.min() <= least:
            return False
    return True


def _climb_within(sheaf: Sheaf, seen: Profile, at: int) -> Peak | None:
    """Climb from a crest of the profile; where that leads away, search the profile between its neighbours first."""
    low, high = float(seen.kappa[at - 1]), float(seen.kappa[at + 1])
    peak = climb(sheaf, seen.points[at])
    if peak is not None and low <= peak.point[2] <= high:
        return peak
    start = seen.a[at : at + 1], seen.b[at : at + 1]

    def loss(kappa: float) -> float:
        return -float(profile(sheaf, np.array([kappa]), start).value[0])

    best = minimize_scalar(loss, bounds=(low, high), method="bounded", options={"xatol": _PROFILE_TOLERANCE})
    peak = climb(sheaf, profile(sheaf, np.array([best.x]), start).points[0])
    return peak if peak is not None and low <= peak.point[2] <= high else None


def climb(sheaf: Sheaf, start: Array) -> Peak | None:
    """Climb from the point (a, b, kappa) to a joint maximum by damped Newton steps, or return None."""
    free = sheaf.free
    enough = DECREMENT_REACHED * max(1.0, sheaf.failures)
    point = start.copy()
    here = likelihood_jet(sheaf, point[None])
    halvings = 0
    for steps in range(_MOST_STEPS):
        step, decrement, is_peak = _newton_step(here.of(free))
        if not np.isfinite(decrement):
            return None
        if decrement <= enough:
            point[list(free)] += step
            norm = float(np.linalg.norm(here.of(free).gradient))
            value = float(here.value[0]) + 0.5 * decrement
            point = sheaf.put_right(point)
            return Peak(point, value, norm, decrement, steps) if is_peak else None
        moved = _moved(sheaf, point, step, here)
        if moved is None:
            return None
        point, here, halved = moved
        halvings += halved
        if halvings > _MOST_HALVINGS_IN_ALL:
            return None
    return None


def _newton_step(here: Jet) -> tuple[Array, float, bool]:
    """Return the step, its decrement and whether the log-likelihood bends down in every direction."""
    if not (np.isfinite(here.hessian).all() and np.isfinite(here.gradient).all()):
        return np.zeros(0), np.nan, False
    values, vectors = np.linalg.eigh(-here.hessian[0])
    # Where it bends up, the same step the other way round climbs too.
    size = np.maximum(np.abs(values), 1e-12 * np.abs(values).max())
    step = vectors @ ((vectors.T @ here.gradient[0]) / size)
    return step, float(step @ here.gradient[0]), bool((values > 0).all())


def _moved(sheaf: Sheaf, point: Array, step: Array, here: Jet) -> tuple[Array, Jet, int] | None:
    """Go the longest of 1, 1/2, 1/4 ... of the step that does not lose, and tell how often it was halved."""
    length, floor = 1.0, float(here.value[0])
    floor -= _ROUNDING * max(1.0, abs(floor))
    for halved in range(_MOST_HALVINGS):
        tried = point.copy()
        tried[list(sheaf.free)] += length * step
        if tried[1] > 0:
            with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
                there = likelihood_jet(sheaf, tried[None])
            if there.value[0] >= floor:
                return tried, there, halved
        length *= 0.5
    return None
