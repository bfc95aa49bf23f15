"""The base of every chart over age: log or linear ages, and the reading, which is dragged, stepped and typed."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

from PySide6.QtCore import QPointF, QRect, Signal
from PySide6.QtGui import QAction, QActionGroup
from PySide6.QtWidgets import QWidget

from reliability_app.engine.paper import AgeScale, AgeScaleKind
from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.reading_mark import Along, ReadingMark
from reliability_app.reports.reading_places import Place, place_of
from reliability_app.reports.shown import Shown
from reliability_app.session.ask_text import read_ask
from reliability_app.session.document import Ask
from reliability_app.session.wording import reading_sentence
from reliability_app.windows.charts.age_axis import AgeAxis
from reliability_app.windows.charts.chart import Chart
from reliability_app.windows.charts.chart_ranges import limits_around
from reliability_app.windows.charts.legend import Corner
from reliability_app.windows.charts.reading_line import ReadingLine
from reliability_app.windows.charts.reading_marks import percent_of_bound, preview
from reliability_app.windows.charts.reading_steps import fine_step, round_step
from reliability_app.windows.charts.round_axis import RoundAxis


class ChartPage(Chart):
    """A page with a chart over age.

    A page adds what it draws of a set, where its reading stands, and which part it shows when left to itself.

    Signals
    -------
    percent_dragged(float)
        The percent of the reading while it is moved by mouse or key.
    percent_chosen(float)
        The percent at which it was let go.
    age_dragged(float), age_chosen(float)
        On a page whose line is upright, the age that goes with the percent.
    ask_typed(Ask)
        A reading was typed on the page.
    age_scale_changed(str)
        "log" or "linear", when the user changed the age axis.
    """

    percent_dragged = Signal(float)
    percent_chosen = Signal(float)
    age_dragged = Signal(float)
    age_chosen = Signal(float)
    ask_typed = Signal(object)
    age_scale_changed = Signal(str)

    def __init__(
        self,
        name: str,
        upright: RoundAxis,
        *,
        age_scale: AgeScaleKind,
        drags: Along,
        legend_corner: Corner,
        parent: QWidget | None = None,
    ) -> None:
        self._percent: float | None = None
        self._moved: tuple[float, float] | None = None  # percent and age of a reading not yet let go
        self._drags: Along = drags
        self._age_axis = AgeAxis(age_scale)
        super().__init__(
            name,
            self._age_axis,
            upright,
            legend_corner=legend_corner,
            has_fine_grid=drags == "value",
            parent=parent,
        )

    def _add_parts(self) -> None:
        self.reading_line = ReadingLine(self.view.plotItem, self._age_axis, self._upright, drags=self._drags)
        group = QActionGroup(self)
        self._log_action = QAction("&Log age axis", group, checkable=True, checked=self.age_scale == "log")
        self._linear_action = QAction("L&inear age axis", group, checkable=True, checked=self.age_scale != "log")
        self._log_action.triggered.connect(partial(self.set_age_scale, "log"))
        self._linear_action.triggered.connect(partial(self.set_age_scale, "linear"))
        self.read_action = QAction("Read at a &percent or an age …", self)
        self.read_action.triggered.connect(self.edit_reading)
        self.view.reading_stepped.connect(self._step_reading)
        self.view.reading_step_done.connect(self._choose_percent)
        self.view.typing_wanted.connect(self.edit_reading)
        self.view.double_clicked.connect(self._edit_reading_at)
        self.reading_line.dragged.connect(self._drag_reading)
        self.reading_line.dragged_across.connect(self._drag_across)
        self.reading_line.end_dragged.connect(self._drag_end)
        self.reading_line.released.connect(self._choose_percent)

    # --- what a page adds

    def _place_mark(self, place: Place) -> ReadingMark | None:
        """Return where the reading stands on this chart."""
        raise NotImplementedError

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        """Return the part the chart shows when left to itself."""
        raise NotImplementedError

    def _percent_at(self, position: float) -> float:
        """Return the percent failed that a position of the dragged line stands for."""
        raise NotImplementedError

    def _percent_across(self, position: float) -> float | None:
        """Return the percent failed that a position of the other line stands for; None where it says none."""
        raise NotImplementedError

    def _whole(self) -> Range:
        return self._whole_range(self.reading_line.mark)

    def _level_title(self) -> str:
        return f"Age ({self._life_unit})" if self._life_unit else "Age"

    def _limits(self, whole: Range) -> Range:
        """Return what the view never leaves: beyond, numbers overflow and there is nothing to see."""
        return limits_around(whole, self.scale)

    def _keeps_view(self) -> bool:
        return self._is_moved_by_hand or self.reading_line.is_dragging or self._moved is not None

    def _is_out_of_sight(self, seen: Range) -> bool:
        return not seen.holds(self.reading_line.mark)

    def _shown(self) -> Shown:
        return replace(super()._shown(), age_scale=self.age_scale)

    def _menu_groups(self) -> list[list[QAction]]:
        ranges = super()._menu_groups()[0]
        self.read_action.setEnabled(self.current is not None)
        return [[self.read_action], ranges, [self._log_action, self._linear_action]]

    # --- the face of a page

    @property
    def age_scale(self) -> AgeScaleKind:
        """The kind of the age axis."""
        return self._age_axis.age_scale.kind

    def set_age_scale(self, kind: AgeScaleKind, _checked: bool = False) -> None:
        """Show ages on a log or a linear axis."""
        if kind == self.age_scale:
            return
        self._take_age_scale(kind)
        self._draw()
        self.reset_view()
        self.age_scale_changed.emit(kind)

    def edit_reading(self) -> None:
        """Let a percent or an age be typed, at which to read."""
        text = "" if self._percent is None else f"{self._percent:.6g} %"
        spot = self.reading_line.spot()
        where = self.view.mapFromScene(spot) if spot is not None else self.view.rect().center()
        title = f"Read at (20 %, 1500 {self._life_unit}".rstrip() + ")"
        self.editor.ask(title, [text], self._take_ask, beside=QRect(where.x(), where.y() + 10, 1, 1))

    def _take_ask(self, typed: list[str]) -> None:
        asked: Ask = read_ask(typed[0], self._life_unit)
        self.ask_typed.emit(asked)

    def _edit_reading_at(self, spot: QPointF) -> None:
        if self.reading_line.is_at(spot):
            self.edit_reading()

    # --- drawing

    @property
    def scale(self) -> AgeScale:
        """The scale of the age axis."""
        return self._age_axis.age_scale

    def _draw(self) -> None:
        super()._draw()
        self._show_reading()

    def _dress_drawings(self) -> None:
        super()._dress_drawings()
        current = self.current
        if current is not None:
            self.reading_line.dress(self._theme, self._theme.style(current.colour).colour, self.font())

    def _take_age_scale(self, kind: AgeScaleKind) -> None:
        self._age_axis.set_kind(kind)
        self._log_action.setChecked(kind == "log")
        self._linear_action.setChecked(kind == "linear")
        self._forget_drawings()

    def _show_reading(self) -> None:
        current = self.current
        place = None if current is None else place_of(current, self._life_unit)
        self._percent = None if place is None else 100.0 * place.fraction
        self._show_place(place)
        said = "No reading."
        if current is not None and current.reading is not None and place is not None:
            said = reading_sentence(current.reading, self._life_unit)
        self.view.setAccessibleDescription(said)

    def _show_place(self, place: Place | None) -> None:
        self.reading_line.show_mark(None if place is None else self._place_mark(place))

    # --- moving the reading

    def _drag_reading(self, position: float) -> None:
        self._move_reading(self._percent_at(position))

    def _drag_across(self, position: float) -> None:
        percent = self._percent_across(position)
        if percent is not None:
            self._move_reading(percent)

    def _drag_end(self, which: str, position: float) -> None:
        """Follow an end of the bracket: read at the percent whose bound is the age under the mouse."""
        current = self.current
        if current is not None:
            percent = percent_of_bound(current, which, float(self.scale.from_scale(position)))
            if percent is not None:
                self._move_reading(percent)

    def _step_reading(self, direction: int, fine: bool) -> None:
        if self._percent is not None:
            step = fine_step if fine else round_step
            self._move_reading(step(round(self._percent, 9), direction))

    def _move_reading(self, percent: float) -> None:
        """Move the reading ahead of the engine; whoever listens may answer with a new picture at once."""
        current = self.current
        if current is None or percent == self._percent:
            return
        place = preview(current, percent, self._life_unit)
        if place is None:
            return
        self._percent = percent
        self._moved = (percent, place.age)
        self._show_place(place)
        self.percent_dragged.emit(percent)
        if self._drags == "age":
            self.age_dragged.emit(place.age)

    def _choose_percent(self) -> None:
        moved, self._moved = self._moved, None
        if moved is None:
            return
        percent, age = moved
        self.percent_chosen.emit(percent)
        if self._drags == "age":
            self.age_chosen.emit(age)
        self._settle_view(is_new=False)
