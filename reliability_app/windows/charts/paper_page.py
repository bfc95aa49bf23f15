"""Paper: plotting positions, running units, fit and band on the probability paper of the chosen family."""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from itertools import cycle

import numpy as np
import pyqtgraph as pg
from numpy.typing import NDArray
from PySide6.QtGui import QAction, QFont
from PySide6.QtWidgets import QWidget

from reliability_app.engine import FAMILY_NAMES
from reliability_app.engine.families import family
from reliability_app.engine.paper import AgeScale, AgeScaleKind, ProbabilityScale
from reliability_app.reports.chart_ranges import Range, paper_range
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.reports.reading_places import Place, paper_mark
from reliability_app.reports.series_looks import CANDIDATE_DASHES
from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.chart_page import ChartPage
from reliability_app.windows.charts.dragged_age import percent_at_age
from reliability_app.windows.charts.legend import LegendEntry
from reliability_app.windows.charts.probability_axis import ProbabilityAxis
from reliability_app.windows.charts.reading_marks import failed_tip, running_tip
from reliability_app.windows.charts.reading_steps import snapped
from reliability_app.windows.charts.set_drawings import SetDrawing
from reliability_app.windows.charts.set_items import LINE_DEPTH, EdgeMarks, FitLine, Marks, smooth_curve
from reliability_app.windows.theme import PEN_STYLES, SeriesStyle, Theme

Floats = NDArray[np.float64]

_FURTHEST = 60.0  # z beyond which nothing is looked at; a bound of 0 or 1 is drawn there
_USUAL_FAMILY = "lognormal"


class PaperPage(ChartPage):
    """Probability paper with a level reading line that is dragged up and down."""

    def __init__(self, parent: QWidget | None = None) -> None:
        self._probability_axis = ProbabilityAxis(_USUAL_FAMILY)
        # Chosen for the families of ln life (True) and of life itself: each fit is straight on its own kind of axis.
        self._age_scales: dict[bool, AgeScaleKind] = {True: "log", False: "linear"}
        super().__init__(
            "Paper",
            self._probability_axis,
            age_scale="log",
            drags="value",
            legend_corner="left",
            parent=parent,
        )

    def _add_parts(self) -> None:
        super()._add_parts()
        self._candidate_curves: list[pg.PlotCurveItem] = []
        self.candidates_action = QAction("Candidates as &thin lines", self, checkable=True)

    def _menu_groups(self) -> list[list[QAction]]:
        return [*super()._menu_groups(), [self.candidates_action]]

    def _draw(self) -> None:
        super()._draw()
        self._draw_candidates()

    def _draw_candidates(self) -> None:
        """Draw other families as thin lines in a quiet tone, told apart by their dashes and named in the legend."""
        box = self.view.plotItem.vb
        while len(self._candidate_curves) > len(self._candidates):
            box.removeItem(self._candidate_curves.pop())
        while len(self._candidate_curves) < len(self._candidates):
            curve = smooth_curve()
            curve.setZValue(LINE_DEPTH - 1.0)
            box.addItem(curve, ignoreBounds=True)
            self._candidate_curves.append(curve)
        for curve, line, style in zip(self._candidate_curves, self._candidates, self._candidate_styles(), strict=True):
            z = np.clip(self._probability.to_scale(line.fraction), -_FURTHEST, _FURTHEST)
            curve.setData(self.scale.to_scale(line.age), z)
            curve.setPen(pg.mkPen(style.colour, width=1.25, style=style.dash))

    def _candidate_styles(self) -> list[SeriesStyle]:
        dashes = cycle(CANDIDATE_DASHES)
        return [SeriesStyle(self._theme.muted, "", PEN_STYLES[next(dashes)]) for _ in self._candidates]

    def _legend_entries(self) -> list[LegendEntry]:
        named = zip(self._candidates, self._candidate_styles(), strict=True)
        return super()._legend_entries() + [LegendEntry(line.title, style) for line, style in named]

    def retheme(self, theme: Theme) -> None:
        """Take the colours of a theme."""
        super().retheme(theme)
        self._draw_candidates()

    @property
    def _probability(self) -> ProbabilityScale:
        return self._probability_axis.scale_of_family

    def _prepare(self) -> None:
        if self.current is None or self.current.family == self._probability.family_name:
            return
        if self.current.family not in FAMILY_NAMES:
            # Named by a session of a later version: a caution says so, and the marks stand on the paper that is there.
            return
        was, now = (family(name).of_log_life for name in (self._probability.family_name, self.current.family))
        self._probability_axis.set_family(self.current.family)
        self._forget_drawings()
        if was != now:
            self._age_scales[was] = self.age_scale
            self._take_age_scale(self._age_scales[now])

    def _new_drawing(self) -> SetDrawing:
        return SetOnPaper(self.view.plotItem.vb, self._probability, self.scale, row=len(self._drawings))

    def _upright_title(self) -> str:
        return "Failed (%)"

    def _place_mark(self, place: Place) -> ReadingMark | None:
        return paper_mark(place, self._probability, self.scale, self._life_unit)

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        return paper_range(self._pictures, mark, self._probability, self.scale)

    def _limits(self, whole: Range) -> Range:
        low, high = self._probability.limits
        return replace(super()._limits(whole), low=low, high=high)

    def _percent_at(self, position: float) -> float:
        vb = self.view.plotItem.vb
        low, high = vb.viewRange()[1]
        pixel = (high - low) / max(vb.height(), 1.0)
        here, next_one = 100.0 * self._probability.from_scale([position, position + pixel])
        return snapped(float(here), float(next_one - here))

    def _percent_across(self, position: float) -> float | None:
        return percent_at_age(self, position)


class SetOnPaper:
    """What the paper shows of one set."""

    def __init__(self, view_box: pg.ViewBox, probability: ProbabilityScale, age: AgeScale, *, row: int) -> None:
        self._probability, self._age, self._row = probability, age, row
        self._shown: SetPicture | None = None
        self.fit = FitLine(view_box)
        self.points = Marks(view_box, filled=True)
        self.running = EdgeMarks(view_box)

    def show(self, picture: SetPicture, life_unit: str) -> None:
        """Draw a picture; what has not changed since the last one is left alone."""
        was, self._shown = self._shown, picture
        if was is None or was.point_age is not picture.point_age:
            self.points.show(
                self._age.to_scale(picture.point_age),
                self._probability.to_scale(picture.point_fraction),
                counts=picture.point_quantity,
                tip=partial(failed_tip, picture, life_unit),
                rows=picture.point_rows,
            )
        if was is None or was.running_age is not picture.running_age:
            self.running.stand(
                self._age.to_scale(picture.running_age),
                counts=picture.running_quantity,
                tip=partial(running_tip, picture, life_unit),
                rows=picture.running_rows,
            )
        if was is None or was.failure is not picture.failure:
            self._show_fit(picture)

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set; its running units stand in a row of their own."""
        self.fit.dress(style, is_dark=theme.is_dark)
        for marks in (self.points, self.running):
            marks.dress(style, theme, size=mark_size, font=font)
        self.running.raise_to((0.5 + self._row) * (mark_size + 3.0) + 2.0)

    def marks(self) -> tuple[Marks, ...]:
        """Return the failed and the running units."""
        return self.points, self.running

    def remove(self) -> None:
        """Leave the plot for good."""
        for part in (self.fit, self.points, self.running):
            part.remove()

    def _show_fit(self, picture: SetPicture) -> None:
        if picture.failure is None:
            self.fit.clear()
            return
        curve = picture.failure
        self.fit.show(
            self._age.to_scale(curve.x), self._heights(curve.y), self._bound(curve.lower), self._bound(curve.upper)
        )

    def _bound(self, fractions: Floats | None) -> Floats | None:
        return None if fractions is None else self._heights(fractions)

    def _heights(self, fractions: Floats) -> Floats:
        return np.clip(self._probability.to_scale(fractions), -_FURTHEST, _FURTHEST)
