"""Whether a reading depends on the choice between families that the data cannot tell apart."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from contextlib import suppress
from dataclasses import dataclass

import numpy as np

from reliability_app.engine.candidates import ALIKE_WITHIN
from reliability_app.engine.errors import DataError
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitting import fit
from reliability_app.engine.life_data import LifeData

# The two families between which life data are read most often (common practice).
USUAL_FAMILIES = ("lognormal", "weibull")
# The step of the R10 series of preferred numbers (ISO 3), 10^(1/10): the finest step by which sizes, ratings and test
# lengths are usually graded, so that a smaller difference seldom changes a decision.
NOTICED_RATIO = 10.0**0.1


@dataclass(frozen=True)
class Disagreement:
    """Another family fits as well, or better, and says something else.

    Attributes
    ----------
    title : str
        The other family.
    value : float
        What it says in the place of the reading.
    gain : float
        By how much its AICc is lower than that of the family chosen; below 0 where it is higher.
    """

    title: str
    value: float
    gain: float

    @property
    def is_clear(self) -> bool:
        """True where the other family fits clearly better."""
        return self.gain >= ALIKE_WITHIN


def rivals_of(chosen: Fit) -> tuple[Fit, ...]:
    """Return fits of the usual families, other than the chosen one, that the data do not tell from the best by AICc."""
    if chosen.aicc is None:
        return ()
    others = [_fitted(chosen.data, name) for name in USUAL_FAMILIES if name != chosen.family.name]
    ranked = [(other.aicc, other) for other in others if other is not None and other.aicc is not None]
    best = min([chosen.aicc, *(criterion for criterion, _ in ranked)])
    return tuple(other for criterion, other in ranked if criterion - best < ALIKE_WITHIN)


def _fitted(data: LifeData, name: str) -> Fit | None:
    """Return the fit, or None where a life that is not positive rules the family out."""
    with suppress(DataError):
        return fit(data, name)
    return None


def disagreement(
    chosen: Fit,
    rivals: Iterable[Fit],
    reading: Callable[[Fit], float],
    *,
    ends: tuple[float | None, float | None] = (None, None),
) -> Disagreement | None:
    """Return the rival that departs most from a reading, if it departs by more than can be passed over.

    That is by more than a factor of 1.26, or by more than the bound's own width: the greater one of the distances
    (as ratios) from the estimate to the ends given.

    Parameters
    ----------
    chosen : Fit
    rivals : iterable of Fit
        As `rivals_of` gives them.
    reading : callable
        Reads a positive number off a fit.
    ends : tuple
        Bounds of the reading off the chosen fit; None on an open side.
    """
    own = reading(chosen)
    if not own > 0:
        return None
    widths = [abs(np.log(end / own)) for end in ends if end is not None and end > 0 and np.isfinite(end)]
    limit = min(np.log(NOTICED_RATIO), max(widths, default=np.inf))
    said = [(rival, reading(rival)) for rival in rivals]
    gaps = [(abs(np.log(value / own)), rival, value) for rival, value in said if value > 0]
    widest = max(gaps, key=lambda gap: gap[0], default=None)
    if widest is None or widest[0] <= limit or chosen.aicc is None or widest[1].aicc is None:
        return None
    return Disagreement(widest[1].family.title, widest[2], chosen.aicc - widest[1].aicc)
