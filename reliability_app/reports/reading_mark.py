"""ReadingMark: where a reading stands on a chart, and what its tags and the ends of its bound say."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

Along = Literal["age", "value"]


@dataclass(frozen=True)
class ReadingMark:
    """Where a reading stands, in positions of the two axes.

    Attributes
    ----------
    age, value : float
        The point on the curve.
    along : "age" or "value"
        The direction in which the bound lies.
    lower, upper : float or None
        The bound's ends in that direction; None on an open side.
    age_text, value_text : str
        What the tags on the axes say.
    lower_text, upper_text : str
        What is written at the ends of the bracket; may be empty.
    """

    age: float
    value: float
    along: Along
    lower: float | None
    upper: float | None
    age_text: str
    value_text: str
    lower_text: str = ""
    upper_text: str = ""

    @property
    def ends(self) -> Iterator[tuple[float, str, int]]:
        """Give position, text and inward direction of each end there is."""
        if self.lower is not None:
            yield self.lower, self.lower_text, 1
        if self.upper is not None:
            yield self.upper, self.upper_text, -1


def beyond_text(text: str, inward: int, along: Along) -> str:
    """Return the text of a bound that lies beyond the picture, with an arrow that points there."""
    if along == "age":
        return f"◂ {text}" if inward > 0 else f"{text} ▸"
    return f"▾ {text}" if inward > 0 else f"▴ {text}"
