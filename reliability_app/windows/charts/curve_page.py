"""Hazard and Survival: the same fit and the same reading over age."""

from __future__ import annotations

from functools import partial

import numpy as np
import pyqtgraph as pg
from numpy.typing import NDArray
from PySide6.QtCore import QPointF
from PySide6.QtGui import QFont, QPainterPath
from PySide6.QtWidgets import QWidget

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale
from reliability_app.reports.captions import survival_caption
from reliability_app.reports.chart_ranges import Range, curve_range, hazard_top, unit_ages
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.reports.reading_places import Place, hazard_mark, survival_mark
from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.age_axis import EvenAxis
from reliability_app.windows.charts.chart_page import ChartPage
from reliability_app.windows.charts.dragged_age import percent_at_age
from reliability_app.windows.charts.legend import Corner
from reliability_app.windows.charts.reading_marks import running_tip
from reliability_app.windows.charts.reading_steps import snapped
from reliability_app.windows.charts.set_drawings import SetDrawing
from reliability_app.windows.charts.set_items import FitLine, Marks
from reliability_app.windows.charts.steps import Steps
from reliability_app.windows.theme import SeriesStyle, Theme

Floats = NDArray[np.float64]

NO_ESTIMATE = "No curve: these units give no estimate. The cautions below say why."


class CurvePage(ChartPage):
    """A curve over age with an upright reading line that is dragged to and fro."""

    def __init__(self, name: str, *, legend_corner: Corner, parent: QWidget | None = None) -> None:
        super().__init__(
            name,
            EvenAxis(),
            age_scale="linear",
            drags="age",
            legend_corner=legend_corner,
            parent=parent,
        )

    def _percent_at(self, position: float) -> float:
        return percent_at_age(self, position)

    def _percent_across(self, position: float) -> float | None:  # noqa: ARG002 - a height that belongs to many ages
        return None


class HazardPage(CurvePage):
    """The hazard rate over age."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Hazard", legend_corner="left", parent=parent)
        self.reading_line.takes_across = False

    def _new_drawing(self) -> SetDrawing:
        return HazardOfSet(self.view.plotItem.vb, self.scale)

    def _upright_title(self) -> str:
        unit = self._life_unit or "unit of age"
        return f"Hazard rate (failures per unit per {unit})"

    def _nothing_to_show(self) -> str:
        nothing = super()._nothing_to_show()
        if not nothing and all(picture.hazard is None for picture in self._pictures):
            return NO_ESTIMATE
        return nothing

    def _place_mark(self, place: Place) -> ReadingMark | None:
        return hazard_mark(self.current, place, self.scale, self._life_unit)

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        ages = self.scale.from_scale(unit_ages(self._pictures, self.scale))
        top = hazard_top(self._pictures, mark, (float(ages[0]), float(ages[1])))
        return curve_range(self._pictures, mark, self.scale, high=top)


class SurvivalPage(CurvePage):
    """The share of units still running over age, with the Kaplan-Meier steps."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Survival", legend_corner="right", parent=parent)

    def _new_drawing(self) -> SetDrawing:
        return SurvivalOfSet(self.view.plotItem.vb, self.scale)

    def _upright_title(self) -> str:
        return "Reliability (%)"

    def _caption_text(self) -> str:
        return survival_caption(self._pictures)

    def _percent_across(self, position: float) -> float | None:
        box = self.view.plotItem.vb
        low, high = box.viewRange()[1]
        return snapped(min(max(100.0 - position, 1e-6), 100.0 - 1e-6), (high - low) / max(box.height(), 1.0))

    def _place_mark(self, place: Place) -> ReadingMark | None:
        return survival_mark(place, self.scale, self._life_unit)

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        return curve_range(self._pictures, mark, self.scale, high=100.0)


class HazardOfSet:
    """What the Hazard page shows of one set."""

    def __init__(self, view_box: pg.ViewBox, age: AgeScale) -> None:
        self._age = age
        self._shown: SetPicture | None = None
        self.fit = FitLine(view_box)

    def show(self, picture: SetPicture, life_unit: str) -> None:  # noqa: ARG002 - no mark here says an age
        """Draw a picture."""
        if self._shown is None or self._shown.hazard is not picture.hazard:
            show_curve(self.fit, picture.hazard, self._age, times=1.0)
        self._shown = picture

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:  # noqa: ARG002
        """Take the looks of the set; a hazard has no marks."""
        self.fit.dress(style, is_dark=theme.is_dark)

    def marks(self) -> tuple[Marks, ...]:
        """Return none: a hazard stands for no single unit."""
        return ()

    def remove(self) -> None:
        """Leave the plot for good."""
        self.fit.remove()


class SurvivalOfSet:
    """What the Survival page shows of one set."""

    def __init__(self, view_box: pg.ViewBox, age: AgeScale) -> None:
        self._age = age
        self._shown: SetPicture | None = None
        self.fit = FitLine(view_box)
        self.steps = Steps(view_box, age)
        self.running = Marks(view_box, filled=False)

    def show(self, picture: SetPicture, life_unit: str) -> None:
        """Draw a picture."""
        was, self._shown = self._shown, picture
        if was is None or was.survival is not picture.survival:
            show_curve(self.fit, picture.survival, self._age, times=100.0)
        if was is None or was.steps is not picture.steps or was.running_age is not picture.running_age:
            self._show_steps(picture, life_unit)

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set; running units are upright ticks on the steps."""
        self.fit.dress(style, is_dark=theme.is_dark)
        self.steps.dress(style)
        self.running.dress(style, theme, size=mark_size, font=font, symbol=_upright_tick())

    def marks(self) -> tuple[Marks, ...]:
        """Return the running units on the steps."""
        return (self.running,)

    def remove(self) -> None:
        """Leave the plot for good."""
        for part in (self.fit, self.running, self.steps):
            part.remove()

    def _show_steps(self, picture: SetPicture, life_unit: str) -> None:
        steps = picture.steps
        self.steps.show(steps, times=100.0)
        if steps is None:
            height = np.full_like(picture.running_age, np.nan)
        else:
            last = np.searchsorted(steps.x, picture.running_age, side="right") - 1
            height = 100.0 * steps.y[np.maximum(last, 0)]
        self.running.show(
            self._age.to_scale(picture.running_age),
            height,
            counts=picture.running_quantity,
            tip=partial(running_tip, picture, life_unit),
            rows=picture.running_rows,
        )


def show_curve(fit: FitLine, curve: Curve | None, age: AgeScale, *, times: float) -> None:
    """Draw a curve with its band, its values multiplied by `times`."""
    if curve is None:
        fit.clear()
        return
    lower, upper = (None if edge is None else times * edge for edge in (curve.lower, curve.upper))
    fit.show(age.to_scale(curve.x), times * curve.y, lower, upper)


def _upright_tick() -> QPainterPath:
    path = QPainterPath(QPointF(0.0, -0.5))
    path.lineTo(0.0, 0.5)
    return path
