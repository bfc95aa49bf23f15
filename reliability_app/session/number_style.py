"""How numbers are written for the user: how many digits, and what stands between thousands.

It is a choice about how results look, for the whole program and not for one session; the numbers themselves, and what
files and scripts are given, know nothing of it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

USUAL_DIGITS = 3
LEAST_DIGITS, MOST_DIGITS = 3, 5
NARROW_SPACE = "\u202f"  # narrow no-break space: ISO 80000-1 groups digits by threes with a small space
THOUSANDS_MARKS: Mapping[str, str] = {"space": NARROW_SPACE, "comma": ",", "apostrophe": "\u2019", "none": ""}
"""What can stand between thousands, by name."""


@dataclass(frozen=True)
class NumberStyle:
    """Significant digits of a result, and the name of the mark between thousands."""

    digits: int = USUAL_DIGITS
    thousands: str = "space"

    @property
    def mark(self) -> str:
        """The mark between thousands; a name nobody knows means a small space."""
        return THOUSANDS_MARKS.get(self.thousands, NARROW_SPACE)


class _Chosen:
    style = NumberStyle()


def number_style() -> NumberStyle:
    """Return the style in force."""
    return _Chosen.style


def choose_number_style(style: NumberStyle) -> None:
    """Write numbers in this style from now on."""
    digits = min(max(style.digits, LEAST_DIGITS), MOST_DIGITS)
    _Chosen.style = NumberStyle(digits, style.thousands)


def in_style(text: str) -> str:
    """Return a text whose thousands are set off by small spaces with the mark in force."""
    return text if _Chosen.style.mark == NARROW_SPACE else text.replace(NARROW_SPACE, _Chosen.style.mark)
