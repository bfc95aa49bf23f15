"""Reads a typed range of an axis: two values in the axis's own words, in order and within what can be shown."""

from __future__ import annotations

from typing import Protocol

import numpy as np

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.numbers import UnreadableNumber, read_number


class RangeRefused(RigpaperError):
    """A range that cannot be shown."""


class TypedAxis(Protocol):
    """An axis whose values can be typed."""

    def position_of(self, value: float) -> float:
        """Return the position of a value; NaN or infinite where it has none."""

    def text_of(self, position: float) -> str:
        """Return what stands at a position."""


def read_range(axis: TypedAxis, typed: list[str], limits: tuple[float, float]) -> tuple[float, float]:
    """Return the positions of a range typed as two values.

    Raises
    ------
    RangeRefused
        With a sentence that says which value cannot be taken and what can.
    """
    low, high = (_position(axis, text) for text in typed)
    if not low < high:
        raise RangeRefused(f"The range must rise: {typed[0].strip()} does not lie below {typed[1].strip()}.")
    for position, text in ((low, typed[0]), (high, typed[1])):
        if not limits[0] <= position <= limits[1]:
            seen = f"{axis.text_of(limits[0])} to {axis.text_of(limits[1])}"
            raise RangeRefused(f"{text.strip()} is out of what this chart can show: {seen}.")
    return low, high


def _position(axis: TypedAxis, text: str) -> float:
    plain = text.strip().rstrip("%").strip()
    try:
        value = read_number(plain)
    except UnreadableNumber as trouble:
        raise RangeRefused(f"{text.strip() or 'An empty end'}: {trouble}") from None
    position = axis.position_of(value)
    if not np.isfinite(position):
        raise RangeRefused(f"{text.strip()} has no place on this axis: type another value.")
    return position
