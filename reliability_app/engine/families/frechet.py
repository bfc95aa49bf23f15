"""Frechet: ln life has the largest extreme value distribution; shape = 1/sigma, scale = exp(mu)."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.largest_extreme_value import LargestExtremeValue

FRECHET = Family(
    name="frechet",
    title="Fréchet",
    standard=LargestExtremeValue(),
    rules={"shape": Rule.ONE_OVER_SIGMA, "scale": Rule.EXP_MU},
)
