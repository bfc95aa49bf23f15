"""Maximises the likelihood of increments of cumulative hazard over cells, to the last digits and with a certificate.

With h_k = -ln(1 - share of the units at cell k that fail in it) a unit that failed in the cells a..b, watched from cell
e on, contributes ln(1 - exp(-(h_a + ... + h_b))) - (h_e + ... + h_(a-1)), and one still running the last sum only. Each
term is concave in h, with late entry as without, so that any point that meets the Kuhn-Tucker conditions is a maximum:

    slope of cell k = sum over records that contain it of weight/(exp(x) - 1) - units passing it
    slope = 0 where h_k > 0, slope <= 0 where h_k = 0

Cells of no mass are left out: the search starts from a fewest set of cells that serves every record, lets in between
any two the cell that promises most, steps to the top of the quadratic over those and drops what comes out at zero (the
constrained Newton method of Wang 2007, J. R. Statist. Soc. B 69, 185-198, cited from memory; here on the concave scale
of the hazards, which need not sum to one).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.turnbull_cells import Records
from reliability_app.engine.turnbull_curvature import Curvature

Array = NDArray[np.float64]
Integers = NDArray[np.intp]
Mask = NDArray[np.bool_]

_MOST_STEPS = 400
_MOST_HALVINGS = 60
# A cell whose increment would come out below this is left empty: less than a tenth of a unit in 10^10.
_LEAST_INCREMENT = 1e-11
# Squared length of the last Newton step in its own metric; what it leaves to be done is of the order of this itself.
_CLOSE_ENOUGH = 1e-12
# What a cell that is let in holds at first, in units.
_SEED = 1e-6
# How exactly the equations of a step are solved: while cells come in, and at the end.
_ROUGHLY, _FINELY = 1e-2, 1e-6
_ENOUGH_GAIN = 1e-4
# What rounding can do to a sum of logarithms, as a share of the sum of their sizes.
_ROUNDING = 1e-13


@dataclass(frozen=True, eq=False)
class Increments:
    """The maximum and how it was reached.

    Attributes
    ----------
    increment : ndarray, shape (cells,)
        Increment of the cumulative hazard; infinite where all that reach the cell fail in it.
    log_likelihood : float
    excess : float
        Largest departure from the Kuhn-Tucker conditions, as a share of the units passing the cell: 0 at the maximum.
    steps : int
    converged : bool
    records : Records
        The records without those that an infinite increment has settled.
    """

    increment: Array
    log_likelihood: float
    excess: float
    steps: int
    converged: bool
    records: Records


def maximise(records: Records) -> Increments:
    """Return the increments of greatest likelihood."""
    endless, open_records = _settle_endless(records)
    increment = np.where(open_records.here > 0, _alone(open_records), 0.0)
    _serve_all(open_records, increment)
    steps, converged = 0, open_records.total == 0
    while not converged and steps < _MOST_STEPS:
        steps += 1
        converged = _improve(open_records, increment)
    excess = _excess(open_records, increment) if open_records.total else 0.0
    value = _value(open_records, increment)
    increment[endless] = np.inf
    return Increments(increment, value, excess, steps, converged, open_records)


def _settle_endless(records: Records) -> tuple[Mask, Records]:
    """Give an infinite increment to cells that nobody is known to have passed, and take out the records it serves.

    Each record takes the latest such cell that it contains, so that mass stays where units can still be.
    """
    unpassed = np.flatnonzero(records.passing < 0.5)
    endless = np.zeros(records.here.size, dtype=np.bool_)
    if not unpassed.size:
        return endless, records
    at = np.searchsorted(unpassed, records.last, side="right") - 1
    is_served = (at >= 0) & (unpassed[np.maximum(at, 0)] >= records.first)
    endless[unpassed[at[is_served]]] = True
    here = records.here.copy()
    alone = unpassed[here[unpassed] > 0]
    endless[alone], here[alone] = True, 0.0
    return endless, records.keeping(~is_served, here)


def _alone(records: Records) -> Array:
    """Return the increments if every cell held only the units that failed in this very cell; exact for exact lives."""
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.log1p(records.here / records.passing)


def _serve_all(records: Records, increment: Array) -> None:
    """Give an increment to a fewest set of further cells such that every record contains one."""
    order = np.argsort(records.last, kind="stable")
    total = np.concatenate([[0], np.cumsum(increment > 0)])
    is_served = total[records.last + 1] > total[records.first]
    newest = -1
    weights = dict[int, float]()
    for at in order[~is_served[order]].tolist():
        if records.first[at] > newest:
            newest = int(records.last[at])
        weights[newest] = weights.get(newest, 0.0) + float(records.weight[at])
    for cell, weight in weights.items():
        increment[cell] = weight / (records.passing[cell] + 0.5 * weight)


def _improve(records: Records, increment: Array) -> bool:
    """Let in the cells that promise most, take one Newton step, drop the empty; True once it was the last."""
    entering = _promising(records, increment)
    increment[entering] = _SEED / records.passing[entering]
    held = np.flatnonzero(increment > 0)
    part = records.among(held)
    before = increment[held]
    slope = _slope(part, before)
    precision = _ROUGHLY if entering.size else _FINELY
    step, is_newton = Curvature.of(part, before).step_to_top(slope, before, part.passing, precision=precision)
    increment[held] = _searched(part, before, step, slope)
    return bool(not entering.size and is_newton and float(slope @ step) < _CLOSE_ENOUGH)


def _promising(records: Records, increment: Array) -> Integers:
    """Return, between any two cells that hold something, the empty cell whose slope is greatest, if worth it."""
    x = records.sums(increment)
    with np.errstate(over="ignore"):
        lift = records.weight / np.expm1(x)
        bend = records.weight * np.exp(-x) / np.expm1(-x) ** 2
    raised = records.spread(lift)
    slope = raised - records.passing
    rounding = 16.0 * np.finfo(np.float64).eps * records.passing
    is_empty = increment == 0
    worth = is_empty & (records.passing > 0.5) & (slope > rounding + _LEAST_INCREMENT * records.spread(bend))
    candidates = np.flatnonzero(worth)
    if not candidates.size:
        return candidates
    stretch = np.cumsum(~is_empty)[candidates]
    best = np.lexsort((candidates, -slope[candidates], stretch))
    is_first = np.concatenate([[True], np.diff(stretch[best]) > 0])
    return np.asarray(candidates[best][is_first])


def _searched(records: Records, before: Array, step: Array, slope: Array) -> Array:
    """Return the first of before + step, half of it, ... that gains enough, cut at zero."""
    level = _value(records, before)
    allowance = _ROUNDING * (1.0 + records.total + abs(level) + float(records.passing @ before))
    for halvings in range(_MOST_HALVINGS):
        after = np.maximum(before + 0.5**halvings * step, 0.0)
        promised = max(float(slope @ (after - before)), 0.0)
        if _value(records, after) - level >= _ENOUGH_GAIN * promised - allowance:
            return after
    return before


def _value(records: Records, increment: Array) -> float:
    known = records.here > 0
    with np.errstate(divide="ignore"):
        single = records.here[known] @ np.log(-np.expm1(-increment[known]))
        joint = records.weight @ np.log(-np.expm1(-records.sums(increment)))
    return float(single + joint - records.passing @ increment)


def _slope(records: Records, increment: Array) -> Array:
    with np.errstate(over="ignore", divide="ignore", invalid="ignore"):
        single = np.where(records.here > 0, records.here / np.expm1(increment), 0.0)
    return np.asarray(single + records.raised(increment) - records.passing)


def _excess(records: Records, increment: Array) -> float:
    """Return the largest violation of the Kuhn-Tucker conditions, as a share of the units passing."""
    is_open = records.passing > 0.5
    slope = _slope(records, increment)[is_open] / records.passing[is_open]
    return float(np.where(increment[is_open] > 0, np.abs(slope), np.maximum(slope, 0.0)).max(initial=0.0))
