"""Residuals: each unit's life as a normal score under the fit, against what a normal sample of as many would be."""

from __future__ import annotations

from functools import partial

import numpy as np
import pyqtgraph as pg
from PySide6.QtGui import QColor, QFont
from PySide6.QtWidgets import QWidget

from reliability_app.reports.captions import residual_caption
from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.further_figures import EXPECTED_TITLE, RESIDUAL_TITLE
from reliability_app.reports.further_places import residual_range
from reliability_app.session.further_pictures import ResidualPicture
from reliability_app.session.picture import SetPicture
from reliability_app.session.wording import number_text
from reliability_app.windows.charts.even_chart import EvenChart
from reliability_app.windows.charts.set_drawings import SetDrawing
from reliability_app.windows.charts.set_items import LINE_DEPTH, Marks, smooth_curve
from reliability_app.windows.theme import SeriesStyle, Theme


class ResidualsPage(EvenChart):
    """Quantile residuals against normal quantiles."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Residuals", legend_corner="left", parent=parent)

    def _add_parts(self) -> None:
        self.even_line = pg.InfiniteLine(pos=(0.0, 0.0), angle=45.0)
        self.even_line.setZValue(LINE_DEPTH - 1.0)
        self.view.plotItem.vb.addItem(self.even_line, ignoreBounds=True)

    @property
    def _residuals(self) -> list[ResidualPicture]:
        return [one.residuals for one in self._further if not isinstance(one.residuals, str)]

    def _new_drawing(self) -> SetDrawing:
        return ResidualsOfSet(self.view.plotItem.vb)

    def _nothing_to_show(self) -> str:
        nothing = super()._nothing_to_show()
        if nothing or self._residuals:
            return nothing
        return next((one.residuals for one in self._further if isinstance(one.residuals, str)), "")

    def _level_title(self) -> str:
        return EXPECTED_TITLE

    def _upright_title(self) -> str:
        return RESIDUAL_TITLE

    def _caption_text(self) -> str:
        return residual_caption(self._residuals)

    def _whole(self) -> Range:
        return residual_range(self._residuals)

    def _draw_set(self, place: int, drawing: SetDrawing, picture: SetPicture) -> None:
        found = self._further[place].residuals if place < len(self._further) else ""
        if isinstance(found, str) or not isinstance(drawing, ResidualsOfSet):
            drawing.show(picture, self._life_unit)
        else:
            drawing.show_residuals(found, picture.name)

    def retheme(self, theme: Theme) -> None:
        """Take the colours of a theme."""
        super().retheme(theme)
        self.even_line.setPen(pg.mkPen(theme.muted, width=1.0))


class ResidualsOfSet:
    """What the page shows of one set."""

    def __init__(self, view_box: pg.ViewBox) -> None:
        self._view_box = view_box
        self._shown: ResidualPicture | None = None
        self.low_edge, self.high_edge = smooth_curve(), smooth_curve()
        for curve in (self.low_edge, self.high_edge):
            curve.setZValue(LINE_DEPTH)
            view_box.addItem(curve, ignoreBounds=True)
        self.drawn, self.known = Marks(view_box, filled=False), Marks(view_box, filled=True)

    def show(self, picture: SetPicture, life_unit: str) -> None:  # noqa: ARG002 - see show_residuals
        """Draw nothing: this set has no residuals."""
        self._shown = None
        nothing = np.empty(0)
        for curve in (self.low_edge, self.high_edge):
            curve.setData(nothing, nothing)
        for marks in (self.drawn, self.known):
            marks.show(nothing, nothing, counts=np.empty(0, np.int64), tip=str)

    def show_residuals(self, residuals: ResidualPicture, name: str) -> None:
        """Draw the residuals."""
        if self._shown is residuals:
            return
        self._shown = residuals
        self.low_edge.setData(residuals.expected, residuals.low)
        self.high_edge.setData(residuals.expected, residuals.high)
        for marks, chosen in ((self.drawn, residuals.is_drawn), (self.known, ~residuals.is_drawn)):
            at = np.flatnonzero(chosen)
            marks.show(
                residuals.expected[at],
                residuals.value[at],
                counts=np.ones(at.size, np.int64),
                tip=partial(_tip, residuals, name, at.tolist()),
                rows=[(row,) for row in residuals.rows[at].tolist()],
            )

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set."""
        edge = QColor(style.colour)
        edge.setAlphaF(0.65)
        for curve in (self.low_edge, self.high_edge):
            curve.setPen(pg.mkPen(edge, width=1.0))
        for marks in (self.drawn, self.known):
            marks.dress(style, theme, size=mark_size, font=font)

    def marks(self) -> tuple[Marks, ...]:
        """Return the marks of the units."""
        return self.known, self.drawn

    def remove(self) -> None:
        """Leave the plot for good."""
        for curve in (self.low_edge, self.high_edge):
            self._view_box.removeItem(curve)
        self.drawn.remove()
        self.known.remove()


def _tip(residuals: ResidualPicture, name: str, places: list[int], at: int) -> str:
    """Return what is said of a unit's mark."""
    place = places[at]
    row = int(residuals.rows[place])
    said = f"residual {number_text(float(residuals.value[place]))}"
    how = ", drawn at random: not seen to fail at a known age" if residuals.is_drawn[place] else ""
    return f"{residuals.names[place] or name}: {said}{how} (row {row + 1})"
