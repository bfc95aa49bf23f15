"""Holds what failed since an earlier visit against what the fit of that visit foretold, unit by unit.

The units followed are those that were running then and are named in both tables. A unit that is still running has
reached the age it has now. One that failed would by now have reached an age of its own, which nobody saw: where the
units still running have all aged alike it is taken to have aged as much, where they stand at one age to stand there,
else to have aged by their median; where none runs any more, to stand at the greatest life seen.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import isinf
from statistics import median

from reliability_app.engine import Fit
from reliability_app.engine.bounds import Proceed
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.foretold import Foretold, Watch, foretell
from reliability_app.session.unit_table import UnitTable

LIMIT_CONFIDENCE = 0.95
"""Of each of the two limits of the number that was to be expected."""
_ALIKE = 1e-6


@dataclass(frozen=True)
class Followed:
    """One row of units that were running then.

    Attributes
    ----------
    unit : str
    then : float
        Age at which they were running.
    reached : float
        Age they have reached since, or would have reached.
    quantity, failed : int
        Units, and how many of them have failed by now.
    """

    unit: str
    then: float
    reached: float
    quantity: int
    failed: int


@dataclass(frozen=True)
class Since:
    """What has become of the units that were running then.

    Attributes
    ----------
    followed : tuple of Followed
    lost : tuple of str
        Units that were running then, and of which the later table says nothing that can be read or be true.
    nameless : int
        Units running then that have no name, and cannot be followed.
    assumption : str
        How the ages of the failed units were taken, as a clause; "" where none failed.
    unaged : tuple of str
        Units that have not aged since (removed, or not seen again): they could not fail, and do not count.
    """

    followed: tuple[Followed, ...]
    lost: tuple[str, ...]
    nameless: int
    assumption: str
    unaged: tuple[str, ...] = ()


@dataclass(frozen=True, eq=False)
class Agreement:
    """What was foretold at the earlier visit beside what was found.

    Attributes
    ----------
    since : Since
    foretold : Foretold
    chances : tuple of float
        Of one unit of each row followed to fail by the age reached.
    """

    since: Since
    foretold: Foretold
    chances: tuple[float, ...]

    @property
    def found(self) -> int:
        """How many of the units followed have failed."""
        return sum(row.failed for row in self.since.followed)

    @property
    def limits(self) -> tuple[int, int]:
        """The least and the greatest number to be expected, each with 95 % confidence."""
        return self.foretold.at_least(LIMIT_CONFIDENCE), self.foretold.at_most(LIMIT_CONFIDENCE)

    @property
    def agrees(self) -> bool:
        """True where the number found lies within the limits."""
        least, most = self.limits
        return least <= self.found <= most

    @property
    def mid_p(self) -> float:
        """The two-sided mid-p value of the number found."""
        return self.foretold.mid_p(self.found)

    @property
    def sentence(self) -> str:
        """The comparison in words: 3 to 9 were to be expected, 8 failed: in agreement."""
        least, most = self.limits
        units = self.foretold.watch.units
        of = "Of the 1 unit then running" if units == 1 else f"Of the {units} units then running"
        failures = "failure was" if most == 1 else "failures were"
        expected = f"{least} to {most} failures were" if least < most else f"{most or 'no'} {failures}"
        head = f"{of} {expected} to be expected, and {self.found or 'none'} failed"
        if self.agrees:
            return f"{head}: in agreement."
        if self.found < least:
            return f"{head}: fewer than the earlier fit foretold; look for milder duty, or failures not reported."
        return f"{head}: later failures are not what the earlier fit foretold; look for a new cause, lot or duty."


def agreement(
    fit_then: Fit, table_then: UnitTable, table_now: UnitTable, *, proceed: Proceed | None = None
) -> Agreement:
    """Hold the failures since an earlier fit against what it foretells.

    Raises
    ------
    NoEstimate
        If the earlier units gave no fit.
    BoundUnavailable
        If no unit can be followed, or nothing can be foretold under the plan of the earlier units.
    """
    since = what_became(table_then, table_now)
    if not since.followed and since.unaged:
        raise BoundUnavailable("No unit that was running then has aged since, so that none could have failed.")
    if not since.followed:
        raise BoundUnavailable(
            "No unit that was running then is named in the later table, so that none can be followed: give the units "
            "names in the column Unit."
        )
    rows = since.followed
    watch = Watch.of([row.then for row in rows], [row.reached for row in rows], [row.quantity for row in rows])
    told = foretell(fit_then, watch, proceed=proceed)
    ages = zip(told.watch.then.tolist(), told.watch.reached.tolist(), strict=True)
    chance = dict(zip(ages, told.chance.tolist(), strict=True))
    return Agreement(since, told, tuple(chance[row.then, row.reached] for row in rows))


def what_became(table_then: UnitTable, table_now: UnitTable) -> Since:
    """Follow the units that were running then into a later table."""
    now = _by_name(table_now)
    matched: list[tuple[str, float, list[_Row]]] = []
    lost, unaged, nameless = [], [], 0
    for name, rows in _by_name(table_then).items():
        units = sum(row.quantity for row in rows if row.is_running)
        if not units:
            continue
        if not name:
            nameless += units
        elif not _can_be_followed(rows, now.get(name, [])):
            lost.append(name)
        elif all(row.is_running and row.lower == rows[0].lower for row in now[name]):
            unaged.append(name)
        else:
            matched.append((name, rows[0].lower, now[name]))
    horizon, words = _horizon(
        [(then, row.lower) for _, then, found in matched for row in found if row.is_running],
        [row.latest for _, _, found in matched for row in found],
    )
    followed = tuple(
        Followed(
            unit=name,
            then=then,
            reached=row.lower if row.is_running else max(horizon(then), row.upper),
            quantity=row.quantity,
            failed=0 if row.is_running else row.quantity,
        )
        for name, then, found in matched
        for row in found
    )
    words = words if any(row.failed for row in followed) else ""
    return Since(followed, tuple(lost), nameless, words, tuple(unaged))


@dataclass(frozen=True)
class _Row:
    """What a row says: failed between `lower` and `upper`, or running at `lower`."""

    lower: float
    upper: float
    quantity: int

    @property
    def is_running(self) -> bool:
        return isinf(self.upper)

    @property
    def latest(self) -> float:
        """The greatest age at which something was seen."""
        return self.lower if self.is_running else self.upper


def _by_name(table: UnitTable) -> dict[str, list[_Row]]:
    """Return what the readable rows say by the name of their unit, "" for none."""
    units = table.read_units()
    rows: dict[str, list[_Row]] = {}
    for place, lower, upper, quantity in zip(
        units.rows, units.lower.tolist(), units.upper.tolist(), units.quantity.tolist(), strict=True
    ):
        rows.setdefault(table.text(place, "unit"), []).append(_Row(lower, upper, int(quantity)))
    return rows


def _can_be_followed(then: Sequence[_Row], now: Sequence[_Row]) -> bool:
    """True for one row of running units whose later rows name as many units, none younger than it was."""
    if len(then) != 1 or sum(row.quantity for row in now) != then[0].quantity:
        return False
    age = then[0].lower
    return all(row.latest >= age and not row.lower < row.upper == age for row in now)


def _horizon(ages: Sequence[tuple[float, float]], seen: Sequence[float]) -> tuple[Callable[[float], float], str]:
    """Return the age that a unit which failed would have reached, given its age then, and how it was taken."""
    if not ages:
        greatest = max(seen, default=0.0)
        return (lambda _: greatest), "every unit failed: taken to have been watched up to the greatest life seen"
    gains = [now - then for then, now in ages]
    if _are_alike(gains):
        return (lambda then: then + gains[0]), "the failed units are taken to have aged like those still running"
    reached = [now for _, now in ages]
    if _are_alike(reached):
        return (lambda _: reached[0]), "the failed units are taken to have stood at the age of those still running"
    gain = median(gains)
    return (lambda then: then + gain), "the failed units are taken to have aged by the median of those still running"


def _are_alike(values: Sequence[float]) -> bool:
    return max(values) - min(values) <= _ALIKE * max(abs(value) for value in values)
