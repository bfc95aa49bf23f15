"""Families with a further parameter: their names; what they are made of is in `engine/shaped`."""

from __future__ import annotations

from dataclasses import dataclass

from reliability_app.engine.errors import UnknownName
from reliability_app.engine.families.base import Family
from reliability_app.engine.families.exponential import EXPONENTIAL
from reliability_app.engine.families.loglogistic import LOGLOGISTIC
from reliability_app.engine.families.lognormal import LOGNORMAL
from reliability_app.engine.families.normal import Normal
from reliability_app.engine.families.weibull import WEIBULL


@dataclass(frozen=True)
class ShapedFamily(Family):
    """A family whose standard distribution has a shape, or that has a threshold.

    `standard` is that of the paper on which the family is drawn, where it is curved; `rules` is empty.

    Attributes
    ----------
    parameter_names : tuple of str
        The customary parameters in customary order.
    has_threshold : bool
        True where a family of ln life, known by the same name, is one of ln(life - threshold).
    """

    parameter_names: tuple[str, ...] = ()
    has_threshold: bool = False


def _shaped(name: str, title: str, *parameter_names: str) -> ShapedFamily:
    return ShapedFamily(name, title, Normal(), {}, parameter_names=parameter_names)


GAMMA = _shaped("gamma", "Gamma", "shape", "scale")
GENERALIZED_GAMMA = _shaped("generalized_gamma", "Generalized gamma", "mu", "sigma", "lambda")
INVERSE_GAUSSIAN = _shaped("inverse_gaussian", "Inverse Gaussian", "mean", "shape")
BIRNBAUM_SAUNDERS = _shaped("birnbaum_saunders", "Birnbaum-Saunders", "shape", "scale")
SHAPED_CATALOGUE = (GAMMA, GENERALIZED_GAMMA, INVERSE_GAUSSIAN, BIRNBAUM_SAUNDERS)

# The families that can be given a threshold.
THRESHOLD_BASES: tuple[Family, ...] = (WEIBULL, LOGNORMAL, EXPONENTIAL, LOGLOGISTIC)


def with_threshold(base: Family) -> ShapedFamily:
    """Return a family of ln life as one of ln(life - threshold).

    Raises
    ------
    UnknownName
        For a family that has no such form.
    """
    if base not in THRESHOLD_BASES:
        names = ", ".join(entry.name for entry in THRESHOLD_BASES)
        raise UnknownName(f"The {base.title} family cannot be given a threshold. These can: {names}.")
    return ShapedFamily(
        base.name,
        f"{base.title} with threshold",
        base.standard,
        {},
        parameter_names=(*base.rules, "threshold"),
        has_threshold=True,
    )


def without_threshold(shaped: ShapedFamily) -> Family:
    """Return the family of ln life that a family with a threshold is made from."""
    return next(base for base in THRESHOLD_BASES if base.name == shaped.name)
