"""The picture of the Paper page: plotting positions, running units, fit and band on probability paper."""

from __future__ import annotations

from itertools import cycle

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families import family
from reliability_app.engine.paper import AgeScale, AgeScaleKind, ProbabilityScale, Tick
from reliability_app.reports.axis_ticks import LEVEL_ROOM, UPRIGHT_ROOM
from reliability_app.reports.chart_ranges import paper_range
from reliability_app.reports.figure import Axis, Figure, LegendEntry, Line, Marks, Part, in_layers
from reliability_app.reports.fit_parts import fit_parts
from reliability_app.reports.reading_places import paper_mark, place_of
from reliability_app.reports.series_looks import CANDIDATE_DASHES, MUTED, SeriesLook, print_look
from reliability_app.reports.shown import NO_UNITS, Shown
from reliability_app.session.picture import SetPicture

Floats = NDArray[np.float64]

_FURTHEST = 60.0  # z beyond which nothing is looked at; a bound of 0 or 1 is drawn there
_USUAL_FAMILY = "lognormal"


def paper_figure(shown: Shown) -> Figure:
    """Return the picture of probability paper; the family of the current set decides its scale."""
    chosen = family(_USUAL_FAMILY if shown.chosen is None else shown.chosen.family)
    probability = ProbabilityScale(chosen.name)
    usual: AgeScaleKind = "log" if chosen.of_log_life else "linear"
    age = AgeScale(shown.age_scale or usual)
    place = None if shown.chosen is None else place_of(shown.chosen, shown.life_unit)
    mark = None if place is None else paper_mark(place, probability, age, shown.life_unit)
    view = shown.view or paper_range(shown.pictures, mark, probability, age)
    lines, entries = _candidates(shown, probability, age)
    drawings = [_set_on_paper(picture, probability, age, row=row) for row, picture in enumerate(shown.pictures)]
    return Figure(
        title=shown.title(f"{chosen.title} paper"),
        level=Axis(shown.age_title, view.left, view.right, age.ticks, LEVEL_ROOM[age.kind]),
        upright=Axis("Failed (%)", view.low, view.high, _PercentTicks(probability), UPRIGHT_ROOM),
        parts=in_layers([lines, *drawings], front=1 + shown.current),
        reading=shown.reading(mark, "value"),
        legend=shown.legend + entries if entries else shown.legend,
        legend_corner="left",
        has_fine_grid=True,
        empty_text=NO_UNITS if shown.is_empty else "",
        foot=shown.foot,
        origin=shown.origin,
    )


class _PercentTicks:
    """The percents between two z, within the limits of the scale."""

    def __init__(self, scale: ProbabilityScale) -> None:
        self._scale = scale

    def __call__(self, low: float, high: float, most: int) -> list[Tick]:
        limit_low, limit_high = self._scale.limits
        low, high = max(low, limit_low), min(high, limit_high)
        return self._scale.ticks(low, high, most) if low < high else []


def _candidates(
    shown: Shown, probability: ProbabilityScale, age: AgeScale
) -> tuple[list[Part], tuple[LegendEntry, ...]]:
    """Return the candidates as thin grey lines told apart by their dashes, and their entries in the legend."""
    lines: list[Part] = []
    entries = []
    for line, dash in zip(shown.candidates, cycle(CANDIDATE_DASHES), strict=False):
        z = np.clip(probability.to_scale(line.fraction), -_FURTHEST, _FURTHEST)
        lines.append(Line(age.to_scale(line.age), z, MUTED, width=1.25, dash=dash))
        entries.append(LegendEntry(line.title, SeriesLook(MUTED, "round", dash), has_mark=False))
    return lines, tuple(entries)


def _set_on_paper(picture: SetPicture, probability: ProbabilityScale, age: AgeScale, *, row: int) -> list[Part]:
    look = print_look(picture.colour)
    running = age.to_scale(picture.running_age)
    points = age.to_scale(picture.point_age)
    heights = probability.to_scale(picture.point_fraction)
    parts: list[Part] = [
        Marks(running, running, look.colour, look.symbol, False, picture.running_quantity, edge_row=row),
        Marks(points, heights, look.colour, look.symbol, True, picture.point_quantity),
    ]

    def z(fractions: Floats) -> Floats:
        return np.clip(probability.to_scale(fractions), -_FURTHEST, _FURTHEST)

    return [*fit_parts(picture.failure, look, age, z), *parts]
