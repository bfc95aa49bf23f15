"""Density and Cumulative hazard: the same fit and the same reading over age, computed when the page is shown."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from PySide6.QtGui import QFont
from PySide6.QtWidgets import QWidget

from reliability_app.engine.paper import AgeScale
from reliability_app.reports.captions import cumulative_caption, density_caption
from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.further_figures import CUMULATIVE_TITLE, density_title
from reliability_app.reports.further_places import cumulative_mark, cumulative_range, density_mark, density_range
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.reports.reading_places import Place
from reliability_app.session.further_pictures import FurtherPicture
from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.curve_page import NO_ESTIMATE, CurvePage, show_curve
from reliability_app.windows.charts.reading_steps import snapped
from reliability_app.windows.charts.set_drawings import SetDrawing
from reliability_app.windows.charts.set_items import FitLine, Marks
from reliability_app.windows.charts.steps import Steps
from reliability_app.windows.theme import SeriesStyle, Theme

_OFF_END = 1e-6  # percent


class DensityPage(CurvePage):
    """The probability density over age."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Density", legend_corner="right", parent=parent)
        self.reading_line.takes_across = False

    def _new_drawing(self) -> SetDrawing:
        return FurtherOfSet(self.view.plotItem.vb, self.scale, what="density")

    def _draw_set(self, place: int, drawing: SetDrawing, picture: SetPicture) -> None:
        show_further(drawing, self._further, place, picture, self._life_unit)

    def _upright_title(self) -> str:
        return density_title(self._life_unit)

    def _caption_text(self) -> str:
        return density_caption(self._further)

    def _nothing_to_show(self) -> str:
        nothing = super()._nothing_to_show()
        if not nothing and all(one.density is None for one in self._further):
            return NO_ESTIMATE
        return nothing

    def _place_mark(self, place: Place) -> ReadingMark | None:
        curve = self._further[self._current].density if self._further else None
        return density_mark(curve, place, self.scale, self._life_unit)

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        return density_range(self._pictures, [one.density for one in self._further], mark, self.scale)


class CumulativeHazardPage(CurvePage):
    """The cumulative hazard over age, with Nelson-Aalen's steps."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Cumulative hazard", legend_corner="left", parent=parent)

    def _new_drawing(self) -> SetDrawing:
        return FurtherOfSet(self.view.plotItem.vb, self.scale, what="cumulative hazard")

    def _draw_set(self, place: int, drawing: SetDrawing, picture: SetPicture) -> None:
        show_further(drawing, self._further, place, picture, self._life_unit)

    def _upright_title(self) -> str:
        return CUMULATIVE_TITLE

    def _caption_text(self) -> str:
        return cumulative_caption(self._further)

    def _place_mark(self, place: Place) -> ReadingMark | None:
        return cumulative_mark(place, self.scale, self._life_unit)

    def _percent_across(self, position: float) -> float | None:
        """Return the percent failed at a cumulative hazard."""
        box = self.view.plotItem.vb
        low, high = box.viewRange()[1]
        pixel = (high - low) / max(box.height(), 1.0)
        here, next_one = (-100.0 * float(np.expm1(-max(hazard, 0.0))) for hazard in (position, position + pixel))
        return snapped(min(max(here, _OFF_END), 100.0 - _OFF_END), max(next_one - here, _OFF_END))

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        curves = [one.cumulative_hazard for one in self._further]
        steps = [one.hazard_steps for one in self._further]
        return cumulative_range(self._pictures, curves, steps, mark, self.scale)


class FurtherOfSet:
    """What a further page shows of one set: a curve with its band, and steps where there are any."""

    def __init__(self, view_box: pg.ViewBox, age: AgeScale, *, what: str) -> None:
        self._age, self._what = age, what
        self._shown: FurtherPicture | None = None
        self.fit = FitLine(view_box)
        self.steps = Steps(view_box, age)

    def show(self, picture: SetPicture, life_unit: str) -> None:  # noqa: ARG002 - what it draws comes with show_further
        """Draw nothing: without more than the picture there is no curve."""
        self._shown = None
        self.fit.clear()
        self.steps.show(None, times=1.0)

    def show_further(self, further: FurtherPicture) -> None:
        """Draw the curve and the steps."""
        if self._shown is further:
            return
        self._shown = further
        if self._what == "density":
            show_curve(self.fit, further.density, self._age, times=1.0)
        else:
            show_curve(self.fit, further.cumulative_hazard, self._age, times=1.0)
            self.steps.show(further.hazard_steps, times=1.0)

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:  # noqa: ARG002
        """Take the looks of the set; there are no marks."""
        self.fit.dress(style, is_dark=theme.is_dark)
        self.steps.dress(style)

    def marks(self) -> tuple[Marks, ...]:
        """Return none: a curve stands for no single unit."""
        return ()

    def remove(self) -> None:
        """Leave the plot for good."""
        self.fit.remove()
        self.steps.remove()


def show_further(
    drawing: SetDrawing, further: tuple[FurtherPicture, ...], place: int, picture: SetPicture, life_unit: str
) -> None:
    """Draw what there is of the set at `place`."""
    if place < len(further) and isinstance(drawing, FurtherOfSet):
        drawing.show_further(further[place])
    else:
        drawing.show(picture, life_unit)
