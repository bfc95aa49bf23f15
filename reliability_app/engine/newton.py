"""The maximiser: damped Newton over a batch of two-parameter log-likelihoods, and the honest record of how it ended."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.likelihood import Terms

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
Evaluate = Callable[[NDArray[np.intp], Array, Array], Terms]

MOST_STEPS = 100
# Half the Newton decrement is the log-likelihood still to be gained. Per failure, because the curvature found at this
# distance from the maximum is off by some square root of it.
DECREMENT_REACHED = 1e-14
_MOST_HALVINGS = 60
_NEVER_NEARER_TO_ZERO = 0.1
_ROUNDING = 1e-13


@dataclass(frozen=True, eq=False)
class Maximum:
    """How the maximisation ended, each array of shape (batch,).

    Attributes
    ----------
    a, b : ndarray
        Where it ended.
    terms : Terms
        Log-likelihood and derivatives there.
    converged : ndarray of bool
    decrement : ndarray
        Newton decrement at the end: twice the log-likelihood that a quadratic would still gain.
    gradient_norm : ndarray
    steps : ndarray of int
    """

    a: Array
    b: Array
    terms: Terms
    converged: Mask
    decrement: Array
    gradient_norm: Array
    steps: NDArray[np.intp]


def maximise(
    evaluate: Evaluate,
    a: Array,
    b: Array,
    *,
    failures: Array,
    b_is_fixed: bool = False,
    most_steps: int = MOST_STEPS,
) -> Maximum:
    """Climb from the starts (a, b) to the maxima of a batch of log-likelihoods.

    Parameters
    ----------
    evaluate : callable
        evaluate(rows, a, b) returns the terms of the samples `rows` at the points (a, b).
    a, b : ndarray, shape (batch,)
        Starts with a finite log-likelihood; b > 0.
    failures : ndarray, shape (batch,)
        Failed units of each sample.
    b_is_fixed : bool
        Keep b as it is (a family with a fixed sigma).
    most_steps : int
        After so many a sample counts as not converged.
    """
    a, b = a.copy(), b.copy()
    every = np.arange(a.size)
    columns = [column.copy() for column in evaluate(every, a, b).columns()]
    steps = np.zeros(a.size, dtype=np.intp)
    decrement = np.full(a.size, np.inf)
    enough = DECREMENT_REACHED * np.maximum(1.0, failures)
    active = every
    for _ in range(most_steps):
        terms = Terms(*(column[active] for column in columns))
        step_a, step_b = newton_step(terms, b_is_fixed=b_is_fixed)
        decrement[active] = step_a * terms.d_a + step_b * terms.d_b
        moving = decrement[active] > enough[active]
        active, step_a, step_b = active[moving], step_a[moving], step_b[moving]
        if not active.size:
            break
        moved = _step(evaluate, active, (a, b), (step_a, step_b), columns)
        steps[active] += 1
        active = active[moved]
    final = Terms(*columns)
    last_a, last_b = newton_step(final, b_is_fixed=b_is_fixed)
    near = decrement <= enough
    # The last step costs no evaluation: what it gains is half the decrement, to some 1e-15 of itself.
    a, b = np.where(near, a + last_a, a), np.where(near, b + last_b, b)
    final = replace(final, value=final.value + np.where(near, 0.5 * decrement, 0.0))
    norm = np.hypot(final.d_a, 0.0 if b_is_fixed else final.d_b)
    reached = np.isfinite(final.value) & (decrement <= np.maximum(enough, DECREMENT_REACHED * np.abs(final.value)))
    return Maximum(a, b, final, reached & _is_peak(final, b_is_fixed=b_is_fixed), decrement, norm, steps)


def newton_step(terms: Terms, *, b_is_fixed: bool) -> tuple[Array, Array]:
    """Return the Newton step, with a ridge where the Hessian is not negative definite (late entry)."""
    if b_is_fixed:
        curvature = np.where(terms.d_aa < 0, -terms.d_aa, np.abs(terms.d_aa) + 1.0)
        return terms.d_a / curvature, np.zeros_like(terms.d_a)
    p, q, r = -terms.d_aa, -terms.d_ab, -terms.d_bb
    determinant = p * r - q * q
    bent = ~((determinant > 0) & (p > 0))
    if bent.any():
        middle, half = 0.5 * (p + r), np.hypot(0.5 * (p - r), q)
        ridge = np.abs(middle - half) + 1e-3 * np.maximum(np.abs(middle + half), 1e-300)
        p, r = np.where(bent, p + ridge, p), np.where(bent, r + ridge, r)
        determinant = p * r - q * q
    return (r * terms.d_a - q * terms.d_b) / determinant, (p * terms.d_b - q * terms.d_a) / determinant


def _step(
    evaluate: Evaluate,
    active: NDArray[np.intp],
    point: tuple[Array, Array],
    step: tuple[Array, Array],
    columns: list[Array],
) -> Mask:
    """Move each active row by the longest of 1, 1/2, 1/4 ... of its step that does not lose; say which moved."""
    a, b = point
    step_a, step_b = step
    old_b = b[active]
    with np.errstate(divide="ignore", invalid="ignore"):
        room = np.where(step_b < 0, (1.0 - _NEVER_NEARER_TO_ZERO) * old_b / -step_b, np.inf)
    length = np.minimum(1.0, room)
    waiting = np.arange(active.size)
    moved = np.zeros(active.size, dtype=bool)
    for _ in range(_MOST_HALVINGS):
        rows = active[waiting]
        new_a = a[rows] + length[waiting] * step_a[waiting]
        new_b = b[rows] + length[waiting] * step_b[waiting]
        tried = evaluate(rows, new_a, new_b)
        kept = columns[0][rows]
        good = tried.value >= kept - _ROUNDING * np.maximum(1.0, np.abs(kept))
        accepted = rows[good]
        a[accepted], b[accepted] = new_a[good], new_b[good]
        for column, values in zip(columns, tried.columns(), strict=True):
            column[accepted] = values[good]
        moved[waiting[good]] = True
        waiting = waiting[~good]
        if not waiting.size:
            break
        length[waiting] *= 0.5
    return moved


def _is_peak(terms: Terms, *, b_is_fixed: bool) -> Mask:
    if b_is_fixed:
        return terms.d_aa < 0
    return (terms.d_aa < 0) & (terms.d_aa * terms.d_bb - terms.d_ab**2 > 0)
