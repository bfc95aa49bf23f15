"""From the age under the mouse to a round percent failed on the drawn fit."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from reliability_app.reports.reading_places import fraction_at
from reliability_app.windows.charts.reading_steps import snapped

if TYPE_CHECKING:
    from reliability_app.windows.charts.chart_page import ChartPage


def percent_at_age(page: ChartPage, position: float) -> float:
    """Return the percent failed at a position of the age axis, rounded to what a pixel can tell apart."""
    box = page.view.plotItem.vb
    left, right = box.viewRange()[0]
    pixel = (right - left) / max(box.width(), 1.0)
    here, next_one = (_percent_failed(page, position + shift) for shift in (0.0, pixel))
    return snapped(here, next_one - here)


def _percent_failed(page: ChartPage, position: float) -> float:
    """Return the percent failed on the drawn fit, kept off 0 and 100."""
    current = page.current
    age = max(float(page.scale.from_scale(position)), np.finfo(float).tiny)
    percent = 0.0 if current is None else 100.0 * fraction_at(current, age)
    return min(max(percent, 1e-6), 100.0 - 1e-6)
