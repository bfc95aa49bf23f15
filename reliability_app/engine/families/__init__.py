"""The ordered catalogue of families."""

from reliability_app.engine.errors import UnknownName
from reliability_app.engine.families.base import (
    Derivatives,
    Family,
    StandardDistribution,
)
from reliability_app.engine.families.exponential import EXPONENTIAL
from reliability_app.engine.families.lognormal import LOGNORMAL
from reliability_app.engine.families.weibull import WEIBULL

CATALOGUE: tuple[Family, ...] = (LOGNORMAL, WEIBULL, EXPONENTIAL)
FAMILY_NAMES: tuple[str, ...] = tuple(entry.name for entry in CATALOGUE)


def family(name: str) -> Family:
    """Return the family called `name`, or raise UnknownName with the names there are."""
    for entry in CATALOGUE:
        if entry.name == name:
            return entry
    raise UnknownName(f"There is no family called {name!r}. The families are: {', '.join(FAMILY_NAMES)}.")


__all__ = [
    "CATALOGUE",
    "FAMILY_NAMES",
    "Derivatives",
    "Family",
    "StandardDistribution",
    "family",
]
