"""Figure: what a picture shows, described without Qt, for the one painter that draws every picture of the program.

Coordinates are positions of the two axes (ln age or age, z of a paper, percent, a rate, a parameter). Sizes and widths
are in twelfths of the height of the text, which at the usual size are the pixels of the window's chart.

How to add a page: write a builder `Shown -> Figure` beside `paper_figure.py` out of the parts below (a likelihood
region is an Outline; candidates are thin Lines; residuals are Marks) and enter it in `page_figures.PAGES`. A page that
draws from something else than set pictures builds its Figure from that, and its widget gives it as `figure()`. The
painter, the writers, the export dialog and the clipboard need no change.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from reliability_app.reports.axis_ticks import TicksBetween
from reliability_app.reports.reading_mark import Along, ReadingMark
from reliability_app.reports.series_looks import BAND_STRENGTH, INK, Dash, SeriesLook, Symbol

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Corner = Literal["left", "right"]


@dataclass(frozen=True)
class Axis:
    """One axis: its title with the unit, the visible positions, and where its round ticks come from.

    Attributes
    ----------
    title : str
    low, high : float
        The positions at the two ends, low < high.
    ticks : callable (low, high, most) -> list of Tick
        The ticks of the scale, at most so many of them labelled.
    room : float
        Line heights each label of an upright axis has, or that a level one leaves between two (see axis_ticks).
    """

    title: str
    low: float
    high: float
    ticks: TicksBetween
    room: float


@dataclass(frozen=True, eq=False)
class Band:
    """The ground between two edges over x, shape (n,) each; broken where one of them is not finite."""

    x: Floats
    lower: Floats
    upper: Floats
    colour: str
    strength: float = BAND_STRENGTH


@dataclass(frozen=True, eq=False)
class Line:
    """A line through points, shape (n,) each; broken where one of them is not finite."""

    x: Floats
    y: Floats
    colour: str
    width: float = 2.0
    dash: Dash = "solid"
    strength: float = 1.0


@dataclass(frozen=True, eq=False)
class Outline:
    """A closed region through points, shape (n,) each, all finite: its ground and its border."""

    x: Floats
    y: Floats
    colour: str
    width: float = 1.5
    dash: Dash = "solid"
    strength: float = BAND_STRENGTH


@dataclass(frozen=True, eq=False)
class Marks:
    """Marks at points, shape (n,) each; what is not finite or out of sight is left out.

    Attributes
    ----------
    counts : ndarray of int, shape (n,), or None
        Units that each mark stands for, written beside it where more than one.
    edge_row : int or None
        Where it is a number the marks stand in that row above the lower edge, and y is not looked at.
    """

    x: Floats
    y: Floats
    colour: str
    symbol: Symbol
    filled: bool
    counts: Integers | None = None
    edge_row: int | None = None
    size: float = 9.0


@dataclass(frozen=True)
class Note:
    """A few words at a point, to the right of it and on its height."""

    x: float
    y: float
    text: str
    colour: str = INK


Part = Band | Line | Outline | Marks | Note


@dataclass(frozen=True)
class LegendEntry:
    """A set's name beside its line and its mark; what is a line only has no mark."""

    name: str
    look: SeriesLook
    has_mark: bool = True


@dataclass(frozen=True)
class ShownReading:
    """The reading on the chart: its mark, the colour of its set, and which of its lines runs through the chart."""

    mark: ReadingMark
    colour: str
    drags: Along


@dataclass(frozen=True, eq=False)
class Figure:
    """A whole picture.

    Attributes
    ----------
    title : str
        One line above the chart; may be empty.
    level, upright : Axis
    parts : tuple of Part
        In the order in which they are painted, the first at the bottom.
    reading : ShownReading or None
    legend : tuple of LegendEntry
        Shown where there are at least two.
    legend_corner : "left" or "right"
        The upper corner in which the legend stands.
    has_fine_grid : bool
        Whether the ticks without a label have lines too, as printed probability paper has.
    has_grid : bool
        Whether there are lines at the ticks at all; a table has none.
    empty_text : str
        What stands in the place of the chart where there is nothing to draw.
    foot : tuple of str
        Paragraphs below the chart: readings, what they rest on, every caution. Wrapped, never cut.
    origin : str
        The last line: program, version and date.
    """

    title: str
    level: Axis
    upright: Axis
    parts: tuple[Part, ...] = ()
    reading: ShownReading | None = None
    legend: tuple[LegendEntry, ...] = ()
    legend_corner: Corner = "left"
    has_fine_grid: bool = False
    has_grid: bool = True
    empty_text: str = ""
    foot: tuple[str, ...] = ()
    origin: str = ""

    def under(self, heading: str) -> Figure:
        """Return the figure with a heading (a session's title) before its own title."""
        return replace(self, title=" \N{EM DASH} ".join(part for part in (heading, self.title) if part))


def in_layers(drawings: Sequence[Sequence[Part]], *, front: int = -1) -> tuple[Part, ...]:
    """Return the parts of several sets so that no set's ground hides another's line, nor a line another's marks.

    Among its like the part of the drawing at `front` comes last, and so above the others.
    """
    ordered = sorted(range(len(drawings)), key=lambda place: place == front)
    parts = [part for place in ordered for part in drawings[place]]
    return tuple(sorted(parts, key=lambda part: _DEPTHS[type(part)]))


_DEPTHS: dict[type[Part], int] = {Band: 0, Outline: 0, Line: 1, Marks: 2, Note: 3}
