"""Gives each page what it is to show: the one in front at once, the others when they come to the front."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QTabWidget, QWidget

from reliability_app.session.candidate_lines import CandidateLine
from reliability_app.session.further_pictures import FurtherPicture
from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.chart import Chart


@dataclass(frozen=True, eq=False)
class PageContent:
    """What all pages show: the sets, the place of the one in front, the unit of life, and the statement below.

    `places` says where each of the sets stands in the session.
    """

    pictures: tuple[SetPicture, ...] = ()
    current: int = 0
    life_unit: str = "h"
    further: tuple[FurtherPicture, ...] = ()
    statement: str = ""
    places: tuple[int, ...] = ()


class PageFeed(QObject):
    """Feeds the pages of a tab widget; some draw what takes a while to compute, and most are not looked at.

    Signals
    -------
    fed(PageContent)
        There is something else to show.
    """

    fed = Signal(object)

    def __init__(self, tabs: QTabWidget, pages: Sequence[Chart], parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._tabs, self._pages = tabs, tuple(pages)
        self._content = PageContent()
        self._has: dict[Chart, PageContent] = {}
        self._candidates: tuple[CandidateLine, ...] = ()
        self._picked: tuple[int, tuple[int, ...]] = (0, ())
        self._ringed: dict[Chart, tuple[int, tuple[int, ...]]] = {}
        tabs.currentChanged.connect(self._feed_front)

    def show(self, content: PageContent) -> None:
        """Show this from now on."""
        self._content = content
        self._feed_front()
        self.fed.emit(content)

    @property
    def content(self) -> PageContent:
        """What is shown."""
        return self._content

    def show_candidates(self, lines: tuple[CandidateLine, ...]) -> None:
        """Draw other families as lines on the pages that have a place for them."""
        if lines or self._candidates:
            self._candidates = lines
            self._has = {}
            self._feed_front()

    def highlight(self, place: int, rows: Sequence[int]) -> None:
        """Ring the units of some rows of the set at `place`, counted among those shown."""
        self._picked = (place, tuple(rows))
        self._feed_front()

    def _feed_front(self, _place: int = 0) -> None:
        front: QWidget | None = self._tabs.currentWidget()
        page = next((one for one in self._pages if one is front), None)
        if page is None:
            return
        if self._ringed.get(page) != self._picked:
            self._ringed[page] = self._picked
            page.highlight(*self._picked)
        if self._has.get(page) is self._content:
            return
        content = self._content
        page.take_candidates(self._candidates)
        self._has[page] = content
        page.statement = content.statement
        page.show_pictures(
            content.pictures, current=content.current, life_unit=content.life_unit, further=content.further
        )
