"""Computes a visit anew from the units and the basis it recorded, and says where this engine gives other numbers."""

from __future__ import annotations

from dataclasses import dataclass
from math import isclose

from reliability_app import __version__
from reliability_app.engine.bounds import Proceed
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import USUAL_ASKS, Session
from reliability_app.session.picture import Reading
from reliability_app.session.visit import Visit, asks_of, unit_sets_of
from reliability_app.session.visit_history import readings_of
from reliability_app.session.wording import ask_title, value_text

ROUNDING = 1e-6
"""Relative difference up to which two numbers count as the same: what another machine's arithmetic may make."""


@dataclass(frozen=True, eq=False)
class Difference:
    """A number of a visit that comes out otherwise now."""

    set_name: str
    stored: Reading
    now: Reading
    life_unit: str

    @property
    def sentence(self) -> str:
        """Both numbers in words."""
        ask, unit = self.stored.ask, self.life_unit
        told = []
        for what in ("estimate", "lower", "upper"):
            before, after = getattr(self.stored, what), getattr(self.now, what)
            if not _same(before, after):
                words = ["none" if one is None else _digits(value_text(ask, one, unit), one) for one in (before, after)]
                told.append(
                    f"{'lower bound' if what == 'lower' else 'upper bound' if what == 'upper' else what}"
                    f" {words[0]} then, {words[1]} now"
                )
        return f"{self.set_name}, {ask_title(ask, unit)}: {'; '.join(told)}."


@dataclass(frozen=True, eq=False)
class Reproduced:
    """A visit computed anew.

    Attributes
    ----------
    visit : Visit
    analyses : tuple of SetAnalysis
        One for each of its sets.
    differences : tuple of Difference
        Where the numbers differ by more than rounding.
    """

    visit: Visit
    analyses: tuple[SetAnalysis, ...]
    differences: tuple[Difference, ...]

    @property
    def sentence(self) -> str:
        """What is to be said of the differences; "" where there are none."""
        if not self.differences:
            return ""
        engines = sorted({one.engine for one in self.visit.record.sets if one.engine})
        then = f" by version {', '.join(engines)}" if engines else ""
        told = " ".join(one.sentence for one in self.differences)
        return f"Visit {self.visit.title} was computed{then}; this version {__version__} gives other numbers. {told}"


def session_of(visit: Visit) -> Session:
    """Give a session of the sets, the basis and the readings of a visit."""
    return Session(
        title=visit.title,
        life_unit=visit.record.life_unit,
        sets=unit_sets_of(visit) or None,
        asks=asks_of(visit) or USUAL_ASKS,
    )


def reproduce(visit: Visit, *, proceed: Proceed | None = None) -> Reproduced:
    """Compute a visit anew and compare; `proceed` is called between pieces of slow work and may end it by raising."""
    session = session_of(visit)
    places = range(len(visit.record.sets))
    analyses = tuple(analyse(Question.about(session, place), proceed=proceed) for place in places)
    return Reproduced(visit, analyses, differences(visit, analyses))


def differences(visit: Visit, analyses: tuple[SetAnalysis, ...]) -> tuple[Difference, ...]:
    """Compare analyses of the sets of a visit with the readings it recorded."""
    found = []
    for analysis in analyses:
        now = {one.ask: one for one in analysis.readings}
        for stored in readings_of(visit, analysis.question.name):
            again = now.get(stored.ask)
            if again is not None and not _agree(stored, again):
                found.append(Difference(analysis.question.name, stored, again, visit.record.life_unit))
    return tuple(found)


def computed_otherwise(session: Session) -> tuple[Visit, ...]:
    """Give the visits that another version has computed, so that `reproduce` is worth its time."""
    return tuple(
        visit
        for visit in session.visits
        if any(one.readings and one.engine != __version__ for one in visit.record.sets)
    )


def _agree(stored: Reading, now: Reading) -> bool:
    return all(_same(getattr(stored, what), getattr(now, what)) for what in ("estimate", "lower", "upper"))


def _same(one: float | None, other: float | None) -> bool:
    if one is None or other is None:
        return one is other
    return isclose(one, other, rel_tol=ROUNDING)


def _digits(text: str, value: float) -> str:
    """Give a value with more digits than usual, so that a small difference shows."""
    return f"{text} ({value:.7g})"
