"""Hazard and Survival: the same fit and the same reading over age."""

from __future__ import annotations

from functools import partial

import numpy as np
import pyqtgraph as pg
from numpy.typing import NDArray
from PySide6.QtCore import QPointF
from PySide6.QtGui import QColor, QFont, QPainterPath
from PySide6.QtWidgets import QWidget

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale
from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.age_axis import EvenAxis
from reliability_app.windows.charts.chart_page import ChartPage, SetDrawing
from reliability_app.windows.charts.chart_ranges import Range, curve_range, hazard_top, unit_ages
from reliability_app.windows.charts.legend import Corner
from reliability_app.windows.charts.reading_line import ReadingMark
from reliability_app.windows.charts.reading_marks import Place, aged_mark, fraction_at, hazard_mark, running_tip
from reliability_app.windows.charts.reading_steps import snapped
from reliability_app.windows.charts.set_items import STEPS_DEPTH, FitLine, Marks, smooth_curve
from reliability_app.windows.theme import SeriesStyle, Theme

Floats = NDArray[np.float64]

_BEFORE = 8.0  # e-folds before the first age at which a step that starts at age 0 begins on a log axis
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
        vb = self.view.plotItem.vb
        left, right = vb.viewRange()[0]
        pixel = (right - left) / max(vb.width(), 1.0)
        here, next_one = (self._percent_failed(position + shift) for shift in (0.0, pixel))
        return snapped(here, next_one - here)

    def _percent_failed(self, position: float) -> float:
        """Return the percent failed on the drawn fit, kept off 0 and 100."""
        current = self.current
        age = max(float(self._scale.from_scale(position)), np.finfo(float).tiny)
        percent = 0.0 if current is None else 100.0 * fraction_at(current, age)
        return min(max(percent, 1e-6), 100.0 - 1e-6)


class HazardPage(CurvePage):
    """The hazard rate over age."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Hazard", legend_corner="left", parent=parent)

    def _new_drawing(self) -> SetDrawing:
        return HazardOfSet(self.view.plotItem.vb, self._scale)

    def _upright_title(self) -> str:
        unit = self._life_unit or "unit of age"
        return f"Hazard rate (failures per unit per {unit})"

    def _nothing_to_show(self) -> str:
        nothing = super()._nothing_to_show()
        if not nothing and all(picture.hazard is None for picture in self._pictures):
            return NO_ESTIMATE
        return nothing

    def _place_mark(self, place: Place) -> ReadingMark | None:
        return hazard_mark(self.current, place, self._scale, self._life_unit)

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        ages = self._scale.from_scale(unit_ages(self._pictures, self._scale))
        top = hazard_top(self._pictures, mark, (float(ages[0]), float(ages[1])))
        return curve_range(self._pictures, mark, self._scale, high=top)


class SurvivalPage(CurvePage):
    """The share of units still running over age, with the Kaplan-Meier steps."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Survival", legend_corner="right", parent=parent)

    def _new_drawing(self) -> SetDrawing:
        return SurvivalOfSet(self.view.plotItem.vb, self._scale)

    def _upright_title(self) -> str:
        return "Reliability (%)"

    def _place_mark(self, place: Place) -> ReadingMark | None:
        running = 100.0 * (1.0 - place.fraction)
        if place.fractions != (None, None):
            return running_mark(place, self._scale)
        said = f"{running:.12g} %" if place.percent_text else ""
        return aged_mark(place, running, self._scale, self._life_unit, value_text=said)

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        return curve_range(self._pictures, mark, self._scale, high=100.0)


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

    def remove(self) -> None:
        """Leave the plot for good."""
        self.fit.remove()


class SurvivalOfSet:
    """What the Survival page shows of one set."""

    def __init__(self, view_box: pg.ViewBox, age: AgeScale) -> None:
        self._age, self._view_box = age, view_box
        self._shown: SetPicture | None = None
        self.fit = FitLine(view_box)
        self.steps = smooth_curve()
        self.steps.setZValue(STEPS_DEPTH)
        view_box.addItem(self.steps, ignoreBounds=True)
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
        colour = QColor(style.colour)
        colour.setAlphaF(0.85)
        self.steps.setPen(pg.mkPen(colour, width=1.0))
        self.running.dress(style, theme, size=mark_size, font=font, symbol=_upright_tick())

    def remove(self) -> None:
        """Leave the plot for good."""
        self.fit.remove()
        self.running.remove()
        self._view_box.removeItem(self.steps)

    def _show_steps(self, picture: SetPicture, life_unit: str) -> None:
        steps = picture.steps
        if steps is None:
            self.steps.setData(np.empty(0), np.empty(0))
            height = np.full_like(picture.running_age, np.nan)
        else:
            self.steps.setData(_begun(self._age.to_scale(steps.x)), 100.0 * steps.y)
            last = np.searchsorted(steps.x, picture.running_age, side="right") - 1
            height = 100.0 * steps.y[np.maximum(last, 0)]
        self.running.show(
            self._age.to_scale(picture.running_age),
            height,
            counts=picture.running_quantity,
            tip=partial(running_tip, picture, life_unit),
        )


def show_curve(fit: FitLine, curve: Curve | None, age: AgeScale, *, times: float) -> None:
    """Draw a curve with its band, its values multiplied by `times`."""
    if curve is None:
        fit.clear()
        return
    lower, upper = (None if edge is None else times * edge for edge in (curve.lower, curve.upper))
    fit.show(age.to_scale(curve.x), times * curve.y, lower, upper)


def running_mark(place: Place, age: AgeScale) -> ReadingMark:
    """Return the mark of a reliability that was asked for, whose bound is upright."""
    ends = [None if end is None else 100.0 * (1.0 - end) for end in reversed(place.fractions)]
    texts = ["" if end is None else f"{end:.3g} %" for end in ends]
    running = 100.0 * (1.0 - place.fraction)
    return ReadingMark(
        float(age.to_scale(place.age)), running, "value", ends[0], ends[1], place.age_text, f"{running:.3g} %", *texts
    )


def _begun(positions: Floats) -> Floats:
    """Let what begins at age 0 begin well to the left of a log axis."""
    finite = positions[np.isfinite(positions)]
    start = float(finite.min()) - _BEFORE if finite.size else 0.0
    return np.where(np.isfinite(positions), positions, start)


def _upright_tick() -> QPainterPath:
    path = QPainterPath(QPointF(0.0, -0.5))
    path.lineTo(0.0, 0.5)
    return path
