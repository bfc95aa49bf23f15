"""What visits ask for that takes a while, each in a thread of its own: comparing, foretelling, recording, judging."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from PySide6.QtCore import QObject

from reliability_app.engine.bounds import Proceed
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import Session, UnitSet
from reliability_app.session.held_requirement import HeldRequirement
from reliability_app.session.requirement import Judgement
from reliability_app.session.unit_table import UnitTable
from reliability_app.session.visit import Visit
from reliability_app.session.visit_agreement import Agreements, Held, pairs_in_turn
from reliability_app.session.visit_history import Changes, changes_between, set_then
from reliability_app.session.visit_reproduction import Reproduced, reproduce
from reliability_app.session.visits import judged
from reliability_app.windows.background import Worker

Pair = tuple[int, int | None]


@dataclass(frozen=True, eq=False)
class Compared:
    """What changed in a set between two visits; None where one of the two does not have the set."""

    pair: Pair
    changes: Changes | None


class VisitComparer(Worker):
    """Tells what changed between two visits (Compared), then what was foretold and found (Held), then other pairs."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__("comparison of visits", parent)
        self._agreements = Agreements()
        self._still: tuple[UnitTable, int, UnitTable] | None = None

    def compare(self, session: Session, place: int, pair: Pair) -> None:
        """Compare two visits of the set at a place, in the place of any other work."""
        name = session.sets[place].name
        still = self._standing_still(session, place)

        def work(proceed: Proceed) -> Iterator[Compared | Held]:
            then, now = (set_then(still, name, one) for one in pair)
            yield Compared(pair, None if then is None or now is None else changes_between(then, now))
            proceed()
            yield self._agreements.between(still, name, *pair, proceed=proceed)
            for other in pairs_in_turn(still, name):
                if other != pair:
                    yield self._agreements.between(still, name, *other, proceed=proceed)

        self.start(work)

    def _standing_still(self, session: Session, place: int) -> Session:
        """Return the session as this set needs it, with units that the user's next edit does not touch."""
        table = session.sets[place].table
        if self._still is None or self._still[0] is not table or self._still[1] != table.revision:
            copy = UnitTable()
            copy.restore(table.snapshot())
            self._agreements.forget_today()
            self._still = (table, table.revision, copy)
        sets = [UnitSet(one.name) for one in session.sets]
        sets[place] = UnitSet(session.sets[place].name, self._still[2], session.sets[place].basis)
        return Session(life_unit=session.life_unit, sets=sets, asks=session.asks, visits=list(session.visits))


def _heeding(analysis: SetAnalysis, proceed: Proceed) -> SetAnalysis:
    """Return the analysis with a fit that heeds this work, and no longer the work in which it was made."""
    return analysis if analysis.fit is None else replace(analysis, fit=replace(analysis.fit, proceed=proceed))


@dataclass(frozen=True, eq=False)
class JudgedSets:
    """The requirement held against sets: a name and a judgement each, None where a set has no fit."""

    held: HeldRequirement
    verdicts: tuple[tuple[str, Judgement | None], ...]


class RequirementJudge(Worker):
    """Holds the requirement against the sets shown, and tells JudgedSets."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__("judging of the requirement", parent)

    def judge(self, held: HeldRequirement, analyses: Sequence[SetAnalysis], look: int) -> None:
        """Judge these sets, in the place of any other work."""

        def work(proceed: Proceed) -> Iterator[JudgedSets]:
            verdicts = []
            for analysis in analyses:
                proceed()
                verdicts.append((analysis.question.name, judged(held, _heeding(analysis, proceed), look=look)))
            yield JudgedSets(held, tuple(verdicts))

        self.start(work)


@dataclass(frozen=True, eq=False)
class ReadyToRecord:
    """Everything a visit records that had to be computed, and the label it is to have."""

    label: str
    analyses: tuple[SetAnalysis, ...]
    judgements: tuple[Judgement | None, ...]
    then_save: bool


class VisitPreparer(Worker):
    """Analyses what is not analysed with the bounds of its basis yet, judges the requirement, tells ReadyToRecord."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__("recording of the visit", parent)

    def prepare(
        self,
        wanted: Sequence[SetAnalysis | Question],
        held: HeldRequirement | None,
        look: int,
        *,
        label: str,
        then_save: bool,
    ) -> None:
        """Prepare a visit of these sets: their answers, or questions where those are still open."""

        def work(proceed: Proceed) -> Iterator[ReadyToRecord]:
            analyses = tuple(
                analyse(one, with_curves=False, proceed=proceed) if isinstance(one, Question) else one for one in wanted
            )
            judgements = []
            for analysis in analyses:
                proceed()
                judgements.append(None if held is None else judged(held, _heeding(analysis, proceed), look=look))
            yield ReadyToRecord(label, analyses, tuple(judgements), then_save)

        self.start(work)


class VisitReproducer(Worker):
    """Computes visits anew, and tells those that come out otherwise, as one tuple of Reproduced."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__("computing of visits anew", parent)

    def reproduce(self, visits: Sequence[Visit]) -> None:
        """Compute these visits anew, the latest first."""

        def work(proceed: Proceed) -> Iterator[tuple[Reproduced, ...]]:
            found = (reproduce(visit, proceed=proceed) for visit in reversed(visits))
            yield tuple(one for one in found if one.differences)

        self.start(work)
