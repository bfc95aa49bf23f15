"""Weibull: ln life has the smallest extreme value distribution; shape = 1/sigma, scale = exp(mu)."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.smallest_extreme_value import SmallestExtremeValue

WEIBULL = Family(
    name="weibull",
    title="Weibull",
    standard=SmallestExtremeValue(),
    rules={"shape": Rule.ONE_OVER_SIGMA, "scale": Rule.EXP_MU},
)
