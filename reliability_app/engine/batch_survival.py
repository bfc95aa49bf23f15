"""The product-limit estimate of every sample of a batch at once, for statistics that are simulated."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.sample import Part, Sample

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class BatchSteps:
    """Kaplan-Meier estimates of a batch; arrays of shape (batch, records), each row rising in y.

    Attributes
    ----------
    y : ndarray
        Standardised age of a failure; 0 in records that hold none.
    failures : ndarray
        Units that failed there; 0 in records that hold none.
    before, after : ndarray
        Share running just before and just after the record.
    end : ndarray, shape (batch,)
        y of the last unit observed, failed or running.
    units : ndarray, shape (batch,)
        Units in each sample.
    """

    y: Array
    failures: Array
    before: Array
    after: Array
    end: Array
    units: Array


def batch_steps(sample: Sample) -> BatchSteps:
    """Return the product-limit estimates of samples without found-failed units.

    At equal ages failures come before units that leave, and before units that enter: a unit counts as watched up to and
    including the age at which it leaves, from just after the age at which it enters.
    """
    parts = [part for part in (sample.failed, sample.running, sample.entered) if part.size]
    rows = max(part.y.shape[0] for part in parts)
    y = np.concatenate([_padded(part, rows) for part in parts], axis=1)
    order = np.argsort(y, axis=1, kind="stable")
    failures = _ordered(parts, [part is sample.failed for part in parts], order)
    lives = _ordered(parts, [part is not sample.entered for part in parts], order)
    watched = lives if not sample.entered.size else lives - _ordered(parts, [p is sample.entered for p in parts], order)
    at_risk = np.flip(np.cumsum(np.flip(watched, axis=1), axis=1), axis=1)
    after = np.cumprod(1.0 - failures / np.where(failures > 0, at_risk, 1.0), axis=1).astype(np.float64)
    y = np.take_along_axis(y, order, axis=1)
    return BatchSteps(
        y=np.where(failures > 0, y, 0.0),
        failures=failures,
        before=np.concatenate([np.ones((rows, 1)), after[:, :-1]], axis=1),
        after=after,
        end=np.max(y, axis=1, initial=-np.inf, where=lives > 0),
        units=lives.sum(axis=1),
    )


def _padded(part: Part, rows: int) -> Array:
    """Return y with the padding beyond every age."""
    return np.broadcast_to(np.where(part.weight > 0, part.y, np.inf), (rows, part.size))


def _ordered(parts: list[Part], counted: list[bool], order: NDArray[np.intp]) -> Array:
    """Return the weights of the parts that are counted, 0 for the others, in the order of the ages."""
    rows = order.shape[0]
    weights = [
        np.broadcast_to(part.weight if chosen else np.zeros((1, part.size)), (rows, part.size))
        for part, chosen in zip(parts, counted, strict=True)
    ]
    return np.take_along_axis(np.concatenate(weights, axis=1), order, axis=1)
