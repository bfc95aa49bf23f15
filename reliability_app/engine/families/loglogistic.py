"""Loglogistic: ln life has the logistic distribution; shape = 1/sigma, scale = exp(mu), the median life."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.logistic import Logistic

LOGLOGISTIC = Family(
    name="loglogistic",
    title="Loglogistic",
    standard=Logistic(),
    rules={"shape": Rule.ONE_OVER_SIGMA, "scale": Rule.EXP_MU},
)
