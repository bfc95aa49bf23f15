"""The slow way to the extreme of a measure over a region: the outline about its best point, drawn ever more finely."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.shaped.measures import ShapedMeasure
from reliability_app.engine.shaped.outline import Outline, rays_from
from reliability_app.engine.shaped.profile import profile
from reliability_app.engine.shaped.rays import ray_ends
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]

_SLICES, _RAYS = 5, 7
_ZOOMS, _ZOOM, _TOLD_EVERY = 24, 0.5, 3
_ACCURACY = 1e-10
_FLAT = 1e-9


def closer(
    sheaf: Sheaf, measure: ShapedMeasure, outline: Outline, at: tuple[int, int], sign: float
) -> Iterator[tuple[Array, float]]:
    """Give ever better points (a, b, kappa) with values of a measure of size 1, from a (slice, ray) of the outline."""
    kappa, angle = float(outline.kappa[at[0]]), float(outline.angle[at[1]])
    ends = outline.low.kappa, outline.high.kappa
    neighbours = np.concatenate([ends[:1], outline.kappa, ends[1:]])[[at[0], at[0] + 2]]
    reach = float(np.abs(neighbours - kappa).max())
    turn = 2.0 * np.pi / outline.angle.size if len(sheaf.free) == 3 else 0.0
    best = np.array([outline.a[at], outline.b[at], kappa])
    value = float(measure.terms(*(best[place : place + 1] for place in range(3))).value[0])
    for zoom in range(_ZOOMS):
        kappas = np.unique(np.clip(kappa + reach * np.linspace(-1.0, 1.0, _SLICES), *ends))
        angles = angle + turn * np.linspace(-1.0, 1.0, _RAYS if turn else 1)
        start = np.full_like(kappas, best[0]), np.full_like(kappas, best[1])
        tops = profile(sheaf, kappas, start).above(outline.target)
        if not tops.kappa.size:
            break
        a, b, _ = ray_ends(sheaf, rays_from(sheaf, tops, angles, outline.target), accuracy=_ACCURACY)
        points = np.stack([a, b, np.repeat(tops.kappa, angles.size)], axis=-1)
        values = measure.terms(*points.T).value
        place = int(np.nanargmax(sign * values))
        if sign * (values[place] - value) >= 0:
            best, value = points[place], float(values[place])
            kappa, angle = float(best[2]), float(angles[place % angles.size])
        if float(np.ptp(values)) <= _FLAT * (1.0 + abs(value)):
            break
        reach, turn = _ZOOM * reach, _ZOOM * turn
        if zoom % _TOLD_EVERY == _TOLD_EVERY - 1:
            yield best, value
    yield best, value
