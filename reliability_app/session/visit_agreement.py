"""Foretold and found between visits: each pair computed once, unit by unit and in words, and kept."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

from reliability_app.engine import Fit, fit
from reliability_app.engine.bounds import Proceed
from reliability_app.engine.errors import BoundUnavailable, RigpaperError
from reliability_app.engine.methods import MAXIMUM_LIKELIHOOD
from reliability_app.engine.shaped.shaped_fit import ShapedFit
from reliability_app.session.document import Basis, Session
from reliability_app.session.foretold_and_found import Agreement, agreement
from reliability_app.session.unit_table import UnitTable
from reliability_app.session.visit_history import TODAY, SetThen, set_then
from reliability_app.session.wording import listed_names


@dataclass(frozen=True)
class FollowedUnit:
    """A row of units that were running at the earlier visit.

    Attributes
    ----------
    unit : str
    then, reached : float
        Its age at the earlier visit, and the age it has reached since, or would have reached.
    quantity, failed : int
    chance : float
        Of one such unit to fail by the age reached, as the earlier fit foretold.
    """

    unit: str
    then: float
    reached: float
    quantity: int
    failed: int
    chance: float


@dataclass(frozen=True, eq=False)
class Held:
    """Two visits held against each other, or the reason why they cannot be.

    Attributes
    ----------
    then, now : int or None
        Places of the visits; None is today.
    titles : tuple of two str
    agreement : Agreement or None
    reason : str
        A sentence where there is no agreement to be told.
    """

    then: int
    now: int | None
    titles: tuple[str, str]
    agreement: Agreement | None
    reason: str = ""

    @property
    def sentence(self) -> str:
        """What was foretold and found, in words."""
        return self.agreement.sentence if self.agreement is not None else self.reason

    @property
    def speaks(self) -> bool:
        """True where later failures are not what was foretold."""
        return self.agreement is not None and not self.agreement.agrees

    def rows(self) -> Iterator[FollowedUnit]:
        """Give the units followed, one by one."""
        if self.agreement is None:
            return
        for row, chance in zip(self.agreement.since.followed, self.agreement.chances, strict=True):
            yield FollowedUnit(row.unit, row.then, row.reached, row.quantity, row.failed, chance)

    def remarks(self) -> tuple[str, ...]:
        """Give what must be known beside the sentence: how ages were taken, and which units could not be followed."""
        if self.agreement is None:
            return ()
        since, told = self.agreement.since, []
        if since.assumption:
            told.append(f"{since.assumption[0].upper()}{since.assumption[1:]}.")
        if since.lost:
            names = listed_names(since.lost)
            told.append(f"Not followed, because the later table does not tell what became of them: {names}.")
        if since.unaged:
            told.append(f"Not counted, because they have not aged since: {listed_names(since.unaged)}.")
        if since.nameless:
            told.append(f"{since.nameless} units without a name were running then and cannot be followed.")
        return tuple(told)


@dataclass(eq=False)
class Agreements:
    """Holds visits against each other, and remembers what it has found as long as neither side has changed."""

    _found: dict[tuple[object, ...], tuple[Agreement | None, str]] = field(default_factory=dict, repr=False)

    def between(
        self, session: Session, name: str, then: int, now: int | None, *, proceed: Proceed | None = None
    ) -> Held:
        """Hold a set at a visit against itself at a later one, or against today (None).

        What cannot be held against each other is told in the reason; only what `proceed` raises comes through.
        """
        key = _key(session, name, then, now)
        if key not in self._found:
            self._found[key] = _held(set_then(session, name, then), set_then(session, name, now), proceed)
        return Held(then, now, _titles(session, then, now), *self._found[key])

    def known(self, session: Session, name: str, then: int, now: int | None) -> Held | None:
        """Give what was found already, without computing anything."""
        found = self._found.get(_key(session, name, then, now))
        return None if found is None else Held(then, now, _titles(session, then, now), *found)

    def forget_today(self) -> None:
        """Drop what was found of units as they stood today, because they have changed."""
        self._found = {key: found for key, found in list(self._found.items()) if isinstance(key[-1], _Same)}

    def in_turn(self, session: Session, name: str, *, proceed: Proceed | None = None) -> Iterator[Held]:
        """Hold each visit that has the set against the next one, and the last against today."""
        for then, now in pairs_in_turn(session, name):
            yield self.between(session, name, then, now, proceed=proceed)


def pairs_in_turn(session: Session, name: str) -> list[tuple[int, int | None]]:
    """Give the places of each visit that has the set and of the next, the last one with today (None)."""
    count = len(session.sets)
    places = [place for place, visit in enumerate(session.visits) if visit.set_named(name, of=count) is not None]
    return list(zip(places, [*places[1:], None], strict=True)) if places else []


def _titles(session: Session, then: int, now: int | None) -> tuple[str, str]:
    return session.visits[then].title, TODAY if now is None else session.visits[now].title


def _key(session: Session, name: str, then: int, now: int | None) -> tuple[object, ...]:
    return name, len(session.sets) == 1, _mark(session, name, then), _mark(session, name, now)


def _mark(session: Session, name: str, place: int | None) -> object:
    """Return what a result belongs to: the record of a visit (which a label does not change), or today's units."""
    if place is not None:
        return _Same(session.visits[place].record.sets)
    chosen = next((one for one in session.sets if one.name == name), None)
    return None if chosen is None else (_Same(chosen.table), chosen.table.revision)


class _Same:
    """Stands for an object itself, whatever it holds, and keeps it, so that no other takes its place."""

    def __init__(self, it: object) -> None:
        self._it = it

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _Same) and other._it is self._it

    def __hash__(self) -> int:
        return id(self._it)


def _held(earlier: SetThen | None, later: SetThen | None, proceed: Proceed | None) -> tuple[Agreement | None, str]:
    if earlier is None or later is None:
        return None, "One of the two does not have this set."
    try:
        return agreement(_fit_then(earlier.table, earlier.basis), earlier.table, later.table, proceed=proceed), ""
    except RigpaperError as trouble:
        return None, str(trouble)


def _fit_then(table: UnitTable, basis: Basis) -> Fit:
    """Return the fit of the earlier visit, which must be of a kind that can foretell."""
    if basis.fit != MAXIMUM_LIKELIHOOD or basis.threshold or basis.shape is not None:
        raise BoundUnavailable(
            "Nothing is foretold from this basis: choose maximum likelihood, without a threshold or a held shape."
        )
    found = fit(table.life_data(), basis.family)
    if isinstance(found, ShapedFit):
        raise BoundUnavailable(
            "Nothing is foretold from this family: choose one with a location and a spread, as lognormal or Weibull."
        )
    return found
