"""Puts the caution beside a B-life that a family which fits as well says something else."""

from __future__ import annotations

from dataclasses import replace

from reliability_app.engine import Fit
from reliability_app.engine.cautions import worst_first
from reliability_app.engine.family_choice import disagreement, rivals_of
from reliability_app.session.document import LifeAsk
from reliability_app.session.picture import Reading
from reliability_app.session.wording import disagreement_caution

# Two more fits of so many records would be felt while typing; and so many failures tell families apart.
_MOST_RECORDS = 10_000


def rivals_for(fitted: Fit | None) -> tuple[Fit, ...]:
    """Return the fits a reading is held against; none for a fit that does not exist, or a very large table."""
    if fitted is None or not fitted.converged or fitted.data.lower.size > _MOST_RECORDS:
        return ()
    return rivals_of(fitted)


def held_against(reading: Reading, fitted: Fit, rivals: tuple[Fit, ...], life_unit: str) -> Reading:
    """Return the reading, with a caution where a rival departs from its B-life by more than can be passed over."""
    ask = reading.ask
    if not rivals or reading.estimate is None or not isinstance(ask, LifeAsk):
        return reading
    fraction = ask.percent / 100.0
    found = disagreement(fitted, rivals, lambda one: float(one.life(fraction)), ends=(reading.lower, reading.upper))
    if found is None:
        return reading
    return replace(reading, cautions=worst_first((*reading.cautions, disagreement_caution(found, reading, life_unit))))
