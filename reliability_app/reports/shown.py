"""Shown: what a chart page shows at one moment, from which its picture is built."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from datetime import date

from reliability_app import __version__
from reliability_app.engine.paper import AgeScaleKind
from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.figure import LegendEntry, ShownReading
from reliability_app.reports.foot import joint_statement
from reliability_app.reports.reading_mark import Along, ReadingMark
from reliability_app.reports.series_looks import print_look
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.candidate_lines import CandidateLine
from reliability_app.session.further_pictures import FurtherPicture
from reliability_app.session.picture import SetPicture

NO_UNITS = "No unit has been read: there is nothing to draw."


@dataclass(frozen=True, eq=False)
class Shown:
    """What a page shows.

    Attributes
    ----------
    pictures : tuple of SetPicture
        The sets over each other.
    current : int
        The place of the set whose reading is marked.
    life_unit : str
    age_scale : "log", "linear" or None
        The age axis; None leaves it to the page.
    view : Range or None
        The visible part; None shows the whole.
    statement : str
        Readings, what they rest on and their cautions, one paragraph a line.
    further : tuple of FurtherPicture
        What further pages draw of each set, in the same order; may be empty for the pages that need none of it.
    candidates : tuple of CandidateLine
        Other families fitted to the current set, as lines on the paper.
    on : date
        The day the picture was made.
    """

    pictures: tuple[SetPicture, ...]
    current: int = 0
    life_unit: str = "h"
    age_scale: AgeScaleKind | None = None
    view: Range | None = None
    statement: str = ""
    further: tuple[FurtherPicture, ...] = ()
    candidates: tuple[CandidateLine, ...] = ()
    on: date = field(default_factory=date.today)

    @property
    def is_empty(self) -> bool:
        """True where no picture has anything to draw."""
        return all(picture.is_empty for picture in self.pictures)

    @property
    def chosen(self) -> SetPicture | None:
        """The picture whose reading is marked."""
        return self.pictures[self.current] if self.pictures else None

    @property
    def age_title(self) -> str:
        """The title of the age axis, with the unit."""
        return f"Age ({self.life_unit})" if self.life_unit else "Age"

    def title(self, page: str) -> str:
        """Return the page's title, with the set's name where there is one set."""
        return f"{self.pictures[0].name} \N{EM DASH} {page}" if len(self.pictures) == 1 else page

    @property
    def legend(self) -> tuple[LegendEntry, ...]:
        """One entry for each set."""
        return tuple(LegendEntry(picture.name, print_look(picture.colour)) for picture in self.pictures)

    @property
    def foot(self) -> tuple[str, ...]:
        """The paragraphs below the chart."""
        return tuple(self.statement.splitlines())

    def foot_under(self, caption: str) -> tuple[str, ...]:
        """The paragraphs below the chart, first what its lines mean."""
        return ((caption,) if caption else ()) + self.foot

    @property
    def origin(self) -> str:
        """Program, version and date."""
        return f"Rigpaper {__version__}, {self.on.isoformat()}"

    def reading(self, mark: ReadingMark | None, drags: Along) -> ShownReading | None:
        """Return the reading in the colour of its set."""
        if mark is None or self.chosen is None:
            return None
        return ShownReading(mark, print_look(self.chosen.colour).colour, drags)


def shown_of(analyses: Sequence[SetAnalysis], life_unit: str) -> Shown:
    """Return finished analyses as a page shows them, with the first reading there is."""
    current = next((place for place, analysis in enumerate(analyses) if analysis.main is not None), 0)
    return Shown(
        pictures=tuple(analysis.picture for analysis in analyses),
        current=current,
        life_unit=life_unit,
        statement=joint_statement(analyses),
        further=tuple(FurtherPicture(analysis) for analysis in analyses),
    )
