"""Weibull: ln life has the smallest extreme value distribution; shape = 1/sigma, scale = exp(mu)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from reliability_app.engine.errors import DataError
from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.smallest_extreme_value import SmallestExtremeValue

WEIBULL = Family(
    name="weibull",
    title="Weibull",
    standard=SmallestExtremeValue(),
    rules={"shape": Rule.ONE_OVER_SIGMA, "scale": Rule.EXP_MU},
)
_LEAST_SHAPE, _GREATEST_SHAPE = 0.01, 100.0


@dataclass(frozen=True)
class WeibullOfGivenShape(Family):
    """The Weibull family with a shape given by the user: life to the power of the shape is exponential."""

    given_shape: float | None = None


def weibull_of_given_shape(shape: float) -> WeibullOfGivenShape:
    """Return the Weibull family with the shape held at a value.

    Raises
    ------
    DataError
        If the shape is not between 0.01 and 100.
    """
    if not (np.isfinite(shape) and _LEAST_SHAPE <= shape <= _GREATEST_SHAPE):
        raise DataError(
            [f"A shape of {shape:g} cannot be used: give one from {_LEAST_SHAPE:g} to {_GREATEST_SHAPE:g}, such as 2."]
        )
    return WeibullOfGivenShape(
        WEIBULL.name,
        f"Weibull of shape {shape:g}",
        WEIBULL.standard,
        WEIBULL.rules,
        fixed_sigma=1.0 / shape,
        given_shape=float(shape),
    )
