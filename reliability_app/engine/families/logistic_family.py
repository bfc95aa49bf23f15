"""Logistic: the distribution of life itself, with mean mu; sigma is sqrt(3)/pi of its standard deviation."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.logistic import Logistic

LOGISTIC = Family(
    name="logistic",
    title="Logistic",
    standard=Logistic(),
    rules={"mu": Rule.MU, "sigma": Rule.SIGMA},
    of_log_life=False,
)
