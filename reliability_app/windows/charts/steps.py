"""An estimate in steps, Kaplan-Meier's or Nelson-Aalen's, with its bounds as dotted lines."""

from __future__ import annotations

import numpy as np
import pyqtgraph as pg
from numpy.typing import NDArray
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale
from reliability_app.windows.charts.set_items import STEPS_DEPTH, smooth_curve
from reliability_app.windows.theme import SeriesStyle

Floats = NDArray[np.float64]

_BEFORE = 8.0  # e-folds before the first age at which a step that starts at age 0 begins on a log axis
_LINE_STRENGTH, _BOUNDS_STRENGTH = 0.85, 0.6


class Steps:
    """The steps of one set."""

    def __init__(self, view_box: pg.ViewBox, age: AgeScale) -> None:
        self._view_box, self._age = view_box, age
        self.line, self.low_edge, self.high_edge = (smooth_curve() for _ in range(3))
        for curve in self._curves:
            curve.setZValue(STEPS_DEPTH)
            view_box.addItem(curve, ignoreBounds=True)

    @property
    def _curves(self) -> tuple[pg.PlotCurveItem, ...]:
        return self.line, self.low_edge, self.high_edge

    def show(self, steps: Curve | None, *, times: float) -> None:
        """Show the steps, their values multiplied by `times`; nothing without any."""
        if steps is None:
            for curve in self._curves:
                curve.setData(np.empty(0), np.empty(0))
            return
        x = _begun(self._age.to_scale(steps.x))
        for curve, values in zip(self._curves, (steps.y, steps.lower, steps.upper), strict=True):
            curve.setVisible(values is not None)
            if values is not None:
                curve.setData(x, times * values)

    def dress(self, style: SeriesStyle) -> None:
        """Take the colour of a set."""
        line, edge = QColor(style.colour), QColor(style.colour)
        line.setAlphaF(_LINE_STRENGTH)
        edge.setAlphaF(_BOUNDS_STRENGTH)
        self.line.setPen(pg.mkPen(line, width=1.0))
        for curve in (self.low_edge, self.high_edge):
            curve.setPen(pg.mkPen(edge, width=1.0, style=Qt.PenStyle.DotLine))

    def remove(self) -> None:
        """Leave the plot for good."""
        for curve in self._curves:
            self._view_box.removeItem(curve)


def _begun(positions: Floats) -> Floats:
    """Let what begins at age 0 begin well to the left of a log axis."""
    finite = positions[np.isfinite(positions)]
    start = float(finite.min()) - _BEFORE if finite.size else 0.0
    return np.where(np.isfinite(positions), positions, start)
