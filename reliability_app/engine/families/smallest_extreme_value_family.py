"""Smallest extreme value: the distribution of life itself; mu is its mode, sigma its spread."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.smallest_extreme_value import SmallestExtremeValue

SMALLEST_EXTREME_VALUE = Family(
    name="smallest_extreme_value",
    title="Smallest extreme value",
    standard=SmallestExtremeValue(),
    rules={"mu": Rule.MU, "sigma": Rule.SIGMA},
    of_log_life=False,
)
