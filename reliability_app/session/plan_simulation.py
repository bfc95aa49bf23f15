"""Simulates the plan of a set: how often each kind of bound of a B-life would have held, as a reading of its own."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from reliability_app.engine.bounds import Proceed
from reliability_app.engine.coverage import Coverage, coverage_of_life
from reliability_app.engine.errors import BoundUnavailable, NoEstimate, RigpaperError
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.fit_result import Fit
from reliability_app.session.analysis import Question, SetAnalysis
from reliability_app.session.document import LifeAsk
from reliability_app.session.wording import BOUND_TITLES, as_given

USUAL_PERCENT = 10.0
OUT_OF_DATE = "Out of date, because the units or the basis have changed since"


@dataclass(frozen=True, eq=False)
class SimulatedPlan:
    """What came of simulating the plan of a set.

    Attributes
    ----------
    question : Question
        The units and the basis it is about.
    percent : float
        The percent failed of the B-life whose bounds were held against the truth.
    coverages : tuple of Coverage
        For each side of the basis each kind of bound; empty where nothing could be simulated.
    reason : str
        Why not, in a sentence; empty where there is a result.
    """

    question: Question
    percent: float
    coverages: tuple[Coverage, ...]
    reason: str = ""

    def is_about(self, question: Question) -> bool:
        """Return True while units and basis are those simulated."""
        return is_same_work(self.question, question)

    @property
    def sentence(self) -> str:
        """What is to be said of it."""
        if not self.coverages:
            return self.reason
        sides = dict.fromkeys(one.side for one in self.coverages)
        return " ".join(_sentence([one for one in self.coverages if one.side == side], self.percent) for side in sides)


def is_same_work(one: Question, other: Question) -> bool:
    """Return True where the same would be simulated: units and basis but for the kind of bound, as all are judged."""
    return replace(other.basis, bound=one.basis.bound) == one.basis and all(
        np.array_equal(getattr(one.units, name), getattr(other.units, name))
        for name in ("lower", "upper", "quantity", "entered")
    )


def simulate_plan(analysis: SetAnalysis, *, proceed: Proceed | None = None) -> SimulatedPlan:
    """Simulate tests under the plan of the analysed units; what stands in the way becomes the reason.

    Both sides of a two-sided basis are judged, each with half of what the confidence leaves.

    Parameters
    ----------
    proceed : callable, optional
        Called before each simulated test; what it raises ends the work.
    """
    question = analysis.question
    lives = (ask.percent for ask in question.asks if isinstance(ask, LifeAsk))
    percent = next(lives, USUAL_PERCENT)
    basis = question.basis
    two = basis.side == "two"
    confidence = 0.5 * (1.0 + basis.confidence) if two else basis.confidence
    try:
        fitted = _simulable(analysis)
        coverages = [
            one
            for side in (("lower", "upper") if two else (basis.side,))
            for one in coverage_of_life(fitted, percent / 100.0, confidence=confidence, side=side, proceed=proceed)
        ]
    except RigpaperError as trouble:
        return SimulatedPlan(question, percent, (), f"The plan cannot be simulated. {trouble}")
    return SimulatedPlan(question, percent, tuple(coverages))


def _simulable(analysis: SetAnalysis) -> Fit:
    """Return the fit at which tests can be simulated and fitted anew in the same way."""
    fitted = analysis.fit
    if fitted is None or not fitted.converged:
        raise NoEstimate("There is no fit to these units, so there is nothing to simulate from.")
    if not isinstance(fitted.estimate, Estimate):
        raise BoundUnavailable(
            f"{fitted.family.title} has a further parameter, and its bounds are not calibrated: choose a family "
            "without one, such as lognormal or Weibull."
        )
    return fitted


def stale_sentence(plan: SimulatedPlan) -> str:
    """Return the sentence of a plan whose units or basis have changed since."""
    return f"{OUT_OF_DATE}: {plan.sentence}"


def _sentence(coverages: list[Coverage], percent: float) -> str:
    """Say how often the bounds of one side held, the most careful kind first."""
    first, *others = reversed(coverages)
    held = f"{_percent(first.held)} (± {100.0 * first.standard_error:.1f})"
    rest = "".join(f"; {BOUND_TITLES[one.kind]} {_percent(one.held)}" for one in others)
    return (
        f"Of {first.tests} simulated tests like this one {held} of the {first.kind} {first.side} bounds of the "
        f"B{as_given(percent)} life held, where {as_given(100.0 * first.confidence)} % is promised{rest}."
    )


def _percent(share: float) -> str:
    return f"{100.0 * share:.1f} %"
