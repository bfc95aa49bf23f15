"""Lognormal: ln life is normal with mean mu and standard deviation sigma."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.normal import Normal

LOGNORMAL = Family(
    name="lognormal",
    title="Lognormal",
    standard=Normal(),
    rules={"mu": Rule.MU, "sigma": Rule.SIGMA},
)
