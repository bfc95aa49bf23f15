"""The pictures of the further pages: density, cumulative hazard, likelihood region and residuals."""

from __future__ import annotations

import numpy as np

from reliability_app.engine.paper import AgeScale
from reliability_app.reports.axis_ticks import EVEN_ROOM, LEVEL_ROOM
from reliability_app.reports.captions import (
    cumulative_caption,
    density_caption,
    parameter_titles,
    region_caption,
    residual_caption,
)
from reliability_app.reports.curve_figures import curve_figure, step_parts
from reliability_app.reports.figure import Axis, Figure, Line, Marks, Outline, Part, in_layers
from reliability_app.reports.fit_parts import fit_parts
from reliability_app.reports.further_places import (
    cumulative_mark,
    cumulative_range,
    density_mark,
    density_range,
    region_range,
    residual_range,
)
from reliability_app.reports.reading_places import place_of
from reliability_app.reports.series_looks import SeriesLook, print_look
from reliability_app.reports.shown import NO_UNITS, Shown
from reliability_app.session.further_pictures import RegionPicture, ResidualPicture

NO_CURVE = "No curve: these units give no estimate."
_EVEN = AgeScale("linear")


def density_figure(shown: Shown) -> Figure:
    """Return the picture of the density over age."""
    age = AgeScale(shown.age_scale or "linear")
    place = None if shown.chosen is None else place_of(shown.chosen, shown.life_unit)
    curves = [one.density for one in shown.further]
    mark = None if place is None else density_mark(curves[shown.current], place, age, shown.life_unit)
    view = shown.view or density_range(shown.pictures, curves, mark, age)
    looks = [print_look(picture.colour) for picture in shown.pictures]
    drawings = [fit_parts(curve, look, age, np.asarray) for curve, look in zip(curves, looks, strict=True)]
    empty = NO_UNITS if shown.is_empty else "" if any(drawings) else NO_CURVE
    caption = density_caption(shown.further)
    title = density_title(shown.life_unit)
    return curve_figure(
        shown, "Density", title, age, view, drawings, mark=mark, legend_corner="right", empty=empty, caption=caption
    )


def density_title(life_unit: str) -> str:
    """Return the title of the density's axis."""
    return f"Probability density (per {life_unit or 'unit of age'})"


def cumulative_figure(shown: Shown) -> Figure:
    """Return the picture of the cumulative hazard over age, with Nelson-Aalen's steps."""
    age = AgeScale(shown.age_scale or "linear")
    place = None if shown.chosen is None else place_of(shown.chosen, shown.life_unit)
    mark = None if place is None else cumulative_mark(place, age, shown.life_unit)
    curves = [one.cumulative_hazard for one in shown.further]
    steps = [one.hazard_steps for one in shown.further]
    view = shown.view or cumulative_range(shown.pictures, curves, steps, mark, age)
    drawings: list[list[Part]] = []
    for picture, curve, corner in zip(shown.pictures, curves, steps, strict=True):
        look = print_look(picture.colour)
        drawings.append([*fit_parts(curve, look, age, np.asarray), *step_parts(corner, look, age, view, times=1.0)])
    empty = NO_UNITS if shown.is_empty else ""
    caption = cumulative_caption(shown.further)
    return curve_figure(
        shown,
        "Cumulative hazard",
        CUMULATIVE_TITLE,
        age,
        view,
        drawings,
        mark=mark,
        legend_corner="left",
        empty=empty,
        caption=caption,
    )


CUMULATIVE_TITLE = "Cumulative hazard (failures per unit)"


def likelihood_figure(shown: Shown) -> Figure:
    """Return the picture of the likelihood regions; the family of the current set decides the parameters."""
    regions, left_out, reason = regions_of(shown)
    drawn = [region for region in regions if region is not None]
    view = shown.view or region_range(drawn)
    titles = ("", "")
    if drawn:
        titles = parameter_titles(drawn[0].family, drawn[0].joint.names, shown.life_unit)
    drawings = [
        [] if region is None else _region_parts(region, print_look(picture.colour))
        for picture, region in zip(shown.pictures, regions, strict=True)
    ]
    return Figure(
        title=shown.title("Likelihood region"),
        level=Axis(titles[0], view.left, view.right, _EVEN.ticks, LEVEL_ROOM["linear"]),
        upright=Axis(titles[1], view.low, view.high, _EVEN.ticks, EVEN_ROOM),
        parts=in_layers(drawings, front=shown.current),
        legend=shown.legend,
        legend_corner="right",
        empty_text=NO_UNITS if shown.is_empty else reason,
        foot=shown.foot_under(region_caption(drawn, left_out)),
        origin=shown.origin,
    )


def regions_of(shown: Shown) -> tuple[list[RegionPicture | None], list[str], str]:
    """Return the region of each set that can be drawn with the current one, the names of the others, the reason."""
    if not shown.further:
        return [], [], ""
    chosen = shown.further[shown.current].region
    if isinstance(chosen, str):
        return [None for _ in shown.further], [], chosen
    found: list[RegionPicture | None] = []
    for one in shown.further:
        region = one.region
        is_alike = not isinstance(region, str) and (region.family, region.joint.names) == (
            chosen.family,
            chosen.joint.names,
        )
        found.append(region if is_alike and not isinstance(region, str) else None)
    named = zip(shown.pictures, found, strict=True)
    return found, [picture.name for picture, region in named if region is None], ""


def _region_parts(region: RegionPicture, look: SeriesLook) -> list[Part]:
    parts: list[Part] = []
    joint, cut = region.joint, region.cut
    if joint.is_closed:
        parts.append(Outline(joint.first, joint.second, look.colour, dash=look.dash))
    else:
        parts.append(Line(joint.first, joint.second, look.colour, width=1.5, dash=look.dash))
    around = np.append(cut.first, cut.first[:1]), np.append(cut.second, cut.second[:1])
    parts.append(Line(*around, look.colour, width=1.0, dash="dash", strength=0.85))
    first, second = (np.array([value]) for value in region.maximum)
    return [*parts, Marks(first, second, look.colour, look.symbol, filled=True)]


def residual_figure(shown: Shown) -> Figure:
    """Return the picture of the quantile residuals against normal quantiles."""
    found = [one.residuals for one in shown.further]
    drawn = [one for one in found if not isinstance(one, str)]
    view = shown.view or residual_range(drawn)
    drawings = [
        [] if isinstance(one, str) else _residual_parts(one, print_look(picture.colour))
        for picture, one in zip(shown.pictures, found, strict=True)
    ]
    ends = np.array([min(view.left, view.low), max(view.right, view.high)])
    equal: list[Part] = [Line(ends, ends, "#838587", width=1.0)] if drawn else []
    reasons = [one for one in found if isinstance(one, str)]
    return Figure(
        title=shown.title("Quantile residuals"),
        level=Axis(EXPECTED_TITLE, view.left, view.right, _EVEN.ticks, LEVEL_ROOM["linear"]),
        upright=Axis(RESIDUAL_TITLE, view.low, view.high, _EVEN.ticks, EVEN_ROOM),
        parts=in_layers([equal, *drawings], front=1 + shown.current),
        legend=shown.legend,
        legend_corner="left",
        empty_text=NO_UNITS if shown.is_empty else "" if drawn else "".join(reasons[:1]),
        foot=shown.foot_under(residual_caption(drawn)),
        origin=shown.origin,
    )


EXPECTED_TITLE, RESIDUAL_TITLE = "Normal quantile of the rank", "Quantile residual"


def _residual_parts(picture: ResidualPicture, look: SeriesLook) -> list[Part]:
    edges = [
        Line(picture.expected, edge, look.colour, width=1.0, strength=0.65) for edge in (picture.low, picture.high)
    ]
    known, drawn = ~picture.is_drawn, picture.is_drawn
    return [
        *edges,
        Marks(picture.expected[drawn], picture.value[drawn], look.colour, look.symbol, filled=False),
        Marks(picture.expected[known], picture.value[known], look.colour, look.symbol, filled=True),
    ]
