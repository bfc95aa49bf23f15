"""Exponential: the Weibull family with shape 1, a hazard that does not change with age."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.smallest_extreme_value import SmallestExtremeValue

EXPONENTIAL = Family(
    name="exponential",
    title="Exponential",
    standard=SmallestExtremeValue(),
    rules={"mean": Rule.EXP_MU},
    fixed_sigma=1.0,
)
