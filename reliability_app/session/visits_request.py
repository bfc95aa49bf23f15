"""Answers `rigpaper visits`: the list of visits, the drift of a reading, and foretold beside found."""

from __future__ import annotations

import json
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import asdict, dataclass, fields
from math import isfinite
from pathlib import Path

import msgspec

from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import ASK_NAMES, Ask, Session
from reliability_app.session.json_schema_types import Judged
from reliability_app.session.reading_request import AsksWanted, RequestRefused, opened, places_named
from reliability_app.session.requirement import Judgement
from reliability_app.session.visit_agreement import Agreements, Held
from reliability_app.session.visit_history import Changes, HistoryPoint, changes_between, history, set_then
from reliability_app.session.visits import judged, look_of_today
from reliability_app.session.wording import ask_title, counts_text


@dataclass(frozen=True, eq=False)
class Step:
    """What came between a visit and the one before."""

    changes: Changes | None
    held: Held | None


@dataclass(frozen=True, eq=False)
class SetHistory:
    """One set through the visits: the points, and for each but the first what came before it."""

    name: str
    ask: Ask
    points: tuple[HistoryPoint, ...]
    steps: tuple[Step, ...]
    judgement: Judgement | None


@dataclass(frozen=True, eq=False)
class VisitsAnswer:
    """The visits of a session, read without a window."""

    file: Path
    session: Session
    sets: tuple[SetHistory, ...]

    @property
    def has_visits(self) -> bool:
        """True where there is at least one."""
        return bool(self.session.visits)

    def as_text(self) -> str:
        """Return sentences for a terminal."""
        count = len(self.session.visits)
        title = self.session.title or self.file.stem
        lines = [f"{title}: {count} visit{'' if count == 1 else 's'}"]
        lines += [f"  {change.sentence(self.session.life_unit)}" for change in self.session.requirement_log]
        for one in self.sets:
            lines += ["", f"{one.name}, {ask_title(one.ask, self.session.life_unit)}", *self._lines(one)]
        return "\n".join(lines)

    def _lines(self, one: SetHistory) -> Iterator[str]:
        unit = self.session.life_unit
        for point, step in zip(one.points, one.steps, strict=True):
            number = "" if point.place is None else f"{point.place + 1}. "
            yield f"  {number}{point.title}: {counts_text(point.counts)}. {point.sentence(unit)}"
            if step.changes is not None:
                yield f"     Since the visit before: {step.changes.sentence}"
            if step.held is not None:
                yield f"     Foretold and found: {step.held.sentence}"
                yield from (f"       {remark}" for remark in step.held.remarks())
            if point.judged is not None:
                yield f"     Requirement: {point.judged.verdict} (look {point.judged.look})."
        if one.judgement is not None:
            yield f"     {one.judgement.sentence(unit)}"
            yield from (f"     ! {caution.text}" for caution in one.judgement.cautions)

    def as_json(self) -> str:
        """Return one JSON object; absent numbers are null."""
        found = {
            "file": str(self.file),
            "life_unit": self.session.life_unit,
            "visits": [{"at": visit.at.isoformat(), "label": visit.label} for visit in self.session.visits],
            "requirement_log": [change.sentence(self.session.life_unit) for change in self.session.requirement_log],
            "sets": [self._set_object(one) for one in self.sets],
        }
        return json.dumps(found, indent=2, ensure_ascii=False, allow_nan=False)

    def _set_object(self, one: SetHistory) -> dict[str, object]:
        return {
            "name": one.name,
            "reading": {"ask": ASK_NAMES[type(one.ask)], **asdict(one.ask)},
            "points": [_point_object(*pair) for pair in zip(one.points, one.steps, strict=True)],
            "requirement_today": None if one.judgement is None else _judgement_object(one.judgement),
        }


def visits_request(
    file: Path, wanted: AsksWanted | None = None, *, set_name: str | None = None, foretold: bool = True
) -> VisitsAnswer:
    """Open a session and follow its main reading, or the first one named, through its visits.

    Parameters
    ----------
    foretold : bool
        Hold what failed against what was foretold, which takes a second or so a visit.

    Raises
    ------
    RequestRefused
        For a table, which has no visits, or a set or number that cannot be used.
    SessionUnreadable, TableUnreadable
        For a file that cannot be read.
    """
    asks = wanted.asks() if wanted else ()
    found = opened(file, None)
    session = found.session
    if not found.is_session:
        raise RequestRefused(f"{file} is a table, and visits are kept in sessions: open it, and save it as one.")
    session.asks = (*asks, *(ask for ask in session.asks if ask not in asks))
    cache = Agreements()
    sets = tuple(_set_history(session, place, cache if foretold else None) for place in places_named(session, set_name))
    return VisitsAnswer(file, session, sets)


def _set_history(session: Session, place: int, cache: Agreements | None) -> SetHistory:
    name, ask = session.sets[place].name, session.asks[0]
    today = analyse(Question.about(session, place), with_curves=False) if session.visits else None
    points = history(session, name, ask, today)
    before: Sequence[HistoryPoint | None] = (None, *points)[: len(points)]
    steps = tuple(_step(session, name, pair, cache) for pair in zip(before, points, strict=True))
    return SetHistory(name, ask, points, steps, _judged_today(session, today))


def _judged_today(session: Session, today: SetAnalysis | None) -> Judgement | None:
    if session.requirement is None or today is None:
        return None
    return judged(session.requirement, today, look=look_of_today(session))


def _step(
    session: Session, name: str, pair: tuple[HistoryPoint | None, HistoryPoint], cache: Agreements | None
) -> Step:
    before, point = pair
    if before is None or before.place is None:
        return Step(None, None)
    then, now = set_then(session, name, before.place), set_then(session, name, point.place)
    changes = changes_between(then, now) if then is not None and now is not None else None
    if cache is None or changes is None or not changes.units_differ:
        return Step(changes, None)
    held = cache.between(session, name, before.place, point.place)
    return Step(changes, held)


def _point_object(point: HistoryPoint, step: Step) -> dict[str, object]:
    reading = point.reading
    numbers: Mapping[str, float | None] = (
        {} if reading is None else {name: getattr(reading, name) for name in ("estimate", "lower", "upper")}
    )
    return {
        "visit": None if point.place is None else point.place + 1,
        "title": point.title,
        "at": point.at.isoformat(timespec="seconds"),
        **asdict(point.counts),
        **{name: value if value is not None and isfinite(value) else None for name, value in numbers.items()},
        "bound_used": None if reading is None else reading.bound_used or None,
        "basis": {one.name: getattr(point.basis, one.name) for one in fields(point.basis) if one.name != "kept"},
        "requirement": None if point.judged is None else _judged_object(point.judged),
        "changes": None if step.changes is None else step.changes.sentence,
        "agreement": None if step.held is None else _held_object(step.held),
    }


def _held_object(held: Held) -> dict[str, object]:
    found = held.agreement
    numbers: dict[str, object] = {}
    if found is not None:
        least, most = found.limits
        numbers = {
            "least": least,
            "most": most,
            "expected": found.foretold.expected,
            "found": found.found,
            "agrees": found.agrees,
            "mid_p": found.mid_p,
        }
    units = [asdict(row) for row in held.rows()]
    return {"sentence": held.sentence, **numbers, "remarks": list(held.remarks()), "units": units}


def _judged_object(one: Judged) -> dict[str, object]:
    return dict(msgspec.structs.asdict(one))


def _judgement_object(one: Judgement) -> dict[str, object]:
    return {
        "verdict": one.verdict.value,
        "confidence": one.confidence,
        "look": one.look,
        "lower": one.lower,
        "upper": one.upper,
        "bound_used": one.bound_used,
        "cautions": [caution.text for caution in one.cautions],
    }
