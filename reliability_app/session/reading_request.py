"""Answers a request for readings of a file, as the command line and scripts make it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from math import inf
from pathlib import Path
from typing import cast

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.errors import RigpaperError
from reliability_app.engine.families import family as find_family
from reliability_app.engine.methods import METHODS
from reliability_app.session import plain_output
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.compared_families import ComparedFamilies, compare_families
from reliability_app.session.document import (
    AgeAtHazardAsk,
    Ask,
    Basis,
    ConditionalReliabilityAsk,
    HazardAsk,
    LifeAsk,
    MeanLifeAsk,
    ModeAsk,
    ReliabilityAsk,
    ResidualLifeAsk,
    Session,
    Side,
)
from reliability_app.session.opening import Opened, open_file
from reliability_app.session.plan_simulation import SimulatedPlan, simulate_plan
from reliability_app.session.table_errors import NoSuchSheet
from reliability_app.session.unit_table import NothingToAnalyse
from reliability_app.session.visit import Visit
from reliability_app.session.visit_reproduction import Reproduced, differences, session_of
from reliability_app.session.wording import STANDING_CAUTION


class RequestRefused(RigpaperError):
    """A request that cannot be carried out as it was put: a name or a number in it is not usable."""


@dataclass(frozen=True)
class AsksWanted:
    """Readings named by number: percents failed, ages, hazard rates, and those that need none.

    Attributes
    ----------
    percents : sequence of float
        Lives by which so many percent have failed.
    ages : sequence of float
        Reliabilities, of the units that have reached the age `given` where there is one.
    residual_ages, hazard_ages : sequence of float
        Mean residual lives, and hazard rates.
    hazards : sequence of float
        Ages at which the hazard rate reaches these.
    mode, mean_life : bool
    """

    percents: Sequence[float] = ()
    ages: Sequence[float] = ()
    given: float | None = None
    residual_ages: Sequence[float] = ()
    hazard_ages: Sequence[float] = ()
    hazards: Sequence[float] = ()
    mode: bool = False
    mean_life: bool = False

    def asks(self) -> tuple[Ask, ...]:
        """Return the readings asked for; none where nothing is named.

        Raises
        ------
        RequestRefused
            For a number at which nothing can be read.
        """
        for percent in self.percents:
            if not 0.0 < percent < 100.0:
                raise RequestRefused(f"A percent of {percent:g} cannot be read: give a number between 0 and 100.")
        given = () if self.given is None else (self.given,)
        for age in (*self.ages, *given, *self.residual_ages, *self.hazard_ages):
            if not 0.0 < age < inf:
                raise RequestRefused(f"An age of {age:g} cannot be read at: give a positive number.")
        for hazard in self.hazards:
            if not 0.0 < hazard < inf:
                raise RequestRefused(f"A hazard rate of {hazard:g} cannot be looked for: give a positive number.")
        return tuple(self._each())

    def _each(self) -> Iterator[Ask]:
        yield from map(LifeAsk, self.percents)
        yield from self._reliabilities()
        yield from map(HazardAsk, self.hazard_ages)
        yield from map(ResidualLifeAsk, self.residual_ages)
        yield from map(AgeAtHazardAsk, self.hazards)
        yield from (ModeAsk(),) if self.mode else ()
        yield from (MeanLifeAsk(),) if self.mean_life else ()

    def _reliabilities(self) -> Iterator[Ask]:
        if self.given is None:
            yield from map(ReliabilityAsk, self.ages)
            return
        if not self.ages or min(self.ages) < self.given:
            raise RequestRefused(
                f"A reliability of the units that have reached {self.given:g} needs an age from there on: "
                "give it with --age."
            )
        yield from (ConditionalReliabilityAsk(age, self.given) for age in self.ages)


@dataclass(frozen=True, eq=False)
class Answer:
    """The analyses asked for, with what else was asked for of each set, and what is to be said besides them."""

    file: Path
    life_unit: str
    analyses: tuple[SetAnalysis, ...]
    remarks: tuple[str, ...]
    compared: tuple[ComparedFamilies | None, ...] = ()
    plans: tuple[SimulatedPlan, ...] = ()
    title: str = ""

    @property
    def has_readings(self) -> bool:
        """True where at least one reading has a number."""
        return plain_output.has_readings(self.analyses)

    def as_text(self) -> str:
        """Return sentences for a terminal."""
        return plain_output.as_text(self.analyses, self.life_unit, self.compared, self.plans)

    def as_json(self) -> str:
        """Return one JSON object."""
        return plain_output.as_json(self.analyses, str(self.file), self.life_unit, self.compared, self.plans)


def read_request(
    file: Path,
    wanted: AsksWanted | None = None,
    *,
    basis: Mapping[str, object] | None = None,
    set_name: str | None = None,
    sheet: str | None = None,
    visit: str | None = None,
    candidates: bool = False,
    plan: bool = False,
    with_curves: bool = False,
) -> Answer:
    """Open a file and take the readings; what is not given is as the session has it.

    Parameters
    ----------
    file : Path
    wanted : AsksWanted, optional
    basis : mapping, optional
        Fields of `Basis` by name, for every set; None leaves a field as the session has it.
    set_name : str, optional
        Read only the set of this name.
    sheet : str, optional
        The sheet of a spreadsheet file; the first that reads as units if it is not given.
    visit : str, optional
        Read the units and the basis that this visit recorded: its label, or its number counted from 1.
    candidates, plan : bool
        Compare the families, and simulate the plan.
    with_curves : bool
        Draw up the curves of the picture too.

    Raises
    ------
    RequestRefused
        For a family, side, bound, set, sheet, visit or number that cannot be used.
    SessionUnreadable, TableUnreadable
        For a file that cannot be read.
    """
    asks = wanted.asks() if wanted else ()
    given = {name: value for name, value in (basis or {}).items() if value is not None}
    _check(given)
    found = opened(file, sheet)
    session, remarks = found.session, found.remarks
    recorded = None if visit is None else _visit_named(session, visit)
    session = session if recorded is None else session_of(recorded)
    if asks:
        session.asks = asks
    for chosen in session.sets:
        chosen.basis = replace(chosen.basis, **given)  # type: ignore[arg-type]  # checked by name above
    places = places_named(session, set_name)
    analyses = tuple(analyse(Question.about(session, place), with_curves=with_curves) for place in places)
    if recorded is not None and not asks and not given:
        told = Reproduced(recorded, analyses, differences(recorded, analyses)).sentence
        remarks = (*remarks, told) if told else remarks
    if not plain_output.has_readings(analyses):
        remarks = (*remarks, *_why_not(session, places, analyses))
    return Answer(
        file,
        session.life_unit,
        analyses,
        remarks,
        compared=tuple(map(compare_families, analyses)) if candidates else (),
        plans=tuple(map(simulate_plan, analyses)) if plan else (),
        title=session.title,
    )


def opened(file: Path, sheet: str | None) -> Opened:
    """Open a file; a sheet that it does not have is a request refused."""
    try:
        return open_file(file, sheet=sheet)
    except NoSuchSheet as refusal:
        raise RequestRefused(str(refusal)) from refusal


def _visit_named(session: Session, name: str) -> Visit:
    """Return the visit of this label, or else of this number."""
    called = [visit for visit in session.visits if visit.label == name]
    if len(called) == 1:
        return called[0]
    if name.isdecimal() and not called and 1 <= int(name) <= len(session.visits):
        return session.visits[int(name) - 1]
    if called:
        raise RequestRefused(f"{len(called)} visits are called {name!r}: give the number of the one that is meant.")
    known = "; ".join(f"{place}: {visit.title}" for place, visit in enumerate(session.visits, start=1))
    which = f"The visits are: {known}." if known else "None is recorded."
    raise RequestRefused(f"There is no visit {name!r}. {which}")


def _check(given: Mapping[str, object]) -> None:
    usual = Basis()
    try:
        find_family(str(given.get("family", usual.family)))
        check_bound(
            str(given.get("bound", usual.bound)),
            cast(Side, given.get("side", usual.side)),
            cast(float, given.get("confidence", usual.confidence)),
        )
    except RigpaperError as refusal:
        raise RequestRefused(str(refusal)) from refusal
    if given.get("fit", usual.fit) not in METHODS:
        raise RequestRefused(f"There is no fit method called {given['fit']!r}. The methods are: {'; '.join(METHODS)}.")
    if not 0.0 < cast(float, given.get("shape", 1.0)) < inf:
        raise RequestRefused(f"A shape of {given['shape']:g} cannot be held: give a positive number.")


def places_named(session: Session, set_name: str | None) -> list[int]:
    """Give the place of the set of a name, or of every set.

    Raises
    ------
    RequestRefused
        Where there is none of the name.
    """
    places = [place for place, chosen in enumerate(session.sets) if set_name in (None, chosen.name)]
    if not places:
        names = ", ".join(repr(chosen.name) for chosen in session.sets)
        raise RequestRefused(f"There is no set called {set_name!r}. The sets are: {names}.")
    return places


def _why_not(session: Session, places: list[int], analyses: tuple[SetAnalysis, ...]) -> tuple[str, ...]:
    """Say for each set why there is no reading of it."""
    reasons = []
    for place, analysis in zip(places, analyses, strict=True):
        try:
            session.sets[place].table.life_data()
            said = plain_output.cautions_of(analysis)
            reason = " ".join(caution.text for caution in said if caution != STANDING_CAUTION)
        except NothingToAnalyse as nothing:
            reason = str(nothing)
        reasons.append(f"No reading of {analysis.question.name!r}. {reason}")
    return tuple(reasons)
