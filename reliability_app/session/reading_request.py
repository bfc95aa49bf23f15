"""Answers a request for readings of a file, as the command line and scripts make it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import cast

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.errors import RigpaperError
from reliability_app.engine.families import family as find_family
from reliability_app.session import plain_output
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import Ask, Basis, LifeAsk, ReliabilityAsk, Session, Side
from reliability_app.session.opening import open_file
from reliability_app.session.unit_table import NothingToAnalyse
from reliability_app.session.wording import STANDING_CAUTION


class RequestRefused(RigpaperError):
    """A request that cannot be carried out as it was put: a name or a number in it is not usable."""


@dataclass(frozen=True, eq=False)
class Answer:
    """The analyses asked for, and what is to be said besides them."""

    file: Path
    life_unit: str
    analyses: tuple[SetAnalysis, ...]
    remarks: tuple[str, ...]

    @property
    def has_readings(self) -> bool:
        """True where at least one reading has a number."""
        return plain_output.has_readings(self.analyses)

    def as_text(self) -> str:
        """Return sentences for a terminal."""
        return plain_output.as_text(self.analyses, self.life_unit)

    def as_json(self) -> str:
        """Return one JSON object."""
        return plain_output.as_json(self.analyses, str(self.file), self.life_unit)


def read_request(
    file: Path,
    *,
    family: str | None = None,
    percents: Sequence[float] = (),
    ages: Sequence[float] = (),
    confidence: float | None = None,
    side: str | None = None,
    bound: str | None = None,
    set_name: str | None = None,
) -> Answer:
    """Open a file and take the readings; what is not given is as the session has it.

    Raises
    ------
    RequestRefused
        For a family, side, bound, set or number that cannot be used.
    SessionUnreadable, TableUnreadable
        For a file that cannot be read.
    """
    asks = _asks(percents, ages)
    wanted = {"family": family, "confidence": confidence, "side": side, "bound": bound}
    given: dict[str, str | float] = {name: value for name, value in wanted.items() if value is not None}
    _check(given)
    opened = open_file(file)
    session = opened.session
    if asks:
        session.asks = asks
    for chosen in session.sets:
        chosen.basis = replace(chosen.basis, **given)  # type: ignore[arg-type]  # checked by name above
    places = _places(session, set_name)
    analyses = tuple(analyse(Question.about(session, place)) for place in places)
    remarks = opened.remarks
    if not plain_output.has_readings(analyses):
        remarks = (*remarks, *_why_not(session, places, analyses))
    return Answer(file, session.life_unit, analyses, remarks)


def _asks(percents: Sequence[float], ages: Sequence[float]) -> tuple[Ask, ...]:
    for percent in percents:
        if not 0.0 < percent < 100.0:
            raise RequestRefused(f"A percent of {percent:g} cannot be read: give a number between 0 and 100.")
    for age in ages:
        if not 0.0 < age < float("inf"):
            raise RequestRefused(f"An age of {age:g} cannot be read at: give a positive number.")
    return (*(LifeAsk(percent) for percent in percents), *(ReliabilityAsk(age) for age in ages))


def _check(given: dict[str, str | float]) -> None:
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


def _places(session: Session, set_name: str | None) -> list[int]:
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
            reason = " ".join(caution.text for caution in analysis.cautions if caution != STANDING_CAUTION)
        except NothingToAnalyse as nothing:
            reason = str(nothing)
        reasons.append(f"No reading of {analysis.question.name!r}. {reason}")
    return tuple(reasons)
