"""From a set's picture to the mark of its reading on each chart, and between percents and ages along the fit."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.curves import Curve
from reliability_app.engine.families import family
from reliability_app.engine.paper import AgeScale, ProbabilityScale
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.session.document import AgeAtHazardAsk, HazardAsk, LifeAsk, MeanLifeAsk, ModeAsk, ReliabilityAsk
from reliability_app.session.picture import Reading, SetPicture
from reliability_app.session.wording import SAFE_SIDES, age_text, as_given, number_text, value_text

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Place:
    """A reading in ages and fractions failed, with what is said of it.

    Attributes
    ----------
    age, fraction : float
        The point on the fit.
    ages, fractions : (float or None, float or None)
        The ends of the bound, in the one direction in which there is one.
    age_text, percent_text : str
        What the axes say; `percent_text` is empty where the percent was not asked for and not given.
    """

    age: float
    fraction: float
    ages: tuple[float | None, float | None] = (None, None)
    fractions: tuple[float | None, float | None] = (None, None)
    age_text: str = ""
    percent_text: str = ""


def place_of(picture: SetPicture, life_unit: str) -> Place | None:
    """Return where the main reading of a picture stands, or None without one."""
    reading, failure = picture.reading, picture.failure
    if reading is None or reading.estimate is None or failure is None:
        return None
    ask = reading.ask
    if isinstance(ask, LifeAsk):
        return Place(
            age=reading.estimate,
            fraction=ask.percent / 100.0,
            ages=(reading.lower, reading.upper),
            age_text=age_text(reading.estimate, life_unit),
            percent_text=percent_text(ask.percent),
        )
    if isinstance(ask, MeanLifeAsk | ModeAsk | AgeAtHazardAsk):
        return _place_at_age(reading, picture, life_unit)
    said = f"{as_given(ask.age)} {life_unit}".rstrip()
    if isinstance(ask, ReliabilityAsk):
        failed = [None if end is None else 1.0 - end for end in (reading.upper, reading.lower)]
        return Place(
            age=ask.age,
            fraction=1.0 - reading.estimate,
            fractions=(failed[0], failed[1]),
            age_text=said,
            percent_text=f"{number_text(100.0 * (1.0 - reading.estimate))} %",
        )
    return Place(age=ask.age, fraction=fraction_at(picture, ask.age), age_text=said)


def _place_at_age(reading: Reading, picture: SetPicture, life_unit: str) -> Place | None:
    """Return where a reading stands that is an age without a percent; None for one that is never reached, or is 0."""
    age = reading.estimate
    if age is None or not 0.0 < age < np.inf:
        return None
    return Place(
        age=age,
        fraction=fraction_at(picture, age),
        ages=(reading.lower or None, reading.upper or None),
        age_text=age_text(age, life_unit),
    )


def percent_text(percent: float) -> str:
    """Return a percent as the tag of the reading says it."""
    return f"{as_given(percent)} %"


def age_at(picture: SetPicture, fraction: float) -> float:
    """Return the age at which the drawn fit reaches a fraction failed."""
    if picture.failure is None:
        raise ValueError("A picture without a fit has no age at which a fraction has failed.")
    x, z = _straightened(picture.failure, picture.family)
    place = _along(z, x, float(ProbabilityScale(picture.family).to_scale(fraction)))
    return float(family(picture.family).life_scale.from_line(np.array(place)))


def fraction_at(picture: SetPicture, age: float) -> float:
    """Return the fraction failed at an age on the drawn fit."""
    if picture.failure is None:
        raise ValueError("A picture without a fit has no fraction failed at an age.")
    x, z = _straightened(picture.failure, picture.family)
    place = float(family(picture.family).life_scale.to_line(np.array(age)))
    return float(ProbabilityScale(picture.family).from_scale(_along(x, z, place)))


def value_at(curve: Curve, age: float) -> float:
    """Return the value of a drawn curve at an age, or at the nearest age at which it is drawn."""
    return float(np.interp(np.log(max(age, curve.x[0])), np.log(curve.x), curve.y))


def paper_mark(place: Place, probability: ProbabilityScale, age: AgeScale, life_unit: str) -> ReadingMark:
    """Return the mark of a reading on probability paper."""
    position = _position(place.age, age)
    value = float(probability.to_scale(place.fraction))
    if place.fractions != (None, None):
        ends = [None if end is None else float(probability.to_scale(end)) for end in place.fractions]
        texts = [
            "" if end is None else f"{number_text(100.0 * end, toward=toward)} %"
            for end, toward in zip(place.fractions, SAFE_SIDES, strict=True)
        ]
        return ReadingMark(position, value, "value", ends[0], ends[1], place.age_text, place.percent_text, *texts)
    return aged_mark(place, value, age, life_unit, value_text=place.percent_text)


def aged_mark(place: Place, value: float, age: AgeScale, life_unit: str, *, value_text: str) -> ReadingMark:
    """Return the mark of a reading whose bound, if any, is an age, at a height of `value`."""
    ends = [None if end is None else _position(end, age) for end in place.ages]
    texts = [
        "" if end is None else age_text(end, life_unit, toward=toward)
        for end, toward in zip(place.ages, SAFE_SIDES, strict=True)
    ]
    return ReadingMark(_position(place.age, age), value, "age", ends[0], ends[1], place.age_text, value_text, *texts)


def hazard_mark(picture: SetPicture | None, place: Place, age: AgeScale, life_unit: str) -> ReadingMark | None:
    """Return the mark of a reading on the hazard rate; a hazard that was asked for brings its own bound."""
    if picture is None or picture.hazard is None:
        return None
    reading = picture.reading
    if reading is not None and isinstance(reading.ask, HazardAsk) and reading.ask.age == place.age:
        return _asked_hazard(reading, place, age, life_unit)
    hazard = value_at(picture.hazard, place.age)
    return aged_mark(place, hazard, age, life_unit, value_text=number_text(hazard))


def survival_mark(place: Place, age: AgeScale, life_unit: str) -> ReadingMark:
    """Return the mark of a reading on the share running, in percent."""
    running = 100.0 * (1.0 - place.fraction)
    if place.fractions != (None, None):
        return _asked_reliability(place, running, age)
    said = f"{running:.12g} %" if place.percent_text else ""
    return aged_mark(place, running, age, life_unit, value_text=said)


def _asked_reliability(place: Place, running: float, age: AgeScale) -> ReadingMark:
    """Return the mark of a reliability that was asked for, whose bound is upright."""
    ends = [None if end is None else 100.0 * (1.0 - end) for end in reversed(place.fractions)]
    texts = ["" if end is None else f"{end:.3g} %" for end in ends]
    return ReadingMark(
        float(age.to_scale(place.age)), running, "value", ends[0], ends[1], place.age_text, f"{running:.3g} %", *texts
    )


def _asked_hazard(reading: Reading, place: Place, age: AgeScale, life_unit: str) -> ReadingMark:
    ends = zip((reading.lower, reading.upper), SAFE_SIDES, strict=True)
    texts = ["" if end is None else value_text(reading.ask, end, life_unit, toward=toward) for end, toward in ends]
    estimate = float(reading.estimate or 0.0)
    position = float(age.to_scale(place.age))
    return ReadingMark(
        position, estimate, "value", reading.lower, reading.upper, place.age_text, number_text(estimate), *texts
    )


def _position(age: float, scale: AgeScale) -> float:
    """Return where an age lies on an axis; on a log axis one of 0 or less lies to the left of everything."""
    return float(scale.to_scale(max(age, 0.0) if scale.kind == "log" else age))


def _straightened(failure: Curve, family_name: str) -> tuple[Floats, Floats]:
    """Return place on the line of the family and z of a curve where both are finite."""
    x, z = family(family_name).life_scale.to_line(failure.x), ProbabilityScale(family_name).to_scale(failure.y)
    inside = np.isfinite(x) & np.isfinite(z)
    return x[inside], z[inside]


def age_of_edge(picture: SetPicture, edge: Floats | None, fraction: float) -> float | None:
    """Return the age at which an edge of the band reaches a fraction, or None where it does not."""
    if edge is None or picture.failure is None:
        return None
    scale, life_scale = ProbabilityScale(picture.family), family(picture.family).life_scale
    x, z = life_scale.to_line(picture.failure.x), scale.to_scale(edge)
    inside = np.isfinite(z)
    x, z, wanted = x[inside], z[inside], float(scale.to_scale(fraction))
    if z.size < 2 or np.any(np.diff(z) <= 0.0) or not z[0] <= wanted <= z[-1]:
        return None
    return float(life_scale.from_line(np.asarray(np.interp(wanted, z, x))))


def _along(x: Floats, y: Floats, wanted: float) -> float:
    """Interpolate y over ascending x, and go straight on beyond both ends."""
    if x.size < 2:
        return float("nan")
    at = int(np.clip(np.searchsorted(x, wanted), 1, x.size - 1))
    share = (wanted - x[at - 1]) / (x[at] - x[at - 1])
    return float(y[at - 1] + share * (y[at] - y[at - 1]))
