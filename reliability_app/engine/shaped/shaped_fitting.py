"""Fits families with a further parameter: the profile over it, its joint maxima, what to say where there is none."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np

from reliability_app.engine.existence import Outcome, outcome_before_fitting
from reliability_app.engine.families.shaped_family import ShapedFamily, without_threshold
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.shaped.birnbaum_saunders_sheaf import BirnbaumSaundersSheaf
from reliability_app.engine.shaped.log_life_sheaves import GammaSheaf, GeneralizedGammaSheaf, InverseGaussianSheaf
from reliability_app.engine.shaped.profile import Peak, Profile, climb, crests_of, peaks_of, profile
from reliability_app.engine.shaped.shaped_cautions import no_maximum
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate
from reliability_app.engine.shaped.shaped_fit import ShapedFit
from reliability_app.engine.shaped.sheaf import Sheaf
from reliability_app.engine.shaped.threshold_sheaf import ThresholdSheaf

_SHEAVES: dict[str, Callable[[LifeData], Sheaf]] = {
    "gamma": GammaSheaf,
    "generalized_gamma": GeneralizedGammaSheaf,
    "inverse_gaussian": InverseGaussianSheaf,
    "birnbaum_saunders": BirnbaumSaundersSheaf,
}
# So near the first failure, in ranges of the lives, the exponential family's threshold is as good as there.
_NEAR_FIRST_FAILURE, _AT_FIRST_FAILURE = 1e-3, 1e-13
# A larger sample is surveyed on a part of it.
_THIN_ABOVE, _THIN_TO = 20_000, 4_000


def fit_shaped(data: LifeData, chosen: ShapedFamily) -> ShapedFit:
    """Fit a family with a further parameter by maximum likelihood.

    Returns
    -------
    ShapedFit
        With `outcome` ESTIMATED, or another outcome and no numbers: NO_INTERIOR_MAXIMUM where the likelihood keeps
        rising towards an end of the family, which `cautions` name.
    """
    data.check_beyond(chosen.life_scale.origin, chosen.title)
    outcome = outcome_before_fitting(data, chosen)
    if outcome is not Outcome.ESTIMATED:
        return ShapedFit(data, chosen, outcome, None)
    sheaf = sheaf_of(data, chosen)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        seen, peaks = _surveyed(sheaf)
        edge = None if peaks else _at_first_failure(sheaf)
    if peaks:
        found = ShapedEstimate(sheaf, peaks[0], seen, peaks[1:])
        return ShapedFit(data, chosen, outcome, None, shaped=found)
    if edge is not None:
        return ShapedFit(data, chosen, outcome, None, shaped=ShapedEstimate(sheaf, edge, seen, is_edge=True))
    if crests_of(seen):
        # A maximum that is no smooth one, such as at a threshold that meets the beginning of an interval.
        return ShapedFit(data, chosen, Outcome.NOT_CONVERGED, None)
    reason = no_maximum(sheaf, seen, chosen.title)
    return ShapedFit(data, chosen, Outcome.NO_INTERIOR_MAXIMUM, None, no_estimate=reason)


def sheaf_of(data: LifeData, chosen: ShapedFamily) -> Sheaf:
    """Lay a family over the units."""
    if chosen.has_threshold:
        return ThresholdSheaf(data, without_threshold(chosen))
    return _SHEAVES[chosen.name](data)


def _surveyed(sheaf: Sheaf) -> tuple[Profile, tuple[Peak, ...]]:
    """Return the profile over the whole range of kappa, and the joint maxima inside it, highest first."""
    if sheaf.records <= _THIN_ABOVE:
        seen = profile(sheaf, sheaf.grid())
        return seen, peaks_of(sheaf, seen)
    part = sheaf.thinned(_THIN_TO)
    seen = profile(part, part.grid())
    rough = peaks_of(part, seen)
    found = [(climb(sheaf, peak.point), peak) for peak in rough]
    peaks = sorted(((peak, start) for peak, start in found if peak is not None), key=lambda pair: -pair[0].value)
    if not peaks:
        return seen, ()
    top, start = peaks[0]
    # What the part lost towards the ends the whole loses as many times over as it is larger.
    value = top.value + sheaf.records / part.records * (seen.value - start.value)
    return replace(seen, value=value), tuple(peak for peak, _ in peaks)


def _at_first_failure(sheaf: Sheaf) -> Peak | None:
    """Return the estimate of an exponential family with a threshold whose first failure is known: it lies there.

    The mean is then the time that the units spent beyond the first failure, over the number of failures (Lawless 2003,
    Statistical Models and Methods for Lifetime Data, ch. 4; cited from memory).
    """
    if not (isinstance(sheaf, ThresholdSheaf) and sheaf.b_is_pinned and (sheaf.raw.failed.age == sheaf.first).any()):
        return None
    kappa = np.arcsinh(1.0 / np.array([_NEAR_FIRST_FAILURE, _AT_FIRST_FAILURE]))
    near, there = (profile(sheaf, place[None]) for place in kappa)
    if not there.value[0] > near.value[0]:
        return None
    return Peak(there.points[0], float(there.value[0]), 0.0, 0.0, 0)
