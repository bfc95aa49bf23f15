"""Families fitted side by side to the same units, and what can be said of the choice between them."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from math import inf

from reliability_app.engine.bounds import Proceed
from reliability_app.engine.errors import DataError
from reliability_app.engine.families import Family, family
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitting import fit
from reliability_app.engine.goodness import SEED, Goodness, Tested, goodness_of
from reliability_app.engine.life_data import LifeData

# Families whose AICc differ by less than 2 are taken as equally well supported (common practice; Burnham & Anderson
# 2002, from memory). Between families with equally many parameters that is a log-likelihood less than 1 apart.
ALIKE_WITHIN = 2.0
# A family is called a poor description of the units below this p-value of Anderson-Darling (common practice).
REJECTED_BELOW = 0.05


@dataclass(frozen=True, eq=False)
class Candidate:
    """A family fitted for comparison.

    Attributes
    ----------
    name, title : str
        The family's name in code and on screen.
    fit : Fit or None
        The fit, or the outcome that stands in its place; None where the family cannot be put to these units at all.
    reason : str
        Why there is no estimate, in a sentence; empty where there is one.
    goodness : Goodness or None
        None without an estimate.
    life : float or None
        Age by which the fraction asked about has failed; None without an estimate.
    """

    name: str
    title: str
    fit: Fit | None
    reason: str
    goodness: Goodness | None
    life: float | None

    @property
    def is_fitted(self) -> bool:
        """True where there is an estimate."""
        return self.fit is not None and self.fit.converged

    @property
    def log_likelihood(self) -> float | None:
        """Log-likelihood of the lives themselves."""
        return self.fit.log_likelihood if self.fit else None

    @property
    def aicc(self) -> float | None:
        """Akaike's criterion with the small-sample term; None also where there are too few units for it."""
        return self.fit.aicc if self.fit else None

    @property
    def bic(self) -> float | None:
        """Schwarz's criterion."""
        return self.fit.bic if self.fit else None

    @property
    def anderson_darling(self) -> Tested | None:
        """Anderson-Darling statistic with its simulated p-value."""
        return self.goodness.anderson_darling if self.goodness else None

    @property
    def correlation(self) -> Tested | None:
        """Plot correlation with its simulated p-value."""
        return self.goodness.correlation if self.goodness else None


@dataclass(frozen=True)
class Verdict:
    """What can be said of the choice between candidates.

    Attributes
    ----------
    fraction : float
        The fraction failed to which the lives belong.
    alike : tuple of (str, float)
        Title and life of each family that the data cannot tell from the best by AICc, best first; empty where no
        family has a criterion.
    apart : tuple of str
        Titles of the families that fit clearly worse.
    margin : float or None
        By how much the AICc of the best of these exceeds the lowest; None where there are none.
    poor : bool
        True where the p-values of Anderson-Darling call every family a poor description of the units.
    """

    fraction: float
    alike: tuple[tuple[str, float], ...]
    apart: tuple[str, ...]
    margin: float | None
    poor: bool

    @property
    def spread(self) -> float:
        """Longest life over shortest among the families that fit alike; infinite where one is not positive."""
        lives = [life for _, life in self.alike]
        if len(lives) < 2:
            return 1.0
        return max(lives) / min(lives) if min(lives) > 0 else inf


def compare(
    data: LifeData,
    family_names: Iterable[str],
    *,
    fraction: float = 0.10,
    repeats: int | None = None,
    seed: int = SEED,
    proceed: Proceed | None = None,
) -> tuple[Candidate, ...]:
    """Fit families side by side, ordered by AICc; those without a criterion come last.

    Parameters
    ----------
    fraction : float
        The fraction failed of the life given for each family.
    repeats : int, optional
        Simulated samples behind each p-value; chosen by the number of units if not given.
    seed : int
        The same seed gives the same p-values.
    proceed : callable, optional
        Called between pieces of the simulation; what it raises ends the work.

    Raises
    ------
    UnknownName
        If there is no such family.
    DataError
        If the fraction does not lie between 0 and 1.
    """
    if not 0.0 < fraction < 1.0:
        raise DataError(["A fraction failed must lie between 0 and 1, both excluded: B10 is 0.10."])
    families = [family(name) for name in family_names]
    candidates = [_candidate(data, one, fraction, repeats=repeats, seed=seed, proceed=proceed) for one in families]
    return tuple(sorted(candidates, key=_place))


def _candidate(
    data: LifeData, chosen: Family, fraction: float, *, repeats: int | None, seed: int, proceed: Proceed | None
) -> Candidate:
    try:
        found = fit(data, chosen.name)
    except DataError as trouble:  # a family of ln life, and a life that is not positive
        return Candidate(chosen.name, chosen.title, None, str(trouble), None, None)
    if not found.converged:
        return Candidate(chosen.name, chosen.title, found, found.cautions[0].text, None, None)
    goodness = goodness_of(found, repeats=repeats, seed=seed, proceed=proceed)
    return Candidate(chosen.name, chosen.title, found, "", goodness, float(found.life(fraction)))


def _place(candidate: Candidate) -> tuple[int, float]:
    if candidate.aicc is not None:
        return 0, candidate.aicc
    return (1, -(candidate.log_likelihood or 0.0)) if candidate.is_fitted else (2, 0.0)


def verdict_of(candidates: tuple[Candidate, ...], fraction: float) -> Verdict:
    """Return what can be said of candidates as `compare` gives them for this fraction."""
    ranked = [(candidate, candidate.aicc) for candidate in candidates if candidate.aicc is not None]
    lowest = ranked[0][1] if ranked else 0.0
    alike = [one for one, criterion in ranked if criterion - lowest < ALIKE_WITHIN]
    apart = [(one.title, criterion - lowest) for one, criterion in ranked[len(alike) :]]
    tests = [one.anderson_darling for one in candidates]
    p_values = [test.p_value for test in tests if test is not None and test.p_value is not None]
    return Verdict(
        fraction=fraction,
        alike=tuple((one.title, one.life) for one in alike if one.life is not None),
        apart=tuple(title for title, _ in apart),
        margin=apart[0][1] if apart else None,
        poor=bool(p_values) and max(p_values) < REJECTED_BELOW,
    )
