"""What the view of a chart never leaves."""

from __future__ import annotations

from reliability_app.engine.paper import AgeScale
from reliability_app.reports.chart_ranges import Range

_AWAY = 1000.0
_LOG_LIMITS = (-60.0, 80.0)  # ln age


def limits_around(whole: Range, scale: AgeScale) -> Range:
    """Return the limits of view: every thinkable age on a log axis, else a thousand times the whole picture."""
    width, height = _AWAY * (whole.right - whole.left), _AWAY * (whole.high - whole.low)
    left, right = _LOG_LIMITS if scale.kind == "log" else (whole.left - width, whole.right + width)
    return Range(left, right, whole.low - height, whole.high + height)
