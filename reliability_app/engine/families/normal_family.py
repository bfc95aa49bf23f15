"""Normal: life itself is normal with mean mu and standard deviation sigma."""

from reliability_app.engine.families.base import Family, Rule
from reliability_app.engine.families.normal import Normal

NORMAL = Family(
    name="normal",
    title="Normal",
    standard=Normal(),
    rules={"mu": Rule.MU, "sigma": Rule.SIGMA},
    of_log_life=False,
)
