"""How a reading has moved from visit to visit, and what changed between two of them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from math import inf

from reliability_app.engine.families import family
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.document import Ask, Basis, Session
from reliability_app.session.json_schema_types import Judged, ReadingTaken
from reliability_app.session.new_results import Happened, News, news_of
from reliability_app.session.packed_units import unpacked
from reliability_app.session.picture import Reading
from reliability_app.session.unit_table import Counts, UnitTable
from reliability_app.session.visit import Visit, ask_of, basis_of, counts_of
from reliability_app.session.wording import BOUND_TITLES, SIDE_TITLES, as_given, reading_sentence

TODAY = "today"


@dataclass(frozen=True, eq=False)
class HistoryPoint:
    """One set at one visit, or today.

    Attributes
    ----------
    place : int or None
        Which visit of the session; None for today.
    title : str
        Its label and day, or "today".
    at : datetime
    counts : Counts
    basis : Basis
    reading : Reading or None
        The reading followed, as it was recorded; None where the visit did not take it.
    judged : Judged or None
        How the requirement stood.
    """

    place: int | None
    title: str
    at: datetime
    counts: Counts
    basis: Basis
    reading: Reading | None
    judged: Judged | None = None

    def sentence(self, life_unit: str) -> str:
        """The reading in words, or that there is none."""
        if self.reading is None:
            return "This reading was not taken."
        return reading_sentence(self.reading, life_unit)


def history(
    session: Session, name: str, ask: Ask, today: SetAnalysis | None = None, *, now: datetime | None = None
) -> tuple[HistoryPoint, ...]:
    """Follow a reading of a set through the visits, as they recorded it, up to today.

    Parameters
    ----------
    name : str
        Of the set; visits that do not have it are passed over.
    ask : Ask
    today : SetAnalysis, optional
        The set as it stands; without it the history ends at the last visit.
    now : datetime, optional
        The time of today's point.
    """
    points = []
    for place, visit in enumerate(session.visits):
        recorded = visit.set_named(name, of=len(session.sets))
        if recorded is not None:
            basis = basis_of(recorded.basis)
            reading = next((_reading(one, basis) for one in recorded.readings if ask_of(one) == ask), None)
            points.append(
                HistoryPoint(place, visit.title, visit.at, counts_of(recorded), basis, reading, recorded.judged)
            )
    if today is not None:
        taken = next((one for one in today.readings if one.ask == ask), None)
        question = today.question
        moment = now if now is not None else datetime.now().astimezone()
        points.append(HistoryPoint(None, TODAY, moment, question.counts, question.basis, taken))
    return tuple(points)


def readings_of(visit: Visit, name: str) -> tuple[Reading, ...]:
    """Give the readings of a set as a visit recorded them."""
    recorded = visit.set_named(name)
    return () if recorded is None else tuple(_reading(one, basis_of(recorded.basis)) for one in recorded.readings)


def _reading(one: ReadingTaken, basis: Basis) -> Reading:
    estimate = inf if one.estimate == "infinite" else one.estimate
    assert not isinstance(estimate, str)
    return Reading(ask_of(one), estimate, one.lower, one.upper, basis, bound_used=one.bound_used or "")


# What changed


@dataclass(frozen=True, eq=False)
class SetThen:
    """The units and the basis of a set at a visit or today."""

    title: str
    table: UnitTable
    basis: Basis


def set_then(session: Session, name: str, place: int | None) -> SetThen | None:
    """Give a set as it stood at the visit of that place, or, with None, as it stands today; None where it is not."""
    if place is None:
        chosen = next((one for one in session.sets if one.name == name), None)
        return None if chosen is None else SetThen(TODAY, chosen.table, chosen.basis)
    visit = session.visits[place]
    recorded = visit.set_named(name, of=len(session.sets))
    if recorded is None:
        return None
    return SetThen(visit.title, unpacked(recorded.units), basis_of(recorded.basis))


@dataclass(frozen=True, eq=False)
class Changes:
    """What changed in a set between two visits.

    Attributes
    ----------
    news : News
        Unit by unit: newly failed, older, new, corrected, and what is odd.
    removed : tuple of str
        Units that stood in the earlier table and not in the later one.
    excluded, included : tuple of str
        Units whose rows can no longer be read, and can be read again.
    basis : tuple of str
        Each change of the basis in words: "family from Lognormal to Weibull".
    """

    news: News
    removed: tuple[str, ...]
    excluded: tuple[str, ...]
    included: tuple[str, ...]
    basis: tuple[str, ...]

    @property
    def units_differ(self) -> bool:
        """True where anything is known of the units that was not known before, or no longer."""
        same = all(one.happened is Happened.SAME and not one.cells for one in self.news.units)
        return bool(not same or self.removed)

    @property
    def sentence(self) -> str:
        """All of it in one line."""
        counted = {kind: sum(1 for one in self.news.units if one.happened is kind) for kind in Happened}
        quiet = (Happened.SAME, Happened.UNREAD)
        parts = [f"{count} {kind.value}" for kind, count in counted.items() if count and kind not in quiet]
        parts += _counted(self.removed, "taken out")
        parts += _counted(self.excluded, "no longer read")
        parts += _counted(self.included, "read again")
        said = ", ".join(parts) or "The units are the same"
        basis = f"; changed: {', '.join(self.basis)}" if self.basis else ""
        return f"{said}{basis}."


def changes_between(then: SetThen, now: SetThen) -> Changes:
    """Say what changed in a set from an earlier visit to a later one."""
    news = news_of(then.table, now.table)
    was_unread, is_unread = _unread(then.table), _unread(now.table)
    named = set(now.table.names().values())
    return Changes(
        news=news,
        removed=news.missing,
        excluded=tuple(name for name in is_unread if name not in was_unread),
        included=tuple(name for name in was_unread if name in named and name not in is_unread),
        basis=basis_changes(then.basis, now.basis),
    )


def basis_changes(before: Basis, after: Basis) -> tuple[str, ...]:
    """Give each difference of two bases in words."""
    pairs = [
        ("family", _family(before), _family(after)),
        ("fit method", before.fit, after.fit),
        ("bound", BOUND_TITLES.get(before.bound, before.bound), BOUND_TITLES.get(after.bound, after.bound)),
        ("confidence", f"{as_given(100 * before.confidence)} %", f"{as_given(100 * after.confidence)} %"),
        ("side", SIDE_TITLES[before.side], SIDE_TITLES[after.side]),
        ("held shape", _shape(before), _shape(after)),
    ]
    return tuple(f"{what} from {was} to {now}" for what, was, now in pairs if was != now)


def _family(basis: Basis) -> str:
    return family(basis.family).title + (" with threshold" if basis.threshold else "")


def _shape(basis: Basis) -> str:
    return "none" if basis.shape is None else as_given(basis.shape)


def _counted(names: Sequence[str], what: str) -> list[str]:
    return [f"{len(names)} {what}"] if names else []


def _unread(table: UnitTable) -> dict[str, None]:
    """Return the names of the units of rows that cannot be read; a nameless one by its row."""
    if not table.counts().unread:
        return {}
    rows = (row for row in range(table.row_count) if table.row_is_read(row) is False)
    return {table.text(row, "unit") or f"row {row + 1}": None for row in rows}
