"""CandidateTable: every family fitted to a set's units at once, p-values simulated family by family when asked for."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from reliability_app.engine import FAMILY_NAMES, LifeData, fit
from reliability_app.engine.bounds import Proceed
from reliability_app.engine.candidates import ALIKE_WITHIN, Candidate, verdict_of
from reliability_app.engine.errors import DataError
from reliability_app.engine.families import family
from reliability_app.engine.goodness import goodness_of
from reliability_app.session.analysis import Question, SetAnalysis
from reliability_app.session.compared_families import USUAL_PERCENT
from reliability_app.session.document import LifeAsk
from reliability_app.session.wording import age_text, ask_title, verdict_sentence


@dataclass(frozen=True, eq=False)
class CandidateTable:
    """The candidates of one set, best by AICc first.

    Attributes
    ----------
    question : Question
        What was analysed: units, unit of life, and the basis at the time.
    percent : float
        The B-life compared.
    candidates : tuple of Candidate
    tested : int
        Families whose p-values have been simulated so far.
    """

    question: Question
    percent: float
    candidates: tuple[Candidate, ...]
    tested: int = 0

    @property
    def life_title(self) -> str:
        """What the lives are: B10 life."""
        return ask_title(LifeAsk(self.percent), self.question.life_unit)

    @property
    def to_test(self) -> int:
        """How many families have an estimate that can be tested."""
        return sum(one.is_fitted for one in self.candidates)

    @property
    def sentence(self) -> str:
        """What can be said of the choice."""
        return verdict_sentence(verdict_of(self.candidates, self.percent / 100.0), self.question.life_unit)

    def is_about(self, analysis: SetAnalysis) -> bool:
        """True where these are candidates of the units of an analysis, compared in its B-life."""
        return self._has_units_of(analysis.question) and percent_of(analysis.question) == self.percent

    def read_anew(self, analysis: SetAnalysis) -> CandidateTable:
        """Return the table with the B-life that an analysis asks for; itself where that is of other units."""
        question = analysis.question
        percent = percent_of(question)
        if percent == self.percent or not self._has_units_of(question):
            return self
        read = tuple(
            replace(one, life=float(one.fit.life(percent / 100.0))) if one.is_fitted and one.fit is not None else one
            for one in self.candidates
        )
        return replace(self, question=question, percent=percent, candidates=read)

    def _has_units_of(self, asked: Question) -> bool:
        mine = self.question
        return (
            asked.name == mine.name
            and asked.revision == mine.revision
            and asked.life_unit == mine.life_unit
            and _same_units(asked, mine)
        )

    def cells(self, place: int) -> tuple[str, ...]:
        """Return the texts of one candidate: family, criteria, tests, life, and where it stands."""
        one = self.candidates[place]
        distance, straightness = one.anderson_darling, one.correlation
        p_value = None if distance is None else distance.p_value
        return (
            one.title,
            _decimals(one.log_likelihood if one.is_fitted else None, 2),
            _decimals(one.aicc, 2),
            _decimals(one.bic, 2),
            _decimals(p_value, 3),
            _decimals(None if straightness is None else straightness.statistic, 4),
            "" if one.life is None else age_text(one.life, self.question.life_unit),
            self.standing(one),
        )

    @property
    def headings(self) -> tuple[str, ...]:
        """What stands above the cells."""
        return (
            "Family",
            "Log-likelihood",
            "AICc",
            "BIC",
            "Anderson-Darling p",
            "Plot correlation",
            self.life_title,
            "By AICc",
        )

    def standing(self, one: Candidate) -> str:
        """Say how a candidate stands against the best, or why it cannot be compared."""
        lowest = next((other.aicc for other in self.candidates if other.aicc is not None), None)
        if not one.is_fitted:
            return one.reason
        if one.aicc is None or lowest is None:
            return "too few units for AICc"
        if self.candidates[0] is one:
            return "best"
        apart = one.aicc - lowest
        return "cannot be told from the best" if apart < ALIKE_WITHIN else f"worse by {apart:.1f}"


def compare_quickly(analysis: SetAnalysis) -> CandidateTable | None:
    """Fit every family to the units of an analysis, without p-values; None where there are no units to fit."""
    if analysis.fit is None:
        return None
    question, data = analysis.question, analysis.fit.data
    percent = percent_of(question)
    found = [_fitted(data, name, percent / 100.0) for name in FAMILY_NAMES]
    return CandidateTable(question, percent, tuple(sorted(found, key=_place)))


def with_p_values(table: CandidateTable, *, proceed: Proceed | None = None) -> Iterator[CandidateTable]:
    """Give the table again and again, each time with the tests of one more family."""
    candidates = list(table.candidates)
    for place, one in enumerate(table.candidates):
        if not one.is_fitted or one.fit is None:
            continue
        if one.goodness is None:
            candidates[place] = replace(one, goodness=goodness_of(one.fit, proceed=proceed))
        table = replace(table, candidates=tuple(candidates), tested=table.tested + 1)
        yield table


def percent_of(question: Question) -> float:
    """Return the percent of the B-life that is compared: the first one asked for."""
    return next((ask.percent for ask in question.asks if isinstance(ask, LifeAsk)), USUAL_PERCENT)


def _fitted(data: LifeData, name: str, fraction: float) -> Candidate:
    title = family(name).title
    try:
        found = fit(data, name)
    except DataError as trouble:  # a family of ln life, and a life that is not positive
        return Candidate(name, title, None, str(trouble), None, None)
    if not found.converged:
        return Candidate(name, title, found, found.cautions[0].text, None, None)
    return Candidate(name, title, found, "", None, float(found.life(fraction)))


def _place(one: Candidate) -> tuple[int, float]:
    if one.aicc is not None:
        return 0, one.aicc
    return (1, -(one.log_likelihood or 0.0)) if one.is_fitted else (2, 0.0)


def _same_units(first: Question, second: Question) -> bool:
    """True for the units of one table at one revision, or of a table opened anew with the same units."""
    mine, other = first.units, second.units
    return mine is other or (
        mine.rows == other.rows
        and bool((mine.lower == other.lower).all())
        and bool((mine.upper == other.upper).all())
        and bool((mine.quantity == other.quantity).all())
        and bool((mine.entered == other.entered).all())
    )


def _decimals(value: float | None, places: int) -> str:
    return "" if value is None else f"{value:.{places}f}"
