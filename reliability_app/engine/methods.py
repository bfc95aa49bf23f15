"""The methods of estimation by name, and where each applies."""

from __future__ import annotations

import numpy as np

from reliability_app.engine.errors import MethodUnavailable, UnknownName
from reliability_app.engine.families import Family, ShapedFamily, family
from reliability_app.engine.life_data import LifeData

MAXIMUM_LIKELIHOOD = "maximum likelihood"
UNBIASED_VARIANCE = "maximum likelihood, sigma with n - 1"
CORRECTED_SHAPE = "maximum likelihood, bias-corrected shape"
AGE_ON_RANK = "median-rank regression of age"
RANK_ON_AGE = "median-rank regression of rank"
METHODS = (MAXIMUM_LIKELIHOOD, UNBIASED_VARIANCE, CORRECTED_SHAPE, AGE_ON_RANK, RANK_ON_AGE)

# The correction of the Weibull shape is given for so many failures or more.
FEWEST_CORRECTED = 3


def methods_for(data: LifeData | None, family_name: str) -> tuple[str, ...]:
    """Return the methods that apply to a family, and to some data where they are given.

    Raises
    ------
    UnknownName
        If there is no such family.
    """
    chosen = family(family_name)
    return tuple(method for method in METHODS if hindrance(method, data, chosen) is None)


def check_method(method: str, data: LifeData, chosen: Family) -> None:
    """Raise UnknownName if there is no such method, or MethodUnavailable with the reason why it does not apply."""
    if method not in METHODS:
        raise UnknownName(f"There is no method called {method!r}. The methods are: {'; '.join(METHODS)}.")
    reason = hindrance(method, data, chosen)
    if reason is not None:
        raise MethodUnavailable(f"{reason} Choose {MAXIMUM_LIKELIHOOD}.")


def hindrance(method: str, data: LifeData | None, chosen: Family) -> str | None:
    """Return the sentence that says why a method does not apply, or None where it does."""
    if method == MAXIMUM_LIKELIHOOD:
        return None
    if isinstance(chosen, ShapedFamily):
        return f"The {chosen.title} family has no straight probability paper and is estimated by the likelihood only."
    if chosen.given_shape is not None:
        return "With a shape given only the scale is estimated, by the likelihood."
    if method == UNBIASED_VARIANCE:
        return _hindrance_of_variance(data, chosen)
    if method == CORRECTED_SHAPE:
        return _hindrance_of_shape(data, chosen)
    return None if data is None else _hindrance_of_ranks(data)


def _hindrance_of_variance(data: LifeData | None, chosen: Family) -> str | None:
    if chosen.name not in ("lognormal", "normal"):
        return f"A sigma with n - 1 belongs to the lognormal and the normal family, not to the {chosen.title}."
    if data is not None and not data.is_complete:
        return "A sigma with n - 1 needs complete data: every unit failed at a known age."
    return None


def _hindrance_of_shape(data: LifeData | None, chosen: Family) -> str | None:
    if chosen.name != "weibull":
        return f"The correction is one of the Weibull shape; it is not known for the {chosen.title} family."
    if data is not None and not (data.is_complete and data.failed_count >= FEWEST_CORRECTED):
        return (
            "The correction of the Weibull shape holds for complete data (every unit failed at a known age) of "
            f"{FEWEST_CORRECTED} units or more."
        )
    return None


def _hindrance_of_ranks(data: LifeData) -> str | None:
    if data.is_found_failed.any():
        return "Ranks are not defined while some units are only known to have failed between two ages."
    if data.entered.any():
        return "Ranks are not defined where units came under observation late."
    if np.unique(data.lower[data.is_failed]).size < 2:
        return "A line through the median ranks needs failures at two ages or more."
    return None
