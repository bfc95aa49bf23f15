"""Every family fitted to the units of a set for comparison, with what can be said of the choice between them."""

from __future__ import annotations

from dataclasses import asdict, dataclass

from reliability_app.engine import FAMILY_NAMES
from reliability_app.engine.bounds import Proceed
from reliability_app.engine.candidates import Candidate, Verdict, compare, verdict_of
from reliability_app.engine.goodness import Goodness, goodness_of
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.document import LifeAsk
from reliability_app.session.wording import age_text, ask_title, verdict_sentence

USUAL_PERCENT = 10.0
_HEAD = ("Family", "Log-likelihood", "AICc", "BIC", "Anderson-Darling p")


@dataclass(frozen=True, eq=False)
class ComparedFamilies:
    """The candidates of a set, best first, compared in the B-life of a percent.

    Attributes
    ----------
    percent : float
    life_unit : str
    candidates : tuple of Candidate
    verdict : Verdict
    goodness : Goodness or None
        Of the fit that the basis names; None without one.
    """

    percent: float
    life_unit: str
    candidates: tuple[Candidate, ...]
    verdict: Verdict
    goodness: Goodness | None

    @property
    def sentence(self) -> str:
        """What can be said of the choice."""
        return verdict_sentence(self.verdict, self.life_unit)


def compare_families(analysis: SetAnalysis, *, proceed: Proceed | None = None) -> ComparedFamilies | None:
    """Fit every family to the units analysed; None where there are no units to fit.

    The lives compared are those of the first percent asked for.
    """
    question, fitted = analysis.question, analysis.fit
    if fitted is None:
        return None
    percent = next((ask.percent for ask in question.asks if isinstance(ask, LifeAsk)), USUAL_PERCENT)
    candidates = compare(fitted.data, FAMILY_NAMES, fraction=percent / 100.0, proceed=proceed)
    verdict = verdict_of(candidates, percent / 100.0)
    goodness = goodness_of(fitted, proceed=proceed) if fitted.converged else None
    return ComparedFamilies(percent, question.life_unit, candidates, verdict, goodness)


def table_lines(compared: ComparedFamilies) -> list[str]:
    """Return the candidates as lines of one width for a terminal, the reasons for what is missing, the verdict."""
    unit = compared.life_unit
    fitted = [one for one in compared.candidates if one.is_fitted]
    rows = [(*_HEAD, ask_title(LifeAsk(compared.percent), unit)), *(_row(one, unit) for one in fitted)]
    widths = [max(len(row[place]) for row in rows) for place in range(len(rows[0]))]
    lines = [
        "  ".join([row[0].ljust(widths[0]), *(map(str.rjust, row[1:], widths[1:]))]).rstrip()
        for row in rows
    ]  # fmt: skip
    lines += [f"{one.title}: {one.reason}" for one in compared.candidates if not one.is_fitted]
    lines += dict.fromkeys(one.goodness.reason for one in fitted if one.goodness and one.goodness.reason)
    return [*lines, compared.sentence]


def _row(one: Candidate, life_unit: str) -> tuple[str, ...]:
    test = one.anderson_darling
    p_value = None if test is None else test.p_value
    return (
        one.title,
        _decimals(one.log_likelihood, 3),
        _decimals(one.aicc, 2),
        _decimals(one.bic, 2),
        _decimals(p_value, 3),
        "" if one.life is None else age_text(one.life, life_unit),
    )


def _decimals(value: float | None, places: int) -> str:
    return "-" if value is None else f"{value:.{places}f}"


def as_objects(compared: ComparedFamilies) -> dict[str, object]:
    """Return the comparison for scripts; absent numbers are None."""
    return {
        "goodness": _goodness_object(compared.goodness),
        "candidates": [_candidate_object(one, compared.percent) for one in compared.candidates],
        "verdict": compared.sentence,
    }


def _candidate_object(one: Candidate, percent: float) -> dict[str, object]:
    return {
        "family": one.name,
        "converged": one.is_fitted,
        "reason": one.reason or None,
        "log_likelihood": one.log_likelihood,
        "aicc": one.aicc,
        "bic": one.bic,
        "goodness": _goodness_object(one.goodness),
        "percent": percent,
        "life": one.life,
    }


def _goodness_object(goodness: Goodness | None) -> dict[str, object] | None:
    if goodness is None:
        return None
    return {**asdict(goodness), "reason": goodness.reason or None}
