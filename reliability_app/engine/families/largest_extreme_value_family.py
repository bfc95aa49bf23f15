"""Largest extreme value: the distribution of life itself; mu is its mode, sigma its spread."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.largest_extreme_value import LargestExtremeValue

LARGEST_EXTREME_VALUE = Family(
    name="largest_extreme_value",
    title="Largest extreme value",
    standard=LargestExtremeValue(),
    rules={"mu": Rule.MU, "sigma": Rule.SIGMA},
    of_log_life=False,
)
