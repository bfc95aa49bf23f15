"""Draws up a set's picture: plotting positions, running units, curves with bands, Kaplan-Meier steps."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import Curve, Fit, LifeData, kaplan_meier, plotting_positions
from reliability_app.engine.fit_curves import hazard_curve, probability_curves, step_curve
from reliability_app.session.document import Basis, HazardAsk
from reliability_app.session.taking_readings import bound_side
from reliability_app.session.unit_table import ReadUnits

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

_CURVE_POINTS = 140
# Where age 0 is in view the curves are to reach it, as far as the eye can tell.
_NEAREST_TO_ZERO, _POINTS_TOWARDS_ZERO = 1e-3, 20
# Curves run this far beyond the units, so that moving the view a little does not uncover their ends.
_BEYOND = 30.0
_LEAST_SHARE, _MOST_SHARE = 1e-4, 1.0 - 1e-6


@dataclass(frozen=True, eq=False)
class Points:
    """Marks of the failures (one an age) and of the running units (one an age)."""

    age: Floats
    fraction: Floats
    quantity: Integers
    rows: tuple[tuple[int, ...], ...]
    running_age: Floats
    running_quantity: Integers


@dataclass(frozen=True, eq=False)
class Curves:
    """The three curves of a fit over age."""

    failure: Curve
    hazard: Curve
    survival: Curve


NO_POINTS = Points(np.empty(0), np.empty(0), np.empty(0, np.int64), (), np.empty(0), np.empty(0, np.int64))


def draw_points(data: LifeData, units: ReadUnits) -> Points:
    """Return the marks of the units; raises BoundUnavailable while some are found failed."""
    positions = plotting_positions(data)
    failed, running = data.is_failed, data.is_running
    place = np.searchsorted(positions.age, data.lower[failed])
    rows: list[list[int]] = [[] for _ in positions.age]
    for at, record in zip(place.tolist(), np.flatnonzero(failed).tolist(), strict=True):
        rows[at].append(units.rows[record])
    running_age, running_quantity = _summed(data.lower[running], data.quantity[running])
    return Points(
        age=positions.age,
        fraction=positions.fraction,
        quantity=_summed(data.lower[failed], data.quantity[failed])[1],
        rows=tuple(tuple(listed) for listed in rows),
        running_age=running_age,
        running_quantity=running_quantity,
    )


def draw_steps(data: LifeData) -> Curve:
    """Return the Kaplan-Meier steps up to the last observation."""
    return step_curve(kaplan_meier(data), data.last_observation)


def draw_curves(fitted: Fit, basis: Basis, *, kind: str) -> Curves:
    """Return the curves of a fit that converged, with bands of a kind on the sides that go with the basis.

    A lower bound of the lives is an upper bound of the failure probability.
    """
    ages = _ages(fitted)
    confidence = basis.confidence
    against = bound_side(HazardAsk(0.0), basis.side)
    failure, survival = probability_curves(fitted, ages, confidence=confidence, side=against, kind=kind)
    hazard = hazard_curve(fitted, ages, confidence=confidence, side=against, kind=kind)
    return Curves(failure=failure, hazard=hazard, survival=survival)


def _ages(fitted: Fit) -> Floats:
    data = fitted.data
    first = data.first_failure or data.last_observation
    ends = np.asarray(fitted.life(np.array([_LEAST_SHARE, _MOST_SHARE])))
    low = max(min(float(ends[0]), first), first / _BEYOND**2)
    high = min(max(float(ends[1]), data.last_observation), data.last_observation * _BEYOND)
    low, high = low / 1.5, high * 1.5
    towards_zero = np.geomspace(low * _NEAREST_TO_ZERO, low, _POINTS_TOWARDS_ZERO, endpoint=False)
    return np.concatenate([towards_zero, np.geomspace(low, high, _CURVE_POINTS)])


def _summed(age: Floats, quantity: Floats) -> tuple[Floats, Integers]:
    ages, where = np.unique(age, return_inverse=True)
    return ages, np.bincount(where, weights=quantity, minlength=ages.size).astype(np.int64)
