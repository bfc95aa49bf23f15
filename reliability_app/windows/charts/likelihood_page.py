"""Likelihood: the joint region of the two parameters with the maximum, several sets over each other."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from numpy.typing import NDArray
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QFont, QPainterPath, QPen
from PySide6.QtWidgets import QGraphicsPathItem, QWidget

from reliability_app.reports.captions import parameter_titles, region_caption
from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.further_figures import regions_of
from reliability_app.reports.further_places import region_range
from reliability_app.reports.shown import Shown
from reliability_app.session.further_pictures import RegionPicture
from reliability_app.session.picture import SetPicture
from reliability_app.session.wording import number_text
from reliability_app.windows.charts.even_chart import EvenChart
from reliability_app.windows.charts.set_drawings import SetDrawing
from reliability_app.windows.charts.set_items import BAND_DEPTH, BAND_SHARE, LINE_DEPTH, Marks, smooth_curve
from reliability_app.windows.theme import SeriesStyle, Theme

Floats = NDArray[np.float64]


class LikelihoodPage(EvenChart):
    """The likelihood regions in the customary parameters of the current set's family."""

    def __init__(self, parent: QWidget | None = None) -> None:
        self._regions: list[RegionPicture | None] = []
        self._left_out: list[str] = []
        self._reason = ""
        super().__init__("Likelihood", legend_corner="right", parent=parent)

    def _new_drawing(self) -> SetDrawing:
        return RegionOfSet(self.view.plotItem.vb)

    def _nothing_to_show(self) -> str:
        nothing = super()._nothing_to_show()
        if nothing or not self._further:
            self._regions, self._left_out, self._reason = [], [], nothing
        else:
            sets = Shown(self._pictures, self._current, further=self._further)
            self._regions, self._left_out, self._reason = regions_of(sets)
        return nothing or self._reason

    @property
    def _drawn(self) -> list[RegionPicture]:
        return [region for region in self._regions if region is not None]

    def _titles(self) -> tuple[str, str]:
        if not self._drawn:
            return "", ""
        first = self._drawn[0]
        return parameter_titles(first.family, first.joint.names, self._life_unit)

    def _level_title(self) -> str:
        return self._titles()[0]

    def _upright_title(self) -> str:
        return self._titles()[1]

    def _caption_text(self) -> str:
        return region_caption(self._drawn, self._left_out)

    def _whole(self) -> Range:
        return region_range(self._drawn)

    def _draw_set(self, place: int, drawing: SetDrawing, picture: SetPicture) -> None:
        region = self._regions[place] if place < len(self._regions) else None
        if region is None or not isinstance(drawing, RegionOfSet):
            drawing.show(picture, self._life_unit)
        else:
            drawing.show_region(region, picture.name)

    def show_pictures(self, *sets: object, **how: object) -> None:
        """Draw the regions of these sets; other regions are looked at from anew."""
        was = self._drawn
        super().show_pictures(*sets, **how)  # type: ignore[arg-type]  # handed on as they came
        if [id(region) for region in was] != [id(region) for region in self._drawn]:
            self._settle_view(is_new=True)


class RegionOfSet:
    """What the page shows of one set."""

    def __init__(self, view_box: pg.ViewBox) -> None:
        self._view_box = view_box
        self._shown: RegionPicture | None = None
        self.ground = QGraphicsPathItem()
        self.ground.setPen(QPen(Qt.PenStyle.NoPen))
        self.ground.setZValue(BAND_DEPTH)
        self.joint, self.cut = smooth_curve(), smooth_curve()
        for item in (self.ground, self.joint, self.cut):
            view_box.addItem(item, ignoreBounds=True)
        for curve in (self.joint, self.cut):
            curve.setZValue(LINE_DEPTH)
        self.peak = Marks(view_box, filled=True)

    def show(self, picture: SetPicture, life_unit: str) -> None:  # noqa: ARG002 - what it draws comes with show_region
        """Draw nothing: this set has no region here."""
        self._shown = None
        self.ground.setPath(QPainterPath())
        for curve in (self.joint, self.cut):
            curve.setData(np.empty(0), np.empty(0))
        self._show_peak(np.empty(0), np.empty(0), "")

    def show_region(self, region: RegionPicture, name: str) -> None:
        """Draw a region."""
        if self._shown is region:
            return
        self._shown = region
        path = QPainterPath()
        if region.joint.is_closed:
            path.addPolygon(pg.functions.arrayToQPolygonF(region.joint.first, region.joint.second))
            path.closeSubpath()
        self.ground.setPath(path)
        for curve, outline in ((self.joint, region.joint), (self.cut, region.cut)):
            curve.setData(_around(outline.first), _around(outline.second))
        values = ", ".join(
            f"{parameter} {number_text(value)}"
            for parameter, value in zip(region.joint.names, region.maximum, strict=True)
        )
        first, second = (np.array([value]) for value in region.maximum)
        self._show_peak(first, second, f"{name}: {values}")

    def _show_peak(self, first: Floats, second: Floats, said: str) -> None:
        self.peak.show(first, second, counts=np.ones(first.size, np.int64), tip=lambda _: said)

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set."""
        colour, ground = QColor(style.colour), QColor(style.colour)
        ground.setAlphaF(BAND_SHARE[theme.is_dark])
        self.ground.setBrush(ground)
        self.joint.setPen(pg.mkPen(colour, width=1.5, style=style.dash))
        self.cut.setPen(pg.mkPen(colour, width=1.0, style=Qt.PenStyle.DashLine))
        self.peak.dress(style, theme, size=mark_size, font=font)

    def marks(self) -> tuple[Marks, ...]:
        """Return none: a parameter stands for no single unit."""
        return ()

    def remove(self) -> None:
        """Leave the plot for good."""
        for item in (self.ground, self.joint, self.cut):
            self._view_box.removeItem(item)
        self.peak.remove()


def _around(values: Floats) -> Floats:
    """Return an outline that comes back to where it began."""
    return np.append(values, values[:1])
