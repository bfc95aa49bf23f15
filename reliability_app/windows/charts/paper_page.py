"""Paper: plotting positions, running units, fit and band on the probability paper of the chosen family."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import numpy as np
import pyqtgraph as pg
from numpy.typing import NDArray
from PySide6.QtGui import QFont
from PySide6.QtWidgets import QWidget

from reliability_app.engine.families import family
from reliability_app.engine.paper import AgeScale, AgeScaleKind, ProbabilityScale
from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.chart_page import ChartPage, SetDrawing
from reliability_app.windows.charts.chart_ranges import Range, paper_range
from reliability_app.windows.charts.probability_axis import ProbabilityAxis
from reliability_app.windows.charts.reading_line import ReadingMark
from reliability_app.windows.charts.reading_marks import Place, failed_tip, paper_mark, running_tip
from reliability_app.windows.charts.reading_steps import snapped
from reliability_app.windows.charts.set_items import EdgeMarks, FitLine, Marks
from reliability_app.windows.theme import SeriesStyle, Theme

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

    @property
    def _probability(self) -> ProbabilityScale:
        return self._probability_axis.scale_of_family

    def _prepare(self) -> None:
        if self.current is None or self.current.family == self._probability.family_name:
            return
        was, now = (family(name).of_log_life for name in (self._probability.family_name, self.current.family))
        self._probability_axis.set_family(self.current.family)
        self._forget_drawings()
        if was != now:
            self._age_scales[was] = self.age_scale
            self._take_age_scale(self._age_scales[now])

    def _new_drawing(self) -> SetDrawing:
        return SetOnPaper(self.view.plotItem.vb, self._probability, self._scale, row=len(self._drawings))

    def _upright_title(self) -> str:
        return "Failed (%)"

    def _place_mark(self, place: Place) -> ReadingMark | None:
        return paper_mark(place, self._probability, self._scale, self._life_unit)

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        return paper_range(self._pictures, mark, self._probability, self._scale)

    def _limits(self, whole: Range) -> Range:
        low, high = self._probability.limits
        return replace(super()._limits(whole), low=low, high=high)

    def _percent_at(self, position: float) -> float:
        vb = self.view.plotItem.vb
        low, high = vb.viewRange()[1]
        pixel = (high - low) / max(vb.height(), 1.0)
        here, next_one = 100.0 * self._probability.from_scale([position, position + pixel])
        return snapped(float(here), float(next_one - here))


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
            )
        if was is None or was.running_age is not picture.running_age:
            self.running.stand(
                self._age.to_scale(picture.running_age),
                counts=picture.running_quantity,
                tip=partial(running_tip, picture, life_unit),
            )
        if was is None or was.failure is not picture.failure:
            self._show_fit(picture)

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set; its running units stand in a row of their own."""
        self.fit.dress(style, is_dark=theme.is_dark)
        for marks in (self.points, self.running):
            marks.dress(style, theme, size=mark_size, font=font)
        self.running.raise_to((0.5 + self._row) * (mark_size + 3.0) + 2.0)

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
