"""The scale of a date axis: an instant as days, both ways, and its round ticks from hours to years."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import date, datetime, timedelta
from math import ceil, floor

from reliability_app.engine.paper import Tick

_DAY = 86_400.0
_HOUR_STEPS, _DAY_STEPS = (1, 3, 6, 12), (1, 2, 7, 14)
_MONTH_STEPS, _YEAR_STEPS = (1, 2, 3, 6), (1, 2, 5, 10, 20, 50, 100, 200, 500, 1000)
_MONTH_DAYS, _YEAR_DAYS = 30.436875, 365.2425
_MOST = date.max.toordinal()


def day_of(instant: datetime) -> float:
    """Return the position of an instant, in days, by the clock of this machine."""
    local = instant.astimezone().replace(tzinfo=None)
    return local.toordinal() + (local - datetime.combine(local.date(), datetime.min.time())).total_seconds() / _DAY


def day_text(position: float) -> str:
    """Return the day at a position as it is written everywhere: 2026-03-02."""
    return date.fromordinal(min(max(floor(position), 1), _MOST)).isoformat()


def date_ticks(low: float, high: float, most: int) -> list[Tick]:
    """Return round instants between two positions, at most so many: whole hours, days, months or years."""
    low, high = max(low, 1.0), min(high, float(_MOST))
    if not low < high:
        return []
    room = (high - low) / max(most, 1)
    for hours in _HOUR_STEPS:
        if hours / 24.0 >= room:
            return [Tick(at, _hour_text(at), major=True) for at in _multiples(low, high, hours / 24.0)]
    for days in _DAY_STEPS:
        if days >= room:
            first = 1 if days % 7 == 0 else 0  # weeks begin on a Monday: day 1 was one
            places = [first + at for at in _multiples(low - first, high - first, float(days))]
            return [Tick(at, day_text(at), major=True) for at in places]
    for months in _MONTH_STEPS:
        if months * _MONTH_DAYS >= room:
            return [Tick(at, day_text(at)[:7], major=True) for at in _month_starts(low, high, months)]
    years = next((step for step in _YEAR_STEPS if step * _YEAR_DAYS >= room), _YEAR_STEPS[-1])
    return [Tick(at, day_text(at)[:4], major=True) for at in _month_starts(low, high, 12 * years)]


def _multiples(low: float, high: float, step: float) -> list[float]:
    return [count * step for count in range(ceil(low / step - 1e-9), floor(high / step + 1e-9) + 1)]


def _month_starts(low: float, high: float, step: int) -> Iterator[float]:
    """Give the first days of every `step` months, counted from January."""
    first = date.fromordinal(floor(low))
    count = -(-(12 * first.year + first.month - 1) // step) * step
    while count // 12 <= date.max.year:
        at = float(date(max(count // 12, 1), count % 12 + 1, 1).toordinal())
        if at > high:
            return
        if at >= low:
            yield at
        count += step


def _hour_text(position: float) -> str:
    day = floor(position + 1e-9)
    time = timedelta(days=position - day)
    minutes = round(time.total_seconds() / 60.0)
    return f"{day_text(day)[5:]} {minutes // 60:02d}:{minutes % 60:02d}"
