"""How sure an estimate without a family is: variances of the cumulative hazard, and where the data leave it open."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.linalg.lapack import dpotrf, dpotri

from reliability_app.engine.turnbull_curvature import Curvature

Array = NDArray[np.float64]
Integers = NDArray[np.intp]
Mask = NDArray[np.bool_]

# Dense equations of this many nodes take about a second; more would take minutes and gigabytes.
_MOST_JOINTS = 2_000


def variances(curvature: Curvature) -> Array:
    """Return the variance of the cumulative hazard after each cell: the inverse of the observed information.

    The information is that of a network of conductances with the start of life grounded, and a variance is the
    resistance to ground. Nodes on a chain between two joints (nodes where a record over several cells ends) need no
    equation of their own: with exact lives only there are no joints, and the sum along the chain is Greenwood's.
    Cells that hold nothing count as known to hold nothing.

    Returns
    -------
    ndarray, shape (cells,)
        NaN where the cumulative hazard is not tied to the start of life, or where there are too many joints.
    """
    size = curvature.size
    resistance = np.full(size, np.inf)
    np.divide(1.0, curvature.near, out=resistance, where=curvature.near > 0)
    is_tied = tied_to_start(curvature.near > 0, curvature.start, curvature.stop)
    is_joint = np.zeros(size + 1, dtype=np.bool_)
    is_joint[curvature.start] = is_joint[curvature.stop] = True
    is_joint[1:] |= curvature.near == 0
    is_joint[:-1] |= curvature.near == 0
    is_joint &= is_tied
    is_joint[0] = True
    joints = np.flatnonzero(is_joint)
    if joints.size - 1 > _MOST_JOINTS:
        return np.full(size, np.nan)
    covariance = np.zeros((joints.size, joints.size))
    if joints.size > 1:
        covariance[1:, 1:] = _inverse(_equations(curvature, resistance, joints, is_tied))
    found = _along_chains(covariance, resistance, joints)
    return np.asarray(np.where(is_tied[1:] & np.isfinite(found), found, np.nan))


def tied_to_start(has_link: Mask, start: Integers, stop: Integers) -> Mask:
    """Return which nodes 0..cells are joined to node 0, by links across single cells or between start and stop."""
    label = np.concatenate([[0], np.cumsum(~has_link)])
    group = np.arange(int(label[-1]) + 1)
    start, stop = label[start], label[stop]
    while True:
        before = group.copy()
        least = np.minimum(group[start], group[stop])
        np.minimum.at(group, start, least)
        np.minimum.at(group, stop, least)
        group = group[group]
        if np.array_equal(group, before):
            return np.asarray(group[label] == 0)


def _equations(curvature: Curvature, resistance: Array, joints: Integers, is_tied: Mask) -> Array:
    """Return the matrix of the conductances between joints, the row and column of ground left out."""
    count = joints.size
    matrix = np.zeros((count, count))
    reach = _chain_lengths(resistance, joints)
    link = np.arange(count - 1)
    _connect(matrix, link, link + 1, 1.0 / reach)
    is_live = is_tied[curvature.start]
    ends = [np.searchsorted(joints, nodes[is_live]) for nodes in (curvature.start, curvature.stop)]
    _connect(matrix, ends[0], ends[1], curvature.far[is_live])
    return matrix[1:, 1:]


def _connect(matrix: Array, one: Integers, other: Integers, conductance: Array) -> None:
    np.add.at(matrix, (one, one), conductance)
    np.add.at(matrix, (other, other), conductance)
    np.add.at(matrix, (one, other), -conductance)
    np.add.at(matrix, (other, one), -conductance)


def _chain_lengths(resistance: Array, joints: Integers) -> Array:
    """Return the resistance of the chain between each joint and the next."""
    return np.asarray(np.add.reduceat(resistance, joints[:-1])) if joints.size > 1 else np.empty(0)


def _inverse(matrix: Array) -> Array:
    """Return the inverse of a matrix that is symmetric and positive: its upper half, with anything below."""
    factor, trouble = dpotrf(matrix)
    return np.full_like(matrix, np.nan) if trouble else np.asarray(dpotri(factor)[0])


def _along_chains(covariance: Array, resistance: Array, joints: Integers) -> Array:
    """Return the variance at nodes 1..cells from that of the joints around them."""
    found = np.empty(resistance.size)
    ends = [*joints[1:].tolist(), resistance.size]
    for at, (begin, end) in enumerate(zip(joints.tolist(), ends, strict=True)):
        reach = np.cumsum(resistance[begin:end])
        if at == joints.size - 1:
            found[begin:end] = covariance[at, at] + reach
            continue
        # A node in between is the mean of the joints, weighted by nearness, give or take what the chain itself allows.
        # Where the chain is torn there are untied nodes only.
        with np.errstate(invalid="ignore"):
            share = reach[:-1] / reach[-1]
        mixed = (1.0 - share) ** 2 * covariance[at, at] + share**2 * covariance[at + 1, at + 1]
        mixed += 2.0 * share * (1.0 - share) * covariance[at, at + 1]
        found[begin : end - 1] = mixed + reach[:-1] * (1.0 - share)
        found[end - 1] = covariance[at + 1, at + 1]
    return found
