"""The base of every chart page: one plot that is kept, its theme, menu, keyboard, legend, and the reading on it."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Protocol

import numpy as np
from PySide6.QtCore import QEvent, QPoint, Qt, Signal
from PySide6.QtGui import QAction, QActionGroup, QFont, QFontMetricsF, QGuiApplication
from PySide6.QtWidgets import QLabel, QMenu, QStackedLayout, QWidget

from reliability_app.engine.paper import AgeScale, AgeScaleKind
from reliability_app.session.picture import SetPicture
from reliability_app.session.wording import reading_sentence
from reliability_app.windows.charts.age_axis import AgeAxis
from reliability_app.windows.charts.chart_ranges import Range, limits_around
from reliability_app.windows.charts.chart_view import ChartView
from reliability_app.windows.charts.copied_picture import with_foot
from reliability_app.windows.charts.grid_lines import GridLines
from reliability_app.windows.charts.legend import Corner, Legend, LegendEntry
from reliability_app.windows.charts.reading_line import Along, ReadingLine, ReadingMark
from reliability_app.windows.charts.reading_marks import Place, place_of, preview
from reliability_app.windows.charts.reading_steps import fine_step, round_step
from reliability_app.windows.charts.round_axis import RoundAxis
from reliability_app.windows.theme import SeriesStyle, Theme, theme_of

NO_UNITS = "Paste or type the lives of some units into the table on the left."
_SMALL = 0.85
_MARK_SHARE = 0.62  # size of a unit's mark, in line heights


class SetDrawing(Protocol):
    """What a page draws of one set."""

    def show(self, picture: SetPicture, life_unit: str) -> None:
        """Draw a picture."""

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set."""

    def remove(self) -> None:
        """Leave the plot for good."""


class ChartPage(QWidget):
    """A page with one chart.

    A page adds what it draws of a set, where its reading stands, and which part it shows when left to itself.

    Signals
    -------
    percent_dragged(float)
        The percent of the reading while it is moved by mouse or key.
    percent_chosen(float)
        The percent at which it was let go.
    age_dragged(float), age_chosen(float)
        On a page whose line is upright, the age that goes with the percent.
    age_scale_changed(str)
        "log" or "linear", when the user changed the age axis.
    """

    percent_dragged = Signal(float)
    percent_chosen = Signal(float)
    age_dragged = Signal(float)
    age_chosen = Signal(float)
    age_scale_changed = Signal(str)

    _is_built = False  # Qt sends change events while a widget is still being made

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
        super().__init__(parent)
        self.name = name
        self.statement = ""
        self._pictures: tuple[SetPicture, ...] = ()
        self._current = 0
        self._life_unit = "h"
        self._drawings: list[SetDrawing] = []
        self._percent: float | None = None
        self._moved: tuple[float, float] | None = None  # percent and age of a reading not yet let go
        self._is_moved_by_hand = False
        self._drags: Along = drags
        self._age_axis = AgeAxis(age_scale)
        self._upright = upright
        self.view = ChartView(self._age_axis, upright)
        plot = self.view.plotItem
        self._grid = GridLines(plot.vb, self._age_axis, upright, fine=drags == "value")
        self._legend = Legend(plot.vb, legend_corner)
        self.reading_line = ReadingLine(plot, self._age_axis, upright, drags=drags)
        self._note = QLabel()
        self._lay_out()
        self._make_actions()
        self._connect()
        self._is_built = True
        self._theme = theme_of(self.palette())
        self.retheme(self._theme)
        self.show_pictures((), current=0, life_unit=self._life_unit)

    # --- what a page adds

    def _new_drawing(self) -> SetDrawing:
        """Return a drawing for one more set."""
        raise NotImplementedError

    def _place_mark(self, place: Place) -> ReadingMark | None:
        """Return where the reading stands on this chart."""
        raise NotImplementedError

    def _whole_range(self, mark: ReadingMark | None) -> Range:
        """Return the part the chart shows when left to itself."""
        raise NotImplementedError

    def _percent_at(self, position: float) -> float:
        """Return the percent failed that a position of the dragged line stands for."""
        raise NotImplementedError

    def _upright_title(self) -> str:
        """Return the title of the upright axis, with its unit."""
        raise NotImplementedError

    def _nothing_to_show(self) -> str:
        """Return the one line that an empty page says; empty where there is something to draw."""
        return NO_UNITS if all(picture.is_empty for picture in self._pictures) else ""

    def _limits(self, whole: Range) -> Range:
        """Return what the view never leaves: beyond, numbers overflow and there is nothing to see."""
        return limits_around(whole, self._scale)

    def _prepare(self) -> None:
        """Make scales ready for the pictures about to be drawn."""

    # --- the face of a page

    @property
    def age_scale(self) -> AgeScaleKind:
        """The kind of the age axis."""
        return self._age_axis.age_scale.kind

    @property
    def current(self) -> SetPicture | None:
        """The picture whose reading is shown."""
        return self._pictures[self._current] if self._pictures else None

    def show_pictures(self, pictures: Sequence[SetPicture], *, current: int, life_unit: str) -> None:
        """Draw these sets over each other, with the reading of the one at `current`."""
        before = self._pictures[self._current] if self._pictures else None
        was = self._pictures
        if life_unit != self._life_unit:
            self._forget_drawings()
        self._pictures, self._life_unit = tuple(pictures), life_unit
        self._current = min(max(current, 0), max(len(pictures) - 1, 0))
        if before is None or self.current is None or before.name != self.current.name:
            self._is_moved_by_hand = False
        self._draw()
        is_same = len(was) == len(pictures) and all(map(_same_units, was, pictures))
        self._settle_view(is_new=not is_same)

    def retheme(self, theme: Theme) -> None:
        """Take the colours of a theme."""
        self._theme = theme
        self.view.setBackground(theme.background)
        font = self.font()
        for axis in (self._age_axis, self._upright):
            axis.set_font(font)
            axis.retheme(theme)
        self._grid.retheme(theme)
        self._legend.dress(theme, font, self._mark_size)
        self._note.setStyleSheet(f"QLabel {{ color: {theme.muted}; background: {theme.background}; }}")
        self._dress_drawings()

    def set_age_scale(self, kind: AgeScaleKind) -> None:
        """Show ages on a log or a linear axis."""
        if kind == self.age_scale:
            return
        self._take_age_scale(kind)
        self._draw()
        self.reset_view()
        self.age_scale_changed.emit(kind)

    def reset_view(self) -> None:
        """Show the whole picture again."""
        self._is_moved_by_hand = False
        self._settle_view(is_new=True)

    def copy_picture(self) -> None:
        """Put the chart on the clipboard as an image, with the statement it rests on below it."""
        QGuiApplication.clipboard().setImage(with_foot(self.view.picture(), self.statement, self._theme, self.font()))

    def menu(self) -> QMenu:
        """Return a new menu with the actions of this page."""
        menu = QMenu(self)
        menu.addAction(self.reset_action)
        menu.addSeparator()
        menu.addAction(self._log_action)
        menu.addAction(self._linear_action)
        menu.addSeparator()
        menu.addAction(self.copy_action)
        return menu

    def changeEvent(self, event: QEvent) -> None:
        """Follow the palette and the font of the program."""
        super().changeEvent(event)
        kinds = (QEvent.Type.PaletteChange, QEvent.Type.StyleChange, QEvent.Type.FontChange)
        if self._is_built and event.type() in kinds:
            self.retheme(theme_of(self.palette()))

    # --- making

    def _lay_out(self) -> None:
        self._note.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self._note.setWordWrap(True)
        self._layout = QStackedLayout(self)
        self._layout.addWidget(self.view)
        self._layout.addWidget(self._note)
        self.setAccessibleName(f"{self.name} page")
        self.view.setAccessibleName(f"{self.name} chart")
        self.setFocusProxy(self.view)

    def _make_actions(self) -> None:
        self.reset_action = QAction("&Reset view", self)
        self.reset_action.triggered.connect(self.reset_view)
        group = QActionGroup(self)
        self._log_action = QAction("&Log age axis", group, checkable=True, checked=self.age_scale == "log")
        self._linear_action = QAction("L&inear age axis", group, checkable=True, checked=self.age_scale != "log")
        self._log_action.triggered.connect(self._choose_log)
        self._linear_action.triggered.connect(self._choose_linear)
        self.copy_action = QAction("&Copy picture", self)
        self.copy_action.triggered.connect(self.copy_picture)

    def _connect(self) -> None:
        self.view.moved_by_hand.connect(self._note_moved_by_hand)
        self.view.reset_wanted.connect(self.reset_view)
        self.view.reading_stepped.connect(self._step_reading)
        self.view.reading_step_done.connect(self._choose_percent)
        self.view.menu_wanted.connect(self._show_menu)
        self.reading_line.dragged.connect(self._drag_reading)
        self.reading_line.released.connect(self._choose_percent)

    def _choose_log(self) -> None:
        self.set_age_scale("log")

    def _choose_linear(self) -> None:
        self.set_age_scale("linear")

    def _show_menu(self, place: QPoint) -> None:
        menu = self.menu()
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.popup(place)

    def _note_moved_by_hand(self) -> None:
        self._is_moved_by_hand = True

    # --- drawing

    @property
    def _scale(self) -> AgeScale:
        return self._age_axis.age_scale

    @property
    def _mark_size(self) -> float:
        return round(_MARK_SHARE * QFontMetricsF(self.font()).height())

    @property
    def _small_font(self) -> QFont:
        font = QFont(self.font())
        font.setPointSizeF(_SMALL * font.pointSizeF() if font.pointSizeF() > 0 else 8.0)
        return font

    def _draw(self) -> None:
        nothing = self._nothing_to_show()
        self._note.setText(nothing)
        self._layout.setCurrentWidget(self._note if nothing else self.view)
        self.copy_action.setEnabled(not nothing)
        self._prepare()
        while len(self._drawings) > len(self._pictures):
            self._drawings.pop().remove()
        while len(self._drawings) < len(self._pictures):
            self._drawings.append(self._new_drawing())
        for drawing, picture in zip(self._drawings, self._pictures, strict=True):
            drawing.show(picture, self._life_unit)
        self._age_axis.setLabel(f"Age ({self._life_unit})" if self._life_unit else "Age")
        self._upright.setLabel(self._upright_title())
        self._legend.show_entries(
            [LegendEntry(picture.name, self._theme.style(picture.colour)) for picture in self._pictures]
        )
        self._dress_drawings()
        self._show_reading()

    def _dress_drawings(self) -> None:
        for drawing, picture in zip(self._drawings, self._pictures, strict=True):
            style = self._theme.style(picture.colour)
            drawing.dress(style, self._theme, mark_size=self._mark_size, font=self._small_font)
        current = self.current
        if current is not None:
            self.reading_line.dress(self._theme, self._theme.style(current.colour).colour, self.font())

    def _take_age_scale(self, kind: AgeScaleKind) -> None:
        self._age_axis.set_kind(kind)
        self._log_action.setChecked(kind == "log")
        self._linear_action.setChecked(kind == "linear")
        self._forget_drawings()

    def _forget_drawings(self) -> None:
        """Have everything drawn anew: the scales have changed."""
        while self._drawings:
            self._drawings.pop().remove()

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

    def _settle_view(self, *, is_new: bool) -> None:
        """Show the whole picture, unless the user has chosen a part or nothing would be gained by moving."""
        if self._is_moved_by_hand or self.reading_line.is_dragging or self._moved is not None:
            return
        mark = self.reading_line.mark
        (left, right), (low, high) = self.view.plotItem.vb.viewRange()
        if is_new or not Range(left, right, low, high).holds(mark):
            whole = self._whole_range(mark)
            self.view.look_at(whole, self._limits(whole))

    # --- moving the reading

    def _drag_reading(self, position: float) -> None:
        self._move_reading(self._percent_at(position))

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


def _same_units(old: SetPicture, new: SetPicture) -> bool:
    """Tell whether two pictures show the same units on the same paper, so that the view may stay."""
    return (
        old.family == new.family
        and (old.failure is None) == (new.failure is None)
        and np.array_equal(old.point_age, new.point_age)
        and np.array_equal(old.point_fraction, new.point_fraction)
        and np.array_equal(old.running_age, new.running_age)
    )
