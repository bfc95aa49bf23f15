"""A requirement of a life or a reliability, and what a fit says of it: met, not met, or cannot be told yet.

Looking again and again at growing evidence weakens a fixed confidence: each look is one more chance to find a
requirement met that is not. The adjusted verdict spends the error alpha = 1 - confidence over any number of looks,
alpha/(k (k + 1)) at the k-th, which sums to alpha: repeated confidence bounds (Jennison & Turnbull, "Interim analyses:
the repeated confidence interval approach", J. R. Stat. Soc. B 51, 1989, 305-361; cited from memory) with errors added
up by Boole's inequality, so that no number of looks has to be planned.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import Fit
from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import MOST_CONFIDENCE
from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.errors import DataError
from reliability_app.session.document import LifeAsk, ReliabilityAsk
from reliability_app.session.taking_readings import question_of
from reliability_app.session.wording import as_given, ask_title, value_text


class Verdict(Enum):
    """What the units say of a requirement; the value is the word for it."""

    MET = "met"
    NOT_MET = "not met"
    CANNOT_BE_TOLD = "cannot be told"


@dataclass(frozen=True)
class Requirement:
    """A life at a percent, or a reliability at an age, that must be at least so much, with a confidence.

    Raises
    ------
    DataError
        If the value cannot be required, or the confidence is none.
    """

    ask: LifeAsk | ReliabilityAsk
    at_least: float
    confidence: float

    def __post_init__(self) -> None:
        check_bound("automatic", "lower", self.confidence)
        highest = 1.0 if isinstance(self.ask, ReliabilityAsk) else float("inf")
        if not 0 < self.at_least < highest:
            what = "reliability between 0 and 1" if isinstance(self.ask, ReliabilityAsk) else "life above 0"
            raise DataError([f"{self.at_least:g} cannot be required: give a {what}, both ends excluded."])

    def text(self, life_unit: str) -> str:
        """Return the requirement in words: B10 life at least 1000 h, with 95 % confidence."""
        percent = as_given(100 * self.confidence)
        if isinstance(self.ask, LifeAsk):
            value = f"{as_given(self.at_least)} {life_unit}".rstrip()
        else:
            value = as_given(self.at_least)
        return f"{ask_title(self.ask, life_unit)} at least {value}, with {percent} % confidence"


@dataclass(frozen=True)
class Judgement:
    """A requirement held against a fit.

    Attributes
    ----------
    requirement : Requirement
    verdict : Verdict
    lower, upper : float or None
        The one-sided bounds of the reading, each with `confidence`.
    confidence : float
        The requirement's, or, adjusted for repeated looks, a higher one.
    look : int
        How often the requirement has been judged, this time counted.
    bound_used : str
        The kind of the bounds.
    """

    requirement: Requirement
    verdict: Verdict
    lower: float | None
    upper: float | None
    confidence: float
    look: int
    bound_used: str

    def sentence(self, life_unit: str) -> str:
        """Return the verdict with the bound that decides it."""
        head = f"{self.requirement.text(life_unit)}: {self.verdict.value}"
        percent = f"With {as_given(round(100 * self.confidence, 6))} % confidence"
        ask, unit = self.requirement.ask, life_unit
        low = "?" if self.lower is None else value_text(ask, self.lower, unit, toward="down")
        high = "?" if self.upper is None else value_text(ask, self.upper, unit, toward="up")
        match self.verdict:
            case Verdict.MET:
                return f"{head}. {percent} it is at least {low}."
            case Verdict.NOT_MET:
                return f"{head}. {percent} it is at most {high}."
        if self.lower is None and self.upper is None:
            return f"{head}: there is no bound to judge by."
        return f"{head}. {percent} it is at least {low}; with the same confidence it is at most {high}."

    @property
    def cautions(self) -> tuple[Caution, ...]:
        """What repeated looks do to a fixed confidence."""
        if self.look < 2 or self.confidence != self.requirement.confidence:
            return ()
        error = 100 * min(1.0, self.look * (1.0 - self.requirement.confidence))
        text = (
            f"This is look {self.look} at this requirement: repeated looks weaken a fixed confidence, so that after "
            f"{self.look} of them a wrong verdict may come up to {as_given(round(error, 3))} % of the time. Ask for "
            "the adjusted bound, or judge only at looks fixed beforehand."
        )
        return (Caution("repeated-looks", Severity.CAUTION, text),)


def judge(fitted: Fit, requirement: Requirement, *, kind: str, look: int, adjusted: bool = False) -> Judgement:
    """Hold a requirement against a fit.

    Parameters
    ----------
    kind : str
        The kind of bound, as the basis names it.
    look : int
        How often the requirement has been judged, this time counted.
    adjusted : bool
        Spend the error over all looks, instead of allowing it at each.

    Raises
    ------
    BoundUnavailable
        If the kind of bound does not exist here.
    """
    confidence = adjusted_confidence(requirement.confidence, look) if adjusted else requirement.confidence
    ask = requirement.ask
    question = question_of(fitted, ask)
    below = question.bounds(confidence=confidence, side="lower", kind=kind)
    lower, upper, used = _number(below.lower), None, below.kind
    if fitted.converged:  # without a failure there is no upper bound
        above = question.bounds(confidence=confidence, side="upper", kind=kind)
        upper, used = _number(above.upper), above.kind
    verdict = Verdict.CANNOT_BE_TOLD
    if lower is not None and lower >= requirement.at_least:
        verdict = Verdict.MET
    elif upper is not None and upper < requirement.at_least:
        verdict = Verdict.NOT_MET
    return Judgement(requirement, verdict, lower, upper, confidence, look, used)


def _number(end: NDArray[np.float64] | None) -> float | None:
    return None if end is None else float(end[0])


def adjusted_confidence(confidence: float, look: int) -> float:
    """Return the confidence of the k-th look that lets all looks together err with 1 - confidence at the most."""
    return min(1.0 - (1.0 - confidence) / (look * (look + 1)), MOST_CONFIDENCE)
