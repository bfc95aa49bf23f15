"""Draws a page of an answered request, as the command line and scripts ask for it."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from reliability_app.engine.errors import RigpaperError
from reliability_app.reports.page_figures import PAGES
from reliability_app.reports.picture_file import USUAL_DPI, USUAL_SIZE, check_size, format_of, write_picture
from reliability_app.reports.shown import NO_UNITS, shown_of
from reliability_app.reports.without_screen import application_for_pictures
from reliability_app.session.reading_request import Answer


class NothingToDraw(RigpaperError):
    """A picture of no units."""


@dataclass(frozen=True)
class PictureWanted:
    """A picture as it was asked for: checked before the work, drawn after it.

    Attributes
    ----------
    page : str
        A name of `PAGES`.
    path : Path
        Its suffix names the format.
    size_mm, dpi : optional
        None for the usual ones.

    Raises
    ------
    PictureRefused
        For an unknown suffix, or a size or a resolution out of range.
    """

    page: str
    path: Path
    size_mm: tuple[float, float] | None = None
    dpi: int | None = None

    def __post_init__(self) -> None:
        format_of(self.path)
        check_size(self._size, self._dots)

    @property
    def _size(self) -> tuple[float, float]:
        return USUAL_SIZE if self.size_mm is None else self.size_mm

    @property
    def _dots(self) -> int:
        return USUAL_DPI if self.dpi is None else self.dpi

    def draw(self, answer: Answer) -> None:
        """Write the picture of the sets of an answer over each other; the first reading there is is marked.

        Raises
        ------
        NothingToDraw
            Where no unit has been read.
        PictureNotWritten
            When the file could not be written.
        """
        # A hidden set is drawn only where it is the one asked for.
        drawn = [analysis for analysis in answer.analyses if not analysis.question.hidden] or answer.analyses
        shown = shown_of(drawn, answer.life_unit)
        if shown.is_empty:
            raise NothingToDraw(NO_UNITS)
        _application = application_for_pictures()  # held while its fonts are in use
        figure = PAGES[self.page](shown).under(answer.title)
        write_picture(figure, self.path, size_mm=self._size, dpi=self._dots)
