"""Records visits of a session, and labels, deletes and compares them; each change is an edit that can be taken back."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterator, Sequence
from dataclasses import asdict, dataclass, field, replace
from datetime import datetime
from math import isfinite

import numpy as np

from reliability_app import __version__
from reliability_app.engine.bounds.calibrated import SEED
from reliability_app.engine.errors import RigpaperError
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.document import ASK_NAMES, Basis, Change, Session, UnitSet
from reliability_app.session.edit import Edit
from reliability_app.session.held_requirement import HeldRequirement
from reliability_app.session.json_visits import instant_text, required_entries
from reliability_app.session.json_write import as_number
from reliability_app.session.packed_units import columns_and_rows, packed, rows_of
from reliability_app.session.picture import Reading
from reliability_app.session.requirement import Judgement, Verdict, judge
from reliability_app.session.taking_readings import bound_side
from reliability_app.session.visit import Visit, asks_of, basis_of


class VisitRefused(RigpaperError):
    """A visit that cannot be recorded now."""


@dataclass(eq=False)
class RecordVisit(Edit):
    """Put a visit among the others, in the order of time; it is one look at the requirement."""

    visit: Visit
    _place: int = field(default=0, init=False, repr=False)
    _requirement: HeldRequirement | None = field(default=None, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"recording of the visit {self.visit.title}"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("visits")

    def _do(self, session: Session) -> None:
        self._place = bisect_right(session.visits, self.visit.at, key=lambda visit: visit.at)
        session.visits.insert(self._place, self.visit)
        self._requirement = session.requirement
        looks = [one.judged.look for one in self.visit.record.sets if one.judged is not None]
        if session.requirement is not None and looks:
            session.requirement = replace(session.requirement, looks=max(session.requirement.looks, *looks))

    def _undo(self, session: Session) -> None:
        del session.visits[self._place]
        session.requirement = self._requirement


@dataclass(eq=False)
class DeleteVisit(Edit):
    """Take a visit out of the session; a look that it was at the requirement stays counted."""

    place: int
    _gone: Visit | None = field(default=None, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"deletion of the visit {self._gone.title}" if self._gone is not None else "deletion of a visit"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("visits")

    def _do(self, session: Session) -> None:
        self._gone = session.visits.pop(self.place)

    def _undo(self, session: Session) -> None:
        assert self._gone is not None
        session.visits.insert(self.place, self._gone)


@dataclass(eq=False)
class RelabelVisit(Edit):
    """Call a visit something else; what it recorded stays as it is."""

    place: int
    new: str
    _before: Visit | None = field(default=None, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "labelling of a visit"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("visits")

    def _do(self, session: Session) -> None:
        self._before = session.visits[self.place]
        session.visits[self.place] = self._before.relabelled(self.new)

    def _undo(self, session: Session) -> None:
        assert self._before is not None
        session.visits[self.place] = self._before


def record_visit(
    session: Session,
    analyses: Sequence[SetAnalysis],
    label: str = "",
    at: datetime | None = None,
    *,
    judgements: Sequence[Judgement | None] | None = None,
) -> RecordVisit:
    """Give the edit that records the session as it stands.

    Parameters
    ----------
    session : Session
    analyses : sequence of SetAnalysis
        One for each set, in order, of the units as they stand now.
    label : str
    at : datetime, optional
        With a zone; now, if not given.
    judgements : sequence, optional
        Of each set, where they are known already (see `judged`); else they are taken here, which may take seconds.

    Raises
    ------
    VisitRefused
        While bounds are still being computed, or an analysis belongs to other units or another basis.
    """
    moment = at if at is not None else datetime.now().astimezone().replace(microsecond=0)
    if moment.tzinfo is None:
        raise VisitRefused("The time of a visit needs its zone, as in 2026-03-02T14:00:00+01:00.")
    _check_current(session, analyses)
    held, look = session.requirement, look_of_today(session)
    if judgements is None:
        judgements = [None if held is None else judged(held, analysis, look=look) for analysis in analyses]
    sets = [
        _set_content(unit_set, analysis, judgement)
        for unit_set, analysis, judgement in zip(session.sets, analyses, judgements, strict=True)
    ]
    content: dict[str, object] = {"at": instant_text(moment), "label": label, "life_unit": session.life_unit}
    if held is not None:
        content["requirement"] = required_entries(replace(held, looks=look))
    return RecordVisit(Visit.of({**content, "sets": sets}))


def _check_current(session: Session, analyses: Sequence[SetAnalysis]) -> None:
    if len(analyses) != len(session.sets):
        raise VisitRefused("A visit records every set: have each of them analysed first.")
    for unit_set, analysis in zip(session.sets, analyses, strict=True):
        if analysis.is_provisional:
            raise VisitRefused(
                f"The bounds of {unit_set.name} are still being computed: record the visit when they stand."
            )
        question = analysis.question
        if (question.revision, question.basis, question.asks) != (
            unit_set.table.revision,
            unit_set.basis,
            session.asks,
        ):
            raise VisitRefused(
                f"The readings of {unit_set.name} are not those of its units as they stand now: wait for them."
            )


def judged(
    held: HeldRequirement, analysis: SetAnalysis, *, look: int, adjusted: bool | None = None
) -> Judgement | None:
    """Hold the requirement against a set's fit; None without a fit, and without a verdict where no bound exists.

    Parameters
    ----------
    look : int
        Which look it is: see `look_of_today`.
    adjusted : bool, optional
        As the session has it, if not given.
    """
    if analysis.fit is None:
        return None
    chosen = held.adjusted if adjusted is None else adjusted
    try:
        return judge(analysis.fit, held.requirement, kind=analysis.question.basis.bound, look=look, adjusted=chosen)
    except RigpaperError:
        confidence = held.requirement.confidence
        return Judgement(held.requirement, Verdict.CANNOT_BE_TOLD, None, None, confidence, look, "")


def look_of_today(session: Session) -> int:
    """Give which look at the requirement today's is: one more than so far, unless the units are those judged last."""
    held = session.requirement
    if held is None or held.looks == 0:
        return 1
    same = session.visits and not differs_from_last(session) and session.visits[-1].at >= held.set_at
    return held.looks if same else held.looks + 1


def differs_from_last(session: Session, analyses: Sequence[SetAnalysis] | None = None) -> tuple[str, ...]:
    """Name what has changed since the last visit: ("the units of Design A", "the readings asked for").

    Empty where nothing has; ("everything",) where there is no visit. With the analyses of today, answers that differ
    though units and basis are the same (another engine) are named too.
    """
    if not session.visits:
        return ("everything",)
    last = session.visits[-1]
    recorded = {one.name: one for one in last.record.sets}
    found = []
    for place, unit_set in enumerate(session.sets):
        then = recorded.pop(unit_set.name, None)
        if then is None:
            found.append(f"the set {unit_set.name}")
            continue
        if columns_and_rows(unit_set.table) != (then.units.columns, rows_of(then.units)):
            found.append(f"the units of {unit_set.name}")
        elif basis_of(then.basis) != unit_set.basis:
            found.append(f"the basis of {unit_set.name}")
        elif analyses is not None and _answers_differ(last, unit_set.name, analyses[place]):
            found.append(f"the readings of {unit_set.name}")
    found += [f"the set {name}" for name in recorded]
    if set(asks_of(last)) != set(session.asks) and asks_of(last):
        found.append("the readings asked for")
    if last.record.life_unit != session.life_unit:
        found.append("the unit of the lives")
    return tuple(found)


def _answers_differ(last: Visit, name: str, analysis: SetAnalysis) -> bool:
    then = last.set_named(name)
    recorded = [] if then is None else [(one.estimate, one.lower, one.upper) for one in then.readings]
    return recorded != [(_estimate(one), one.lower, one.upper) for one in analysis.readings]


# What is recorded


def _set_content(unit_set: UnitSet, analysis: SetAnalysis, judgement: Judgement | None) -> dict[str, object]:
    table, fitted, counts = unit_set.table, analysis.fit, analysis.question.counts
    content: dict[str, object] = {"name": unit_set.name, "units": packed(table)}
    if counts.unread:
        content["unread_rows"] = [row + 1 for row in range(table.row_count) if table.row_is_read(row) is False]
    content |= {"counts": asdict(counts), "basis": dict(_basis_entries(unit_set.basis))}
    if fitted is not None and fitted.converged and fitted.parameters is not None:
        content |= {
            "parameters": {name: _number(value) for name, value in fitted.parameters.items()},
            "log_likelihood": _number(fitted.log_likelihood),
        }
        if fitted.covariance is not None and np.isfinite(fitted.covariance).all():
            content["covariance_of"] = list(fitted.coordinates)
            content["covariance"] = [[_number(value) for value in row] for row in fitted.covariance.tolist()]
    content["readings"] = [dict(_reading_entries(reading)) for reading in analysis.readings]
    if judgement is not None:
        content["judged"] = {
            "verdict": judgement.verdict.value,
            "confidence": _number(judgement.confidence),
            "look": judgement.look,
            "lower": _number(judgement.lower),
            "upper": _number(judgement.upper),
            "bound_used": judgement.bound_used,
        }
    return {**content, "engine": __version__, "seed": SEED}


def _basis_entries(basis: Basis) -> Iterator[tuple[str, object]]:
    usual = Basis()
    for name in ("family", "fit", "bound", "confidence", "side", "threshold", "shape"):
        value = getattr(basis, name)
        if name not in ("threshold", "shape") or value != getattr(usual, name):
            yield name, as_number(value) if isinstance(value, float) else value


def _reading_entries(reading: Reading) -> Iterator[tuple[str, object]]:
    yield "ask", ASK_NAMES[type(reading.ask)]
    for name, value in asdict(reading.ask).items():
        yield name, as_number(value)
    estimate = _estimate(reading)
    yield "estimate", estimate if isinstance(estimate, str) else _number(estimate)
    yield "lower", _number(reading.lower)
    yield "upper", _number(reading.upper)
    yield "side", bound_side(reading.ask, reading.basis.side)
    yield "confidence", as_number(reading.basis.confidence)
    yield "bound", reading.basis.bound
    yield "bound_used", reading.bound_used or None


def _estimate(reading: Reading) -> float | str | None:
    if reading.estimate is None or isfinite(reading.estimate):
        return reading.estimate
    return "infinite"


def _number(value: float | None) -> object:
    """Give a number as it is written; null where JSON has none."""
    return as_number(float(value)) if value is not None and isfinite(value) else None
