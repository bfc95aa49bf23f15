"""Cuts lines and areas at the border of a chart, so that no file needs a clip that some reader does not know."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Box:
    """A rectangle with its sides parallel to the axes, left < right and low < high."""

    left: float
    right: float
    low: float
    high: float

    def holds(self, x: Floats, y: Floats) -> NDArray[np.bool_]:
        """Return where points lie inside or on the border; those that are not finite do not."""
        return np.asarray((x >= self.left) & (x <= self.right) & (y >= self.low) & (y <= self.high))


def line_pieces(x: Floats, y: Floats, box: Box) -> list[tuple[Floats, Floats]]:
    """Return the pieces of a line through points (n,) that lie in a box (Liang and Barsky 1984).

    The line is broken where a point is not finite.
    """
    if x.size < 2:
        return []
    x0, y0, dx, dy = x[:-1], y[:-1], np.diff(x), np.diff(y)
    seen = np.isfinite(x0) & np.isfinite(y0) & np.isfinite(dx) & np.isfinite(dy)
    x0, y0, dx, dy = (np.where(seen, values, 0.0) for values in (x0, y0, dx, dy))
    enters, leaves = np.zeros(x0.size), np.ones(x0.size)
    for change, room in ((-dx, x0 - box.left), (dx, box.right - x0), (-dy, y0 - box.low), (dy, box.high - y0)):
        share = np.divide(room, change, out=np.zeros_like(room), where=change != 0.0)
        enters = np.where(change < 0.0, np.maximum(enters, share), enters)
        leaves = np.where(change > 0.0, np.minimum(leaves, share), leaves)
        seen &= (change != 0.0) | (room >= 0.0)
    seen &= enters <= leaves
    starts = np.column_stack([x0 + enters * dx, y0 + enters * dy])
    stops = np.column_stack([x0 + leaves * dx, y0 + leaves * dy])
    goes_on = seen[:-1] & seen[1:] & (leaves[:-1] == 1.0) & (enters[1:] == 0.0)
    return list(_chained(starts, stops, np.flatnonzero(seen), goes_on))


def _chained(
    starts: Floats, stops: Floats, seen: NDArray[np.intp], goes_on: NDArray[np.bool_]
) -> Iterator[tuple[Floats, Floats]]:
    """Give the visible segments joined to pieces; `goes_on` says of each segment whether the next one continues it."""
    if seen.size == 0:
        return
    ends = np.flatnonzero(~goes_on[seen[:-1]]) + 1
    for piece in np.split(seen, ends):
        points = np.concatenate([starts[piece[:1]], stops[piece]])
        yield points[:, 0], points[:, 1]


def area_inside(x: Floats, y: Floats, box: Box) -> tuple[Floats, Floats]:
    """Return the part of a closed area with corners (n,) that lies in a box (Sutherland and Hodgman 1974).

    Pieces that the border separates stay joined along the border, which has no area.
    """
    for along_x, limit, sign in (
        (True, box.left, 1),
        (True, box.right, -1),
        (False, box.low, 1),
        (False, box.high, -1),
    ):
        x, y = _half(x, y, sign * ((x if along_x else y) - limit))
    return x, y


def _half(x: Floats, y: Floats, inwards: Floats) -> tuple[Floats, Floats]:
    """Return what lies where `inwards`, the distance of each corner from a side, is not negative."""
    if x.size == 0:
        return x, y
    inside, following = inwards >= 0.0, np.roll(inwards, -1)
    crosses = inside != np.roll(inside, -1)
    share = np.divide(inwards, inwards - following, out=np.zeros_like(inwards), where=crosses)
    keep = np.column_stack([inside, crosses]).ravel()

    def with_crossings(values: Floats) -> Floats:
        crossing = values + share * (np.roll(values, -1) - values)
        return np.asarray(np.column_stack([values, crossing]).ravel()[keep])

    return with_crossings(x), with_crossings(y)


def band_areas(x: Floats, lower: Floats, upper: Floats, box: Box) -> Iterator[tuple[Floats, Floats]]:
    """Give the corners of the ground between two edges, one area for each stretch on which both are finite."""
    exists = np.isfinite(x) & np.isfinite(lower) & np.isfinite(upper)
    borders = np.flatnonzero(np.diff(np.concatenate([[False], exists, [False]]).astype(int)))
    for start, stop in borders.reshape(-1, 2):
        piece = slice(int(start), int(stop))
        around_x = np.concatenate([x[piece], x[piece][::-1]])
        around_y = np.concatenate([upper[piece], lower[piece][::-1]])
        corners = area_inside(around_x, around_y, box)
        if corners[0].size >= 3:
            yield corners
