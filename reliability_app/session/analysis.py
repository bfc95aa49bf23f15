"""Runs the engine for one set and its basis; the result carries the revision of the units it belongs to."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace

from reliability_app.engine import Curve, Fit, LifeData, fit
from reliability_app.engine.bounds import Proceed, check_bound
from reliability_app.engine.cautions import Caution, Severity, worst_first
from reliability_app.engine.errors import NoEstimate, RigpaperError
from reliability_app.engine.existence import Outcome
from reliability_app.session.document import Ask, Basis, HazardAsk, LifeAsk, Session
from reliability_app.session.drawing_up import NO_POINTS, Curves, Points, draw_curves, draw_marks
from reliability_app.session.family_caution import held_against, rivals_for
from reliability_app.session.picture import Reading, SetPicture
from reliability_app.session.quick_reading import STAND_IN, is_slow, read_off_band
from reliability_app.session.taking_readings import take_reading
from reliability_app.session.unit_table import Counts, ReadUnits
from reliability_app.session.wording import (
    BOUND_WITHOUT_FAILURE,
    STANDING_CAUTION,
    repeated_caution,
    undrawn_caution,
    unread_caution,
)

# What the bands of the curves are bounds of: the share failed or running, and the hazard.
_DRAWN: tuple[Ask, ...] = (LifeAsk(10.0), HazardAsk(1.0))


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
    repeated_names: tuple[str, ...] = ()
    names: Mapping[int, str] = field(default_factory=dict)
    hidden: bool = False

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
            repeated_names=chosen.table.repeated_names(),
            names=chosen.table.names(),
            hidden=chosen.hidden,
        )


@dataclass(frozen=True, eq=False)
class SetAnalysis:
    """The analysis of one set.

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
    is_provisional : bool
        True where quick bounds stand in for slow ones that are still to come.
    rivals : tuple of Fit
        Fits of other families that the units do not tell from this one; the main reading is held against them.
    """

    question: Question
    fit: Fit | None
    readings: tuple[Reading, ...]
    cautions: tuple[Caution, ...]
    picture: SetPicture
    is_provisional: bool = False
    rivals: tuple[Fit, ...] = ()

    @property
    def main(self) -> Reading | None:
        """The main reading, or None where there is none."""
        return self.readings[0] if self.readings and self.readings[0].is_given else None

    def with_main_ask(self, ask: LifeAsk) -> SetAnalysis:
        """Return the analysis with another main reading and nothing else computed anew; quick enough for a drag.

        Where the bound of the basis is slow it is read off the band already drawn, and marked provisional.
        """
        if self.fit is None or not self.fit.converged:
            return self
        basis, unit = self.question.basis, self.question.life_unit
        if is_slow(self.fit, basis, ask) and self.picture.failure is not None:
            # The band is of the kind of the main reading: calibrated, or what stands in for that.
            used = self.readings[0].bound_used if self.readings else STAND_IN
            reading = read_off_band(self.fit, self.picture.failure, ask, basis, unit, bound_used=used)
        else:
            reading = take_reading(self.fit, ask, basis, unit)
        reading = held_against(reading, self.fit, self.rivals, unit)
        return replace(self, readings=(reading, *self.readings[1:]), picture=replace(self.picture, reading=reading))


def analyse(
    question: Question, *, quick: bool = False, with_curves: bool = True, proceed: Proceed | None = None
) -> SetAnalysis:
    """Fit the family of the basis, take every reading, draw up the picture; every trouble becomes a caution.

    Parameters
    ----------
    quick : bool
        Let likelihood-ratio bounds stand in where those of the basis are slow; the analysis is then provisional.
    with_curves : bool
        False where nobody will look at the picture: its curves and their bands take longer than the readings.
    proceed : callable, optional
        Called between pieces of slow work; what it raises ends the work.
    """
    cautions = [unread_caution(question.counts.unread)] if question.counts.unread else []
    if question.repeated_names:
        cautions.append(repeated_caution(question.repeated_names))
    fitted: Fit | None = None
    curves: Curves | None = None
    data = _life_data(question.units)
    if data is not None:
        try:
            fitted = replace(_fit(data, question.basis), proceed=proceed)
            cautions.extend(fitted.cautions)
            if fitted.outcome is Outcome.NO_FAILURE and not fitted.has_zero_failure_bound:
                cautions.append(BOUND_WITHOUT_FAILURE)
            if fitted.converged and with_curves:
                curves = _curves(fitted, question.basis, quick=quick)
        except RigpaperError as trouble:
            cautions.append(Caution("basis-cannot-be-carried-out", Severity.SERIOUS, str(trouble)))
    rivals = rivals_for(fitted)
    readings = _readings(fitted, question, rivals, quick=quick)
    points, steps = _marks(data, question.units, cautions)
    reading = readings[0] if readings and readings[0].estimate is not None else None
    picture = _picture(question, points, steps, curves, reading)
    ordered = (*worst_first(tuple(cautions)), STANDING_CAUTION)
    provisional = quick and fitted is not None and _stands_in_somewhere(fitted, question)
    return SetAnalysis(question, fitted, readings, ordered, picture, is_provisional=provisional, rivals=rivals)


def _stand_in(fitted: Fit, basis: Basis, ask: Ask, *, quick: bool) -> str | None:
    """Return the kind of bound that stands in for a slow one; None where none need."""
    return STAND_IN if quick and fitted.converged and is_slow(fitted, basis, ask) else None


def _stands_in_somewhere(fitted: Fit, question: Question) -> bool:
    """True where some reading or band is to be computed anew."""
    everywhere = (*question.asks, *_DRAWN)
    return any(_stand_in(fitted, question.basis, ask, quick=True) is not None for ask in everywhere)


def _curves(fitted: Fit, basis: Basis, *, quick: bool) -> Curves:
    kinds = [_stand_in(fitted, basis, ask, quick=quick) or basis.bound for ask in _DRAWN]
    return draw_curves(fitted, basis, kind=kinds[0], hazard_kind=kinds[1])


def _readings(fitted: Fit | None, question: Question, rivals: tuple[Fit, ...], *, quick: bool) -> tuple[Reading, ...]:
    if fitted is None:
        return ()
    basis, unit = question.basis, question.life_unit
    readings = [
        take_reading(fitted, ask, basis, unit, stand_in=_stand_in(fitted, basis, ask, quick=quick))
        for ask in question.asks
    ]
    return tuple(held_against(reading, fitted, rivals, unit) for reading in readings[:1]) + tuple(readings[1:])


def _life_data(units: ReadUnits) -> LifeData | None:
    if not units.rows:
        return None
    return LifeData.from_intervals(units.lower, units.upper, quantity=units.quantity, entered=units.entered)


def _fit(data: LifeData, basis: Basis) -> Fit:
    check_bound(basis.bound, basis.side, basis.confidence)
    return fit(data, basis.family, threshold=basis.threshold, method=basis.fit, shape=basis.shape)


def _marks(data: LifeData | None, units: ReadUnits, cautions: list[Caution]) -> tuple[Points, Curve | None]:
    if data is None:
        return NO_POINTS, None
    try:
        points, steps = draw_marks(data, units)
    except NoEstimate as trouble:
        cautions.append(Caution("points-not-drawn", Severity.CAUTION, str(trouble)))
        return NO_POINTS, None
    if points.undrawn:
        cautions.append(undrawn_caution(points.undrawn))
    return points, steps


def _picture(
    question: Question, points: Points, steps: Curve | None, curves: Curves | None, reading: Reading | None
) -> SetPicture:
    return SetPicture(
        name=question.name,
        colour=question.colour,
        family=question.basis.family,
        point_age=points.age,
        point_fraction=points.fraction,
        point_begin=points.begin,
        point_end=points.end,
        point_quantity=points.quantity,
        point_is_shared=points.is_shared,
        point_rows=points.rows,
        point_names=_names(question, points.rows),
        running_age=points.running_age,
        running_quantity=points.running_quantity,
        failure=curves.failure if curves else None,
        hazard=curves.hazard if curves else None,
        survival=curves.survival if curves else None,
        steps=steps,
        reading=reading,
        running_rows=points.running_rows,
        running_names=_names(question, points.running_rows),
    )


def _names(question: Question, rows: tuple[tuple[int, ...], ...]) -> tuple[tuple[str, ...], ...]:
    """Return the names of the units of some rows; empty where a unit has none."""
    return tuple(tuple(question.names.get(row, "") for row in group) for group in rows)
