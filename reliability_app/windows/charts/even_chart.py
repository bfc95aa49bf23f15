"""The base of the charts that are not over age: two axes with even steps, and what is drawn from a further picture."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtWidgets import QWidget

from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.shown import Shown
from reliability_app.windows.charts.age_axis import EvenAxis
from reliability_app.windows.charts.chart import Chart
from reliability_app.windows.charts.legend import Corner

_AWAY = 1000.0


class EvenChart(Chart):
    """A chart of two plain numbers."""

    def __init__(self, name: str, *, legend_corner: Corner, parent: QWidget | None = None) -> None:
        super().__init__(name, EvenAxis("bottom"), EvenAxis(), legend_corner=legend_corner, parent=parent)

    def _limits(self, whole: Range) -> Range:
        return whole.padded(left=_AWAY, right=_AWAY, low=_AWAY, high=_AWAY)

    @property
    def _seen_sets(self) -> Shown:
        """What is shown, without the view."""
        return replace(self._shown(), view=None)
