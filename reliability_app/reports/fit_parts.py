"""The parts of a picture that show one fitted curve: its line, its band, and the edges of the band."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale
from reliability_app.reports.figure import Band, Line, Part
from reliability_app.reports.series_looks import SeriesLook

Floats = NDArray[np.float64]

_EDGE_STRENGTH = 0.65


def fit_parts(curve: Curve | None, look: SeriesLook, age: AgeScale, height: Callable[[Floats], Floats]) -> list[Part]:
    """Return the parts of a curve whose values stand at `height` on the upright axis; none without a curve.

    A bound on one side is filled towards the line.
    """
    if curve is None:
        return []
    x, y = age.to_scale(curve.x), height(curve.y)
    lower, upper = (None if edge is None else height(edge) for edge in (curve.lower, curve.upper))
    parts: list[Part] = []
    if lower is not None or upper is not None:
        parts.append(Band(x, y if lower is None else lower, y if upper is None else upper, look.colour))
    edges = [edge for edge in (lower, upper) if edge is not None]
    parts += [Line(x, edge, look.colour, width=1.0, strength=_EDGE_STRENGTH) for edge in edges]
    return [*parts, Line(x, y, look.colour, dash=look.dash)]
