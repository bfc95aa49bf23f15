"""Which percents a reading stops at: round ones under the mouse, the next one for a key."""

from __future__ import annotations

from math import ceil, floor, log10

_ROUND = (1.0, 2.0, 5.0)
_LEAST, _MOST = 1e-6, 100.0 - 1e-6


def snapped(percent: float, percent_per_pixel: float) -> float:
    """Return the percent rounded to the power of ten that a movement of one to ten pixels stands for."""
    distance = min(percent, 100.0 - percent)
    # Never coarser than the second figure of what is failed or running: 0.13 %, 12 %, 99.87 %.
    coarsest = floor(log10(max(distance, _LEAST))) - (1 if distance < 10.0 else 0)
    exponent = min(ceil(log10(max(percent_per_pixel, 1e-12))), coarsest, 0)
    return _rounded(percent, exponent)


def fine_step(percent: float, direction: int) -> float:
    """Return the next percent one unit of the second figure away (10 to 11, 1.2 to 1.3, 99.5 to 99.6)."""
    distance = min(percent, 100.0 - percent)
    towards_end = (direction < 0) == (percent <= 50.0)
    exponent = min(floor(log10(max(distance, _LEAST)) + 1e-9) - 1, 0)
    if towards_end and abs(distance / 10.0 ** (exponent + 1) - 1.0) < 1e-9 and distance <= 10.0:
        exponent -= 1  # leaving 1 % downwards the next is 0.99 %, not 0.9 %
    return _rounded(percent + direction * 10.0**exponent, exponent)


def round_step(percent: float, direction: int) -> float:
    """Return the next of the usual percents: ... 0.5 1 2 5 10 20 30 ... 80 90 95 98 99 99.5 ..."""
    usual = _usual_percents()
    slack = 1e-9
    if direction > 0:
        return next((p for p in usual if p > percent * (1.0 + slack)), percent)
    return next((p for p in reversed(usual) if p < percent * (1.0 - slack)), percent)


def _usual_percents() -> list[float]:
    small = [float(f"{digit:g}e{exponent}") for exponent in range(-6, 1) for digit in _ROUND]
    middle = [float(percent) for percent in range(10, 100, 10)]
    return sorted({*small, *middle, *(round(100.0 - percent, 8) for percent in small)})


def _rounded(percent: float, exponent: int) -> float:
    return round(min(max(percent, _LEAST), _MOST), -exponent)
