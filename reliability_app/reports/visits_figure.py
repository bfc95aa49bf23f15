"""The picture of the Visits page: a reading with its bracket against the date, at each visit and today."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import chain
from math import isfinite

import numpy as np

from reliability_app.engine.paper import AgeScale
from reliability_app.reports.axis_ticks import EVEN_ROOM, LEVEL_ROOM
from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.date_ticks import date_ticks, day_of
from reliability_app.reports.figure import Axis, Figure, Floats, LegendEntry, Line, Marks, Note, Part, in_layers
from reliability_app.reports.series_looks import MUTED, print_look
from reliability_app.reports.shown import Shown
from reliability_app.session.document import Ask
from reliability_app.session.requirement import Requirement
from reliability_app.session.unit_table import Counts
from reliability_app.session.visit_history import HistoryPoint
from reliability_app.session.wording import as_given, ask_title, is_age

LEVEL_TITLE = "Date"
CAPTION = "Bounds as they were at each visit; open: today. Above the dates: failed of all units read."
NO_READING = "This reading was taken at no visit, and there is none today: choose another reading."
_LEAST_DAYS = 2.0  # shown at least, on both sides of a single visit together
_SIDES, _HEAD, _FOOT = 0.06, 0.08, 0.16  # shares of the picture around its points; the counts stand at the foot
_LEGEND_ROW = 0.09  # share of a picture that a legend takes for each set
_MOST_HEAD = 0.4
_COUNT_WIDTH = 0.08  # share of the width that a count takes in a picture
_APART, _CAP, _COUNT_HEIGHT = 0.012, 0.006, 0.05  # between sets, half a cap of a bracket, and where the counts stand
_EVEN = AgeScale("linear")


@dataclass(frozen=True, eq=False)
class VisitSeries:
    """One set through the visits."""

    name: str
    colour: int
    points: tuple[HistoryPoint, ...]


@dataclass(frozen=True, eq=False)
class Placed:
    """A series on the chart, arrays of shape (n,): days, and the reading with NaN where there is none."""

    at: Floats
    estimate: Floats
    lower: Floats
    upper: Floats
    is_today: np.ndarray

    def brackets(self, cap: float) -> tuple[Floats, Floats]:
        """Return the brackets as pairs of points, shape (2 k,): stems from end to end and caps of this half width."""
        x: list[float] = []
        y: list[float] = []
        for at, middle, low, high in zip(self.at, self.estimate, self.lower, self.upper, strict=True):
            ends = [float(end) for end in (low, high) if isfinite(end)]
            known = [*ends, *([float(middle)] if isfinite(middle) else [])]
            if ends and len(known) > 1:
                x += [float(at), float(at)]
                y += [min(known), max(known)]
            for end in ends:
                x += [float(at) - cap, float(at) + cap]
                y += [end, end]
        return np.array(x), np.array(y)


def counted(counts: Counts) -> str:
    """Return units failed of all that could be read: 8/24."""
    failed = counts.failed + counts.found_failed
    return f"{failed}/{failed + counts.running}"


def placed(series: Sequence[VisitSeries], width: float) -> list[Placed]:
    """Return where the points of each series stand; several sets stand side by side around the day of a visit."""
    found = []
    for place, one in enumerate(series):
        shift = (place - 0.5 * (len(series) - 1)) * _APART * width
        readings = [point.reading for point in one.points]
        ends = [
            [np.nan if taken is None or (end := getattr(taken, what)) is None else float(end) for taken in readings]
            for what in ("estimate", "lower", "upper")
        ]
        estimate, lower, upper = (np.where(np.isfinite(values), values, np.nan) for values in map(np.array, ends))
        days = np.array([day_of(point.at) for point in one.points]) + shift
        is_today = np.array([point.place is None for point in one.points], bool)
        found.append(Placed(days, estimate, lower, upper, is_today))
    return found


def days_width(series: Sequence[VisitSeries]) -> float:
    """Return how many days lie between the first and the last point, and 2 at least."""
    days = [day_of(point.at) for one in series for point in one.points]
    return max(max(days, default=0.0) - min(days, default=0.0), _LEAST_DAYS)


def cap_of(series: Sequence[VisitSeries]) -> float:
    """Return half the width of the caps of the brackets, in days."""
    return _CAP * days_width(series)


def visits_range(series: Sequence[VisitSeries], required: float | None = None, *, head: float = 0.0) -> Range:
    """Return the part that shows every point, the requirement if there is one, and the counts at the foot.

    `head` is the share of the height, below 1, that is kept free for a legend.
    """
    days = [day_of(point.at) for one in series for point in one.points]
    ends = list(chain.from_iterable((one.estimate, one.lower, one.upper) for one in placed(series, 0.0)))
    values = np.concatenate([*ends, [] if required is None else [required]]) if ends else np.empty(0)
    values = values[np.isfinite(values)]
    if not days or not values.size:
        return Range(0.0, 1.0, 0.0, 1.0)
    low, high = float(values.min()), float(values.max())
    if low == high:
        low, high = low - 0.1 * abs(low or 1.0), high + 0.1 * abs(high or 1.0)
    middle, half = 0.5 * (min(days) + max(days)), 0.5 * days_width(series)
    whole = Range(middle - half, middle + half, low, high)
    room = (1.0 + _FOOT + _HEAD) * head / (1.0 - head)
    return whole.padded(left=_SIDES, right=_SIDES, low=_FOOT, high=_HEAD + room)


def upright_title(ask: Ask, life_unit: str) -> str:
    """Return the title of the upright axis."""
    title = ask_title(ask, life_unit)
    return f"{title} ({life_unit})" if is_age(ask) and life_unit else title


def counts_height(view: Range) -> float:
    """Return the height at which the counts stand."""
    return view.low + _COUNT_HEIGHT * (view.high - view.low)


def with_room(points: Sequence[HistoryPoint], room: float) -> list[HistoryPoint]:
    """Return the points whose counts can be written, the latest first and each so many days from the next."""
    found: list[HistoryPoint] = []
    for point in reversed(points):
        if not found or day_of(found[-1].at) - day_of(point.at) >= room:
            found.append(point)
    return found


def required_value(requirement: Requirement | None, ask: Ask) -> float | None:
    """Return what is required of this reading, None where nothing is."""
    return requirement.at_least if requirement is not None and requirement.ask == ask else None


def required_note(requirement: Requirement, life_unit: str) -> str:
    """Return the words on the line of the requirement."""
    unit = f" {life_unit}" if is_age(requirement.ask) and life_unit else ""
    return f"required: {as_given(requirement.at_least)}{unit}"


def visits_figure(
    series: Sequence[VisitSeries],
    shown: Shown,
    ask: Ask,
    *,
    requirement: Requirement | None = None,
    told: Sequence[str] = (),
) -> Figure:
    """Return the picture of a reading through the visits.

    Parameters
    ----------
    series : sequence of VisitSeries
        One for each set of `shown`.
    shown : Shown
    ask : Ask
        The reading followed.
    requirement : Requirement, optional
    told : sequence of str
        Further paragraphs of the foot: what was foretold and found.
    """
    required = required_value(requirement, ask)
    head = min(_LEGEND_ROW * len(series), _MOST_HEAD) if len(series) > 1 else 0.0
    view = shown.view or visits_range(series, required, head=head)
    cap, places = cap_of(series), placed(series, days_width(series))
    drawings = [_parts(one, where, cap) for one, where in zip(series, places, strict=True)]
    extra = [*_requirement(requirement, required, view, shown.life_unit), *_counts(series, shown.current, view)]
    return Figure(
        title=f"{series[0].name} \N{EM DASH} Visits" if len(series) == 1 else "Visits",
        level=Axis(LEVEL_TITLE, view.left, view.right, date_ticks, LEVEL_ROOM["linear"]),
        upright=Axis(upright_title(ask, shown.life_unit), view.low, view.high, _EVEN.ticks, EVEN_ROOM),
        parts=in_layers([*drawings, extra], front=shown.current),
        legend=tuple(LegendEntry(one.name, print_look(one.colour)) for one in series),
        foot=(CAPTION, *told, *shown.foot),
        origin=shown.origin,
    )


def _requirement(requirement: Requirement | None, at: float | None, view: Range, life_unit: str) -> list[Part]:
    if requirement is None or at is None:
        return []
    line = Line(np.array([view.left, view.right]), np.full(2, at), MUTED, 1.0, "dash")
    return [line, Note(view.left, at, required_note(requirement, life_unit), MUTED)]


def _counts(series: Sequence[VisitSeries], current: int, view: Range) -> list[Part]:
    if not series:
        return []
    room, height = _COUNT_WIDTH * (view.right - view.left), counts_height(view)
    points = with_room(series[min(current, len(series) - 1)].points, room)
    # A note begins at its point.
    return [Note(day_of(one.at) - 0.5 * room, height, counted(one.counts), MUTED) for one in points]


def _parts(series: VisitSeries, where: Placed, cap: float) -> list[Part]:
    look = print_look(series.colour)
    parts: list[Part] = [Line(where.at, where.estimate, look.colour, 1.0, look.dash, 0.6)]
    x, y = where.brackets(cap)
    parts += [Line(x[at : at + 2], y[at : at + 2], look.colour, 1.5) for at in range(0, x.size, 2)]
    for chosen, filled in ((~where.is_today, True), (where.is_today, False)):
        at = np.flatnonzero(chosen & np.isfinite(where.estimate))
        parts.append(Marks(where.at[at], where.estimate[at], look.colour, look.symbol, filled))
    return parts
