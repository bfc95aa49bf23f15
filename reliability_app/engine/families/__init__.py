"""The ordered catalogue of families."""

from reliability_app.engine.errors import UnknownName
from reliability_app.engine.families.base import (
    Derivatives,
    Family,
    Rule,
    StandardDistribution,
)
from reliability_app.engine.families.exponential import EXPONENTIAL
from reliability_app.engine.families.frechet import FRECHET
from reliability_app.engine.families.largest_extreme_value_family import LARGEST_EXTREME_VALUE
from reliability_app.engine.families.logistic_family import LOGISTIC
from reliability_app.engine.families.loglogistic import LOGLOGISTIC
from reliability_app.engine.families.lognormal import LOGNORMAL
from reliability_app.engine.families.normal_family import NORMAL
from reliability_app.engine.families.shaped_family import SHAPED_CATALOGUE, ShapedFamily
from reliability_app.engine.families.smallest_extreme_value_family import SMALLEST_EXTREME_VALUE
from reliability_app.engine.families.weibull import WEIBULL

LOCATION_SCALE_CATALOGUE: tuple[Family, ...] = (
    LOGNORMAL,
    WEIBULL,
    EXPONENTIAL,
    LOGLOGISTIC,
    FRECHET,
    NORMAL,
    SMALLEST_EXTREME_VALUE,
    LARGEST_EXTREME_VALUE,
    LOGISTIC,
)
CATALOGUE: tuple[Family, ...] = (*LOCATION_SCALE_CATALOGUE, *SHAPED_CATALOGUE)
LOCATION_SCALE_NAMES: tuple[str, ...] = tuple(entry.name for entry in LOCATION_SCALE_CATALOGUE)
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
    "LOCATION_SCALE_CATALOGUE",
    "LOCATION_SCALE_NAMES",
    "Derivatives",
    "Family",
    "Rule",
    "ShapedFamily",
    "StandardDistribution",
    "family",
]
