"""The pictures of the pages that show a curve over age: Hazard and Survival."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale
from reliability_app.reports.axis_ticks import EVEN_ROOM, LEVEL_ROOM
from reliability_app.reports.captions import survival_caption
from reliability_app.reports.chart_ranges import Range, curve_range, hazard_top, unit_ages
from reliability_app.reports.figure import Axis, Corner, Figure, Line, Marks, Part, in_layers
from reliability_app.reports.fit_parts import fit_parts
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.reports.reading_places import hazard_mark, place_of, survival_mark
from reliability_app.reports.series_looks import SeriesLook, print_look
from reliability_app.reports.shown import NO_UNITS, Shown
from reliability_app.session.picture import SetPicture

Floats = NDArray[np.float64]

_STEPS_STRENGTH, _BOUNDS_STRENGTH = 0.85, 0.6
_NO_ESTIMATE = "No curve: these units give no estimate."


def hazard_figure(shown: Shown) -> Figure:
    """Return the picture of the hazard rate over age."""
    age = AgeScale(shown.age_scale or "linear")
    place = None if shown.chosen is None else place_of(shown.chosen, shown.life_unit)
    mark = None if place is None else hazard_mark(shown.chosen, place, age, shown.life_unit)
    ages = age.from_scale(unit_ages(shown.pictures, age))
    view = shown.view or curve_range(
        shown.pictures, mark, age, high=hazard_top(shown.pictures, mark, (float(ages[0]), float(ages[1])))
    )
    drawings = [fit_parts(picture.hazard, print_look(picture.colour), age, np.asarray) for picture in shown.pictures]
    title = f"Hazard rate (failures per unit per {shown.life_unit or 'unit of age'})"
    empty = NO_UNITS if shown.is_empty else "" if any(drawings) else _NO_ESTIMATE
    return curve_figure(shown, "Hazard", title, age, view, drawings, mark=mark, legend_corner="left", empty=empty)


def survival_figure(shown: Shown) -> Figure:
    """Return the picture of the share still running over age, with the steps of the estimate without a family."""
    age = AgeScale(shown.age_scale or "linear")
    place = None if shown.chosen is None else place_of(shown.chosen, shown.life_unit)
    mark = None if place is None else survival_mark(place, age, shown.life_unit)
    view = shown.view or curve_range(shown.pictures, mark, age, high=100.0)
    drawings = [_survival_of_set(picture, age, view) for picture in shown.pictures]
    empty = NO_UNITS if shown.is_empty else ""
    return curve_figure(
        shown,
        "Survival",
        "Reliability (%)",
        age,
        view,
        drawings,
        mark=mark,
        legend_corner="right",
        empty=empty,
        caption=survival_caption(shown.pictures),
    )


def curve_figure(
    shown: Shown,
    page: str,
    title: str,
    age: AgeScale,
    view: Range,
    drawings: list[list[Part]],
    *,
    mark: ReadingMark | None,
    legend_corner: Corner,
    empty: str = "",
    caption: str = "",
) -> Figure:
    """Return the picture of curves over age with an upright axis of even steps; each set brings its parts."""
    return Figure(
        title=shown.title(page),
        level=Axis(shown.age_title, view.left, view.right, age.ticks, LEVEL_ROOM[age.kind]),
        upright=Axis(title, view.low, view.high, AgeScale("linear").ticks, EVEN_ROOM),
        parts=in_layers(drawings, front=shown.current),
        reading=shown.reading(mark, "age"),
        legend=shown.legend,
        legend_corner=legend_corner,
        empty_text=empty,
        foot=shown.foot_under(caption),
        origin=shown.origin,
    )


def step_parts(steps: Curve | None, look: SeriesLook, age: AgeScale, view: Range, *, times: float) -> list[Part]:
    """Return the parts of an estimate in steps, its values multiplied by `times`, with its bounds as dotted lines."""
    if steps is None:
        return []
    # What begins at age 0 begins to the left of a log axis.
    x = np.maximum(age.to_scale(steps.x), view.left - (view.right - view.left))
    edges = [edge for edge in (steps.lower, steps.upper) if edge is not None]
    return [
        Line(x, times * steps.y, look.colour, width=1.0, strength=_STEPS_STRENGTH),
        *(Line(x, times * edge, look.colour, width=1.0, dash="dot", strength=_BOUNDS_STRENGTH) for edge in edges),
    ]


def _survival_of_set(picture: SetPicture, age: AgeScale, view: Range) -> list[Part]:
    look = print_look(picture.colour)
    parts = fit_parts(picture.survival, look, age, lambda share: 100.0 * share)
    steps = picture.steps
    if steps is None:
        return parts
    parts += step_parts(steps, look, age, view, times=100.0)
    last = np.maximum(np.searchsorted(steps.x, picture.running_age, side="right") - 1, 0)
    running = age.to_scale(picture.running_age)
    height = 100.0 * steps.y[last]
    parts.append(Marks(running, height, look.colour, "upright tick", False, picture.running_quantity))
    return parts
