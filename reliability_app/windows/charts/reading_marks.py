"""Where a reading will stand while it is moved, and what is said of a unit's mark under the mouse."""

from __future__ import annotations

import numpy as np

from reliability_app.engine.families import family
from reliability_app.engine.paper import ProbabilityScale
from reliability_app.reports.reading_places import Place, age_at, age_of_edge, percent_text
from reliability_app.session.picture import SetPicture
from reliability_app.session.wording import age_text, as_given, number_text

_MOST_ROWS_NAMED = 6


def preview(picture: SetPicture, percent: float, life_unit: str) -> Place | None:
    """Return where a reading of `percent` will stand, from the curve that is drawn.

    Along a straight fit this is exact; the bound is read off the band, which is that of the same kind of bound.
    """
    failure = picture.failure
    if failure is None:
        return None
    age = age_at(picture, percent / 100.0)
    bounds = [age_of_edge(picture, edge, percent / 100.0) for edge in (failure.upper, failure.lower)]
    return Place(
        age=age,
        fraction=percent / 100.0,
        ages=(bounds[0], bounds[1]),
        age_text=age_text(age, life_unit),
        percent_text=percent_text(percent),
    )


def percent_of_bound(picture: SetPicture, which: str, age: float) -> float | None:
    """Return the percent whose "lower" or "upper" bound is an age, read off the band; None where it has none."""
    failure = picture.failure
    edge = None if failure is None else failure.upper if which == "lower" else failure.lower
    if failure is None or edge is None:
        return None
    scale, line = ProbabilityScale(picture.family), family(picture.family).life_scale
    x, z = line.to_line(failure.x), scale.to_scale(edge)
    inside = np.isfinite(x) & np.isfinite(z)
    place = float(line.to_line(np.array(age)))
    if inside.sum() < 2 or not x[inside][0] <= place <= x[inside][-1]:
        return None
    percent = 100.0 * float(scale.from_scale(float(np.interp(place, x[inside], z[inside]))))
    return float(f"{percent:.4g}") if 0.0 < percent < 100.0 else None


def failed_tip(picture: SetPicture, life_unit: str, at: int) -> str:
    """Return what is said of a plotting position."""
    rows = picture.point_rows[at] if at < len(picture.point_rows) else ()
    count = int(picture.point_quantity[at])
    many = f"about {count} " if picture.point_is_shared[at] else "" if count == 1 else f"{count} "
    said = f"{many}failed {_when(picture, at)} {life_unit}".rstrip()
    place = f"plotted at {number_text(100.0 * float(picture.point_fraction[at]))} %"
    names = [name for name in picture.point_names[at] if name] if at < len(picture.point_names) else []
    who = ", ".join(names) if 0 < len(names) <= _MOST_ROWS_NAMED else picture.name
    return f"{who}: {said}, {place}{_rows_text(rows)}"


def _when(picture: SetPicture, at: int) -> str:
    """Return the age of a failure, or the ages between which it happened."""
    begin, end = float(picture.point_begin[at]), float(picture.point_end[at])
    if begin == end:
        return f"at {as_given(end)}"
    return f"between {as_given(begin)} and {as_given(end)}" if begin > 0 else f"by {as_given(end)}"


def running_tip(picture: SetPicture, life_unit: str, at: int) -> str:
    """Return what is said of running units."""
    count, age = int(picture.running_quantity[at]), as_given(float(picture.running_age[at]))
    rows = picture.running_rows[at] if at < len(picture.running_rows) else ()
    names = [name for name in picture.running_names[at] if name] if at < len(picture.running_names) else []
    who = ", ".join(names) if 0 < len(names) <= _MOST_ROWS_NAMED else picture.name
    many = "" if count == 1 and names else f"{count} "
    return f"{who}: {many}running at {age} {life_unit}".rstrip() + _rows_text(rows)


def _rows_text(rows: tuple[int, ...]) -> str:
    """Return the rows of the grid a mark stands for, counted from 1 as the grid does."""
    if not rows or len(rows) > _MOST_ROWS_NAMED:
        return ""
    return f" (row{'' if len(rows) == 1 else 's'} {', '.join(str(row + 1) for row in rows)})"
