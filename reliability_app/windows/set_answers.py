"""Keeps the latest answer to each set, and knows which still hold, which may be drawn, and what is to be asked."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from reliability_app.session.analysis import Question, SetAnalysis
from reliability_app.session.document import Session, UnitSet


@dataclass(frozen=True, eq=False)
class Wanted:
    """One question, and the quick answer to it where only the slow one is still to come."""

    question: Question
    provisional: SetAnalysis | None = None


class SetAnswers:
    """The answers to the sets of a session.

    An answer *holds* while units, basis, readings asked for and unit of life are what they were when it was asked. It
    can be *drawn* while its curves are true, which other readings do not change. A new name, colour or place is
    written into an answer and costs no analysis.
    """

    def __init__(self, session: Session) -> None:
        self._session = session
        self._kept: list[tuple[UnitSet, SetAnalysis]] = []
        self._asked: list[tuple[UnitSet, Question]] = []

    def forget(self) -> None:
        """Drop every answer."""
        self._kept, self._asked = [], []

    def take(self, analysis: SetAnalysis) -> UnitSet | None:
        """Keep an answer to one of the questions put last; return its set, None where it is gone."""
        found = next((one for one, question in self._asked if question is analysis.question), None)
        if found is None or not any(found is one for one in self._session.sets):
            return None
        self.keep(found, analysis)
        return found

    def keep(self, unit_set: UnitSet, analysis: SetAnalysis) -> None:
        """Keep an answer in the place of an earlier one; those of sets that are gone go."""
        there = self._session.sets
        others = [(one, kept) for one, kept in self._kept if one is not unit_set and any(one is set_ for set_ in there)]
        self._kept = [*others, (unit_set, analysis)]

    def held(self, place: int) -> SetAnalysis | None:
        """Return the answer to the set at a place, if it holds."""
        drawn = self.drawn(place)
        return drawn if drawn is not None and drawn.question.asks == self._session.asks else None

    def drawn(self, place: int) -> SetAnalysis | None:
        """Return the answer to the set at a place, if its curves are true; its readings may be other ones."""
        unit_set = self._session.sets[place]
        analysis = next((kept for one, kept in self._kept if one is unit_set), None)
        if analysis is None or not _same_curves(analysis.question, unit_set, self._session.life_unit):
            return None
        named = _with_looks(analysis, unit_set)
        if named is not analysis:
            self.keep(unit_set, named)
        return named

    def shown(self, current: int) -> list[int]:
        """Return the places of the sets that pages draw: those not hidden, and the one worked on."""
        return [place for place, one in enumerate(self._session.sets) if place == current or not one.hidden]

    def all_held(self, current: int) -> list[SetAnalysis] | None:
        """Return the answers to all sets that are shown; None while one is still to come."""
        found = [self.held(place) for place in self.shown(current)]
        return None if None in found else [one for one in found if one is not None]

    def ask(self, current: int) -> list[Wanted] | None:
        """Return what is to be asked about the sets shown, the current one first; None where just that was asked last.

        The questions count as asked from now on.
        """
        places = [current, *(place for place in self.shown(current) if place != current)]
        open_ones = [(place, self.held(place)) for place in places]
        open_ones = [(place, held) for place, held in open_ones if held is None or held.is_provisional]
        if open_ones and self._is_asked([place for place, _ in open_ones]):
            return None
        wanted = [
            Wanted(Question.about(self._session, place)) if held is None else Wanted(held.question, held)
            for place, held in open_ones
        ]
        self._asked = [
            (self._session.sets[place], one.question) for (place, _), one in zip(open_ones, wanted, strict=True)
        ]
        return wanted

    def settle(self) -> None:
        """Note that nothing is being worked on: the next questions are put whatever was asked before."""
        self._asked = []

    def _is_asked(self, places: Sequence[int]) -> bool:
        """True where the questions about these sets are among those put last, the first of them first of those open."""
        sets = [self._session.sets[place] for place in places]
        still_open = [(one, question) for one, question in self._asked if any(one is wanted for wanted in sets)]
        return [one for one, _ in still_open] == sets and all(
            _same_curves(question, one, self._session.life_unit) and question.asks == self._session.asks
            for one, question in still_open
        )


def _same_curves(question: Question, unit_set: UnitSet, life_unit: str) -> bool:
    return (
        question.revision == unit_set.table.revision
        and question.basis == unit_set.basis
        and question.life_unit == life_unit
    )


def _with_looks(analysis: SetAnalysis, unit_set: UnitSet) -> SetAnalysis:
    """Return the answer under the present name and colour of its set."""
    if (analysis.question.name, analysis.question.colour) == (unit_set.name, unit_set.colour):
        return analysis
    name, colour = unit_set.name, unit_set.colour
    question = replace(analysis.question, name=name, colour=colour)
    return replace(analysis, question=question, picture=replace(analysis.picture, name=name, colour=colour))
