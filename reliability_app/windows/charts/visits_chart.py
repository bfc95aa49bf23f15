"""The chart of the Visits page: a reading with its bracket against the date, several sets by colour."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAction, QColor, QFont, QFontMetricsF
from PySide6.QtWidgets import QWidget

from reliability_app.engine.paper import Tick
from reliability_app.reports.axis_ticks import LEVEL_ROOM
from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.date_ticks import date_ticks, day_of, day_text
from reliability_app.reports.figure import Figure
from reliability_app.reports.visits_figure import (
    CAPTION,
    NO_READING,
    Placed,
    VisitSeries,
    cap_of,
    counted,
    counts_height,
    days_width,
    placed,
    required_note,
    required_value,
    upright_title,
    visits_figure,
    visits_range,
    with_room,
)
from reliability_app.session.document import Ask, LifeAsk
from reliability_app.session.picture import SetPicture
from reliability_app.session.requirement import Requirement
from reliability_app.windows.charts.age_axis import EvenAxis
from reliability_app.windows.charts.chart import Chart
from reliability_app.windows.charts.round_axis import RoundAxis
from reliability_app.windows.charts.set_drawings import SetDrawing
from reliability_app.windows.charts.set_items import LINE_DEPTH, MARKS_DEPTH, Marks, smooth_curve
from reliability_app.windows.page_feed import PageContent
from reliability_app.windows.theme import SeriesStyle, Theme

_COUNT_GAP = 10.0  # pixels between two counts
_LEAST_FOR_LEGEND, _MOST_HEAD = 130.0, 0.45  # pixels; share of the chart that the legend may take
_AWAY = 50.0  # widths and heights of the whole that the view may go beyond it


class DateAxis(RoundAxis):
    """Shows days."""

    room_between = LEVEL_ROOM["linear"]

    def __init__(self) -> None:
        super().__init__("bottom")

    def text_of(self, position: float) -> str:
        """Return the day at a position."""
        return day_text(position)

    def ticks_between(self, low: float, high: float, most: int) -> list[Tick]:
        """Return the round instants between two positions."""
        return date_ticks(low, high, most)


class VisitsChart(Chart):
    """A reading through the visits.

    Signals
    -------
    visit_clicked(object)
        The mark of a visit was clicked: its place, None for today.
    """

    visit_clicked = Signal(object)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Visits", DateAxis(), EvenAxis(), legend_corner="left", parent=parent)
        self.setAccessibleName("Visits chart with its caption")
        self.rows_picked.connect(self._tell_clicked)

    def _add_parts(self) -> None:
        self.series: tuple[VisitSeries, ...] = ()
        self.ask: Ask = LifeAsk(10.0)
        self.told: tuple[str, ...] = ()
        self._requirement: Requirement | None = None
        box = self.view.plotItem.vb
        self._required = pg.InfiniteLine(angle=0.0)
        self._required_note = pg.TextItem(anchor=(0.0, 1.0))
        for item in (self._required, self._required_note):
            item.setZValue(LINE_DEPTH - 1.0)
            box.addItem(item, ignoreBounds=True)
        self._counts: list[pg.TextItem] = []
        box.sigRangeChanged.connect(self._place_notes)
        box.sigResized.connect(self._fit_again)

    def show_histories(
        self, content: PageContent, series: Sequence[VisitSeries], ask: Ask, requirement: Requirement | None
    ) -> None:
        """Draw these series, one for each picture of the content."""
        is_other = ask != self.ask
        self.series, self.ask, self._requirement = tuple(series), ask, requirement
        self.statement = content.statement
        if is_other:
            self._is_moved_by_hand = False
        self.show_pictures(content.pictures, current=content.current, life_unit=content.life_unit)
        if not self._is_moved_by_hand:
            self._settle_view(is_new=True)

    def figure(self) -> Figure | None:
        """Return what is seen as a picture for print."""
        if self._nothing_to_show():
            return None
        return visits_figure(self.series, self._shown(), self.ask, requirement=self._requirement, told=self.told)

    def edit_range(self, which: str) -> None:
        """Let the range of the upright axis be typed; dates are chosen by moving and zooming."""
        if which == "upright":
            super().edit_range(which)

    def retheme(self, theme: Theme) -> None:
        """Take the colours of a theme."""
        super().retheme(theme)
        self._required.setPen(pg.mkPen(theme.muted, width=1.0, style=Qt.PenStyle.DashLine))
        for note in (self._required_note, *self._counts):
            note.setColor(theme.muted)
            note.setFont(self._small_font)

    # What a chart is made of

    def _new_drawing(self) -> SetDrawing:
        return VisitsOfSet(self.view.plotItem.vb)

    def _whole(self) -> Range:
        """Return what shows every point below the legend."""
        height = self.view.plotItem.vb.height()
        self._legend.setVisible(len(self.series) > 1 and height >= _LEAST_FOR_LEGEND)
        taken = self._legend.boundingRect().bottom() if self._legend.isVisible() else 0.0
        return visits_range(self.series, self._required_at, head=min(taken / max(height, 1.0), _MOST_HEAD))

    def _fit_again(self, *_: object) -> None:
        if self._is_built and not self._is_moved_by_hand:
            self._settle_view(is_new=True)

    def _limits(self, whole: Range) -> Range:
        return whole.padded(left=_AWAY, right=_AWAY, low=_AWAY, high=_AWAY)

    def _level_title(self) -> str:
        return ""  # dates speak for themselves, and the page is low

    def _upright_title(self) -> str:
        return upright_title(self.ask, self._life_unit)

    def _caption_text(self) -> str:
        return CAPTION

    def _menu_groups(self) -> list[list[QAction]]:
        return [[self.reset_action, self.upright_range_action]]

    def _nothing_to_show(self) -> str:
        nothing = super()._nothing_to_show()
        if nothing:
            return nothing
        taken = any(point.reading is not None and point.reading.is_given for one in self.series for point in one.points)
        return "" if taken else NO_READING

    @property
    def _required_at(self) -> float | None:
        return required_value(self._requirement, self.ask)

    def _draw(self) -> None:
        super()._draw()
        self._show_requirement()
        self._show_counts()

    def _draw_set(self, place: int, drawing: SetDrawing, picture: SetPicture) -> None:
        if place < len(self.series) and isinstance(drawing, VisitsOfSet):
            where = placed(self.series, days_width(self.series))[place]
            drawing.show_visits(self.series[place], where, cap_of(self.series), self._life_unit)
        else:
            drawing.show(picture, self._life_unit)

    def _show_requirement(self) -> None:
        at = self._required_at
        for item in (self._required, self._required_note):
            item.setVisible(at is not None)
        if at is not None and self._requirement is not None:
            self._required.setPos(at)
            self._required_note.setText(required_note(self._requirement, self._life_unit))
        self._place_notes()

    def _show_counts(self) -> None:
        points = self.series[self._current].points if self._current < len(self.series) else ()
        while len(self._counts) > len(points):
            self.view.plotItem.vb.removeItem(self._counts.pop())
        while len(self._counts) < len(points):
            note = pg.TextItem(anchor=(0.5, 0.5))
            note.setZValue(MARKS_DEPTH)
            self._counts.append(note)
            self.view.plotItem.vb.addItem(note, ignoreBounds=True)
        for note, point in zip(self._counts, points, strict=True):
            note.setColor(self._theme.muted)
            note.setFont(self._small_font)
            note.setText(counted(point.counts))
        self._place_notes()

    def _place_notes(self, *_: object) -> None:
        """Keep the counts at the foot of the view, and the word on the requirement at its left edge."""
        (left, right), (low, high) = self.view.plotItem.vb.viewRange()
        height = counts_height(Range(left, right, low, high))
        points = self.series[self._current].points if self._current < len(self.series) else ()
        each = (right - left) / max(self.view.plotItem.vb.width(), 1.0)
        widest = max(
            (QFontMetricsF(self._small_font).horizontalAdvance(counted(one.counts)) for one in points), default=0
        )
        seen = with_room(points, (widest + _COUNT_GAP) * each)
        for note, point in zip(self._counts, points, strict=False):
            note.setPos(day_of(point.at), height)
            note.setVisible(point in seen)
        if self._required_at is not None:
            self._required_note.setPos(left, self._required_at)

    def _tell_clicked(self, place: int, rows: tuple[int, ...], _joins: bool) -> None:
        if place < len(self.series) and rows and rows[0] < len(self.series[place].points):
            self.visit_clicked.emit(self.series[place].points[rows[0]].place)


class VisitsOfSet:
    """What the chart shows of one set."""

    def __init__(self, view_box: pg.ViewBox) -> None:
        self._view_box = view_box
        self.course, self.brackets = smooth_curve(), pg.PlotCurveItem(connect="pairs", antialias=True)
        for curve in (self.course, self.brackets):
            curve.setZValue(LINE_DEPTH)
            view_box.addItem(curve, ignoreBounds=True)
        self.then, self.now = Marks(view_box, filled=True), Marks(view_box, filled=False)

    def show(self, picture: SetPicture, life_unit: str) -> None:  # noqa: ARG002 - see show_visits
        """Draw nothing: the history of this set is not known yet."""
        nothing = np.empty(0)
        for curve in (self.course, self.brackets):
            curve.setData(nothing, nothing)
        for marks in (self.then, self.now):
            marks.show(nothing, nothing, counts=np.empty(0, np.int64), tip=str)

    def show_visits(self, series: VisitSeries, where: Placed, cap: float, life_unit: str) -> None:
        """Draw the reading at each visit."""
        self.course.setData(where.at, where.estimate)
        self.brackets.setData(*where.brackets(cap))
        for marks, chosen in ((self.then, ~where.is_today), (self.now, where.is_today)):
            at = np.flatnonzero(chosen & np.isfinite(where.estimate))
            marks.show(
                where.at[at],
                where.estimate[at],
                counts=np.ones(at.size, np.int64),
                tip=partial(_tip, series, life_unit, at.tolist()),
                rows=[(row,) for row in at.tolist()],
            )

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set."""
        faint = QColor(style.colour)
        faint.setAlphaF(0.6)
        self.course.setPen(pg.mkPen(faint, width=1.0, style=style.dash))
        self.brackets.setPen(pg.mkPen(style.colour, width=1.5))
        for marks in (self.then, self.now):
            marks.dress(style, theme, size=mark_size, font=font)

    def marks(self) -> tuple[Marks, ...]:
        """Return the marks that can be clicked."""
        return self.then, self.now

    def remove(self) -> None:
        """Leave the plot for good."""
        for curve in (self.course, self.brackets):
            self._view_box.removeItem(curve)
        self.then.remove()
        self.now.remove()


def _tip(series: VisitSeries, life_unit: str, places: list[int], at: int) -> str:
    """Return what is said of a visit's mark."""
    point = series.points[places[at]]
    return f"{series.name}, {point.title}: {point.sentence(life_unit)}"
