"""Likelihood-ratio tests between families of which one lies inside the other.

Twice the difference of the maximised log-likelihoods is referred to chi-square with as many degrees of freedom as the
wider family has parameters more (Wilks 1938). Where the narrower family is reached at an end of the range of one
parameter only, half of the probability sits at zero: the reference is the even mixture of chi-square with one degree
fewer and with all (Self & Liang 1987, J. Am. Statist. Ass. 82, 605-610; both cited from memory).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from scipy.special import gammaincc

from reliability_app.engine.bounds import Proceed
from reliability_app.engine.errors import BoundUnavailable, NoEstimate
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.refitting import MOST_REPEATS, samples_like

SEED = 20_260_105


@dataclass(frozen=True)
class Nesting:
    """One family inside another.

    Attributes
    ----------
    narrow, wide : str
        Names of the families.
    at_edge : bool
        True where the narrow family is reached only at an end of the range of the wide one's further parameter.
    """

    narrow: str
    wide: str
    at_edge: bool = False


# The generalized gamma has lambda = 1 for the Weibull, 0 for the lognormal, sigma for the gamma, with room on both
# sides of each; the exponential is the Weibull and the gamma of shape 1.
NESTINGS: tuple[Nesting, ...] = (
    Nesting("exponential", "weibull"),
    Nesting("exponential", "gamma"),
    Nesting("exponential", "generalized_gamma"),
    Nesting("weibull", "generalized_gamma"),
    Nesting("lognormal", "generalized_gamma"),
    Nesting("gamma", "generalized_gamma"),
)


@dataclass(frozen=True)
class NestedTest:
    """A likelihood-ratio test of a narrow family inside a wide one.

    Attributes
    ----------
    nesting : Nesting
    statistic : float
        Twice the log-likelihood that the wide family gains.
    degrees : int
        Parameters that it has more.
    p_value : float
        Probability of so large a gain if the narrow family is right, for large samples.
    """

    nesting: Nesting
    statistic: float
    degrees: int
    p_value: float


def nested_test(narrow: Fit, wide: Fit, *, at_edge: bool = False) -> NestedTest:
    """Test a fit against that of a wider family to the same data.

    Raises
    ------
    NoEstimate
        Where one of the two does not exist.
    ValueError
        If the second family has no parameter more than the first.
    """
    degrees = wide.family.parameter_count - narrow.family.parameter_count
    if degrees < 1:
        raise ValueError(f"{wide.family.title} is not wider than {narrow.family.title}.")
    before, after = narrow.log_likelihood, wide.log_likelihood
    if before is None or after is None:
        missing = (narrow if before is None else wide).family.title
        raise NoEstimate(f"{missing} has no fit to these units, so it cannot be tested against another family.")
    statistic = max(2.0 * (after - before), 0.0)
    p_value = chi_square_tail(statistic, degrees)
    if at_edge:
        p_value = 0.5 * (p_value + chi_square_tail(statistic, degrees - 1))
    return NestedTest(Nesting(narrow.family.name, wide.family.name, at_edge), statistic, degrees, p_value)


def nested_tests(fits: Mapping[str, Fit]) -> tuple[NestedTest, ...]:
    """Return the tests of all nested pairs among fits to the same data, by the names of the families."""
    there = {name: fit for name, fit in fits.items() if fit.converged}
    return tuple(
        nested_test(there[nesting.narrow], there[nesting.wide], at_edge=nesting.at_edge)
        for nesting in NESTINGS
        if nesting.narrow in there and nesting.wide in there
    )


def simulated_p_value(
    narrow: Fit, wide: Fit, *, repeats: int = MOST_REPEATS, seed: int = SEED, proceed: Proceed | None = None
) -> float:
    """Return the p-value of a nested test from samples drawn at the narrow fit under the set's own plan.

    For two families with one and the same standard distribution (the exponential inside the Weibull): the chi-square
    reference is good only in large samples.

    Raises
    ------
    NoEstimate
        Where one of the two does not exist.
    BoundUnavailable
        If the plan cannot be simulated, or the families do not share their standard distribution.
    """
    observed = nested_test(narrow, wide).statistic
    if type(narrow.family.standard) is not type(wide.family.standard):
        raise BoundUnavailable("This likelihood ratio cannot be simulated: use its chi-square reference.")
    gains: list[float] = []
    estimate = narrow.bounder.estimate
    for drawn in samples_like(estimate, narrow.data, repeats=repeats, seed=seed, proceed=proceed):
        low, high = drawn.fitted_by(narrow.family), drawn.fitted_by(wide.family)
        gains.extend((2.0 * (high.terms.value - low.terms.value))[low.converged & high.converged].tolist())
    return (1 + sum(gain >= observed for gain in gains)) / (len(gains) + 1)


def chi_square_tail(statistic: float, degrees: int) -> float:
    """Return the probability beyond `statistic`; with no degree of freedom all of it sits at zero."""
    if degrees == 0:
        return 0.0 if statistic > 0 else 1.0
    return float(gammaincc(0.5 * degrees, 0.5 * statistic))
