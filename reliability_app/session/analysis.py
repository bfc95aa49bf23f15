"""Runs the engine for one set and its basis; the result carries the revision of the units it belongs to."""

from __future__ import annotations

from dataclasses import dataclass, replace

from reliability_app.engine import Curve, Fit, LifeData, fit
from reliability_app.engine.bounds import check_bound
from reliability_app.engine.cautions import Caution, Severity, worst_first
from reliability_app.engine.errors import BoundUnavailable, RigpaperError
from reliability_app.session.document import Ask, Basis, Session
from reliability_app.session.drawing_up import NO_POINTS, Curves, Points, draw_curves, draw_points, draw_steps
from reliability_app.session.picture import Reading, SetPicture
from reliability_app.session.taking_readings import take_reading
from reliability_app.session.unit_table import Counts, ReadUnits
from reliability_app.session.wording import STANDING_CAUTION, unread_caution

MAXIMUM_LIKELIHOOD = "maximum likelihood"


@dataclass(frozen=True, eq=False)
class Question:
    """Everything an analysis needs, taken from the session at one moment so that it can run beside later edits."""

    name: str
    colour: int
    basis: Basis
    asks: tuple[Ask, ...]
    life_unit: str
    units: ReadUnits
    counts: Counts
    revision: int

    @classmethod
    def about(cls, session: Session, set_index: int) -> Question:
        """Take the question about one set of the session as it stands."""
        chosen = session.sets[set_index]
        return cls(
            name=chosen.name,
            colour=chosen.colour,
            basis=chosen.basis,
            asks=session.asks,
            life_unit=session.life_unit,
            units=chosen.table.read_units(),
            counts=chosen.table.counts(),
            revision=chosen.table.revision,
        )


@dataclass(frozen=True, eq=False)
class SetAnalysis:
    """The finished analysis of one set.

    Attributes
    ----------
    question : Question
        What was analysed, with the revision of the units.
    fit : Fit or None
        None where no row can be read or the basis cannot be carried out.
    readings : tuple of Reading
        One for each ask, in order; the first is the main reading. Empty without a fit.
    cautions : tuple of Caution
        Those of the set as a whole, worst first, the standing one last.
    picture : SetPicture
    """

    question: Question
    fit: Fit | None
    readings: tuple[Reading, ...]
    cautions: tuple[Caution, ...]
    picture: SetPicture

    @property
    def main(self) -> Reading | None:
        """The main reading, or None where there is none."""
        return self.readings[0] if self.readings and self.readings[0].estimate is not None else None

    def with_main_ask(self, ask: Ask) -> SetAnalysis:
        """Return the analysis with another main reading and nothing else computed anew."""
        if self.fit is None:
            return self
        reading = take_reading(self.fit, ask, self.question.basis, self.question.life_unit)
        readings = (reading, *self.readings[1:])
        return replace(self, readings=readings, picture=replace(self.picture, reading=reading))


def analyse(question: Question) -> SetAnalysis:
    """Fit the family of the basis, take every reading, draw up the picture; every trouble becomes a caution."""
    cautions = [unread_caution(question.counts.unread)] if question.counts.unread else []
    fitted: Fit | None = None
    curves: Curves | None = None
    data = _life_data(question.units)
    if data is not None:
        try:
            fitted = _fit(data, question.basis)
            cautions.extend(fitted.cautions)
            curves = draw_curves(fitted, question.basis) if fitted.converged else None
        except RigpaperError as trouble:
            cautions.append(Caution("basis-cannot-be-carried-out", Severity.SERIOUS, str(trouble)))
    readings: tuple[Reading, ...] = ()
    if fitted is not None:
        readings = tuple(take_reading(fitted, ask, question.basis, question.life_unit) for ask in question.asks)
    points, steps = _marks(data, question.units, cautions)
    reading = readings[0] if readings and readings[0].estimate is not None else None
    picture = _picture(question, points, steps, curves, reading)
    return SetAnalysis(question, fitted, readings, (*worst_first(tuple(cautions)), STANDING_CAUTION), picture)


def _life_data(units: ReadUnits) -> LifeData | None:
    if not units.rows:
        return None
    return LifeData.from_intervals(units.lower, units.upper, quantity=units.quantity, entered=units.entered)


def _fit(data: LifeData, basis: Basis) -> Fit:
    check_bound(basis.bound, basis.side, basis.confidence)
    if basis.fit != MAXIMUM_LIKELIHOOD:
        raise BoundUnavailable(
            f"This version cannot fit by {basis.fit!r}: choose {MAXIMUM_LIKELIHOOD} as the fit method of the basis."
        )
    return fit(data, basis.family)


def _marks(data: LifeData | None, units: ReadUnits, cautions: list[Caution]) -> tuple[Points, Curve | None]:
    if data is None:
        return NO_POINTS, None
    try:
        return draw_points(data, units), draw_steps(data)
    except BoundUnavailable as trouble:
        cautions.append(Caution("points-not-drawn", Severity.CAUTION, str(trouble)))
        return NO_POINTS, None


def _picture(
    question: Question, points: Points, steps: Curve | None, curves: Curves | None, reading: Reading | None
) -> SetPicture:
    return SetPicture(
        name=question.name,
        colour=question.colour,
        family=question.basis.family,
        point_age=points.age,
        point_fraction=points.fraction,
        point_quantity=points.quantity,
        point_rows=points.rows,
        running_age=points.running_age,
        running_quantity=points.running_quantity,
        failure=curves.failure if curves else None,
        hazard=curves.hazard if curves else None,
        survival=curves.survival if curves else None,
        steps=steps,
        reading=reading,
    )
