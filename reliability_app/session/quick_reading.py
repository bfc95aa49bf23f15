"""Quick readings that stand in while a slow bound is still being computed, or while the reading line is dragged."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import Curve, Fit
from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import Ask, Basis, LifeAsk
from reliability_app.session.picture import Reading
from reliability_app.session.taking_readings import question_of, take_reading

Floats = NDArray[np.float64]

STAND_IN = "likelihood"


def is_slow(fitted: Fit, basis: Basis, ask: Ask) -> bool:
    """True where the bound of the basis is calibrated by simulation for this kind of reading."""
    try:
        return question_of(fitted, ask).bound_used(basis.bound) == "calibrated"
    except RigpaperError:
        return False


def read_off_band(fitted: Fit, band: Curve, ask: LifeAsk, basis: Basis, life_unit: str, *, bound_used: str) -> Reading:
    """Return a life whose bound is where the drawn band, of the kind `bound_used`, crosses its percent failed."""
    reading = take_reading(fitted, ask, basis, life_unit, stand_in=STAND_IN)
    fraction = ask.percent / 100.0
    return replace(
        reading,
        lower=_crossing(band.x, band.upper, fraction),
        upper=_crossing(band.x, band.lower, fraction),
        bound_used=bound_used,
    )


def _crossing(ages: Floats, edge: Floats | None, fraction: float) -> float | None:
    """Return the age at which an edge of a band reaches a fraction, or None where it does not."""
    if edge is None:
        return None
    inside = np.isfinite(edge) & (edge > 0) & (edge < 1)
    if not inside.any() or not edge[inside][0] <= fraction <= edge[inside][-1]:
        return None
    rising = np.maximum.accumulate(edge[inside])
    return float(np.exp(np.interp(np.log(fraction), np.log(rising), np.log(ages[inside]))))
