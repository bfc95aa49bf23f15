"""The base of every chart: one plot that is kept, its theme, menu, keyboard, legend, typed ranges, and picked units."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial

import numpy as np
from PySide6.QtCore import QEvent, QPoint, QPointF, QRectF, Qt, Signal
from PySide6.QtGui import QAction, QFont, QFontMetricsF
from PySide6.QtWidgets import QLabel, QMenu, QStackedLayout, QVBoxLayout, QWidget

from reliability_app.reports.chart_ranges import Range
from reliability_app.reports.figure import Figure
from reliability_app.reports.page_figures import figure_of
from reliability_app.reports.shown import Shown
from reliability_app.session.candidate_lines import CandidateLine
from reliability_app.session.further_pictures import FurtherPicture
from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.chart_view import ChartView
from reliability_app.windows.charts.grid_lines import GridLines
from reliability_app.windows.charts.in_page_editor import InPageEditor
from reliability_app.windows.charts.legend import Corner, Legend, LegendEntry
from reliability_app.windows.charts.picked_units import PickedUnits, rows_clicked, rows_framed
from reliability_app.windows.charts.round_axis import RoundAxis
from reliability_app.windows.charts.set_drawings import SetDrawing, SetDrawings
from reliability_app.windows.charts.typed_range import read_range
from reliability_app.windows.theme import Theme, theme_of

NO_UNITS = "Paste or type the lives of some units into the table on the left."
_SMALL = 0.85
_MARK_SHARE = 0.62  # size of a unit's mark, in line heights


class Chart(QWidget):
    """A page with one chart.

    A page adds what it draws of a set and which part it shows when left to itself.

    Signals
    -------
    rows_picked(int, tuple, bool)
        Marks were clicked or framed: the place of the set, the rows of its table, and whether they join those that
        are selected already.
    """

    rows_picked = Signal(int, tuple, bool)

    _is_built = False  # Qt sends change events while a widget is still being made

    def __init__(
        self,
        name: str,
        level: RoundAxis,
        upright: RoundAxis,
        *,
        legend_corner: Corner,
        has_fine_grid: bool = False,
        parent: QWidget | None = None,
    ) -> None:
        super().__init__(parent)
        self.name = name
        self.statement = ""
        self._pictures: tuple[SetPicture, ...] = ()
        self._further: tuple[FurtherPicture, ...] = ()
        self._candidates: tuple[CandidateLine, ...] = ()
        self._current = 0
        self._life_unit = "h"
        self._is_moved_by_hand = False
        self._level, self._upright = level, upright
        self.view = ChartView(level, upright)
        box = self.view.plotItem.vb
        self._drawings = SetDrawings(box)
        self._grid = GridLines(box, level, upright, fine=has_fine_grid)
        self._legend = Legend(box, legend_corner)
        self._picked = PickedUnits(box)
        self._note, self.caption = QLabel(), QLabel()
        self.editor = InPageEditor(self)
        self._lay_out()
        self._make_actions()
        self._connect()
        self._add_parts()
        self._is_built = True
        self._theme = theme_of(self.palette())
        self.retheme(self._theme)
        self.show_pictures((), current=0, life_unit=self._life_unit)

    # --- what a page adds

    def _add_parts(self) -> None:
        """Add what a kind of page has beside the common parts."""

    def _new_drawing(self) -> SetDrawing:
        """Return a drawing for one more set."""
        raise NotImplementedError

    def _whole(self) -> Range:
        """Return the part the chart shows when left to itself."""
        raise NotImplementedError

    def _level_title(self) -> str:
        """Return the title of the level axis, with its unit."""
        raise NotImplementedError

    def _upright_title(self) -> str:
        """Return the title of the upright axis, with its unit."""
        raise NotImplementedError

    def _limits(self, whole: Range) -> Range:
        """Return what the view never leaves."""
        raise NotImplementedError

    def _caption_text(self) -> str:
        """Return what the lines of the page mean; empty where they need no word."""
        return ""

    def _legend_entries(self) -> list[LegendEntry]:
        return [LegendEntry(picture.name, self._theme.style(picture.colour)) for picture in self._pictures]

    def _nothing_to_show(self) -> str:
        """Return the one line that an empty page says; empty where there is something to draw."""
        return NO_UNITS if all(picture.is_empty for picture in self._pictures) else ""

    def _prepare(self) -> None:
        """Make scales ready for the pictures about to be drawn."""

    def _keeps_view(self) -> bool:
        """True while the view must not move by itself."""
        return self._is_moved_by_hand

    def _is_out_of_sight(self, seen: Range) -> bool:  # noqa: ARG002 - a page with a reading looks for it
        """True where something that must be seen is not."""
        return False

    # --- the face of a page

    @property
    def current(self) -> SetPicture | None:
        """The picture whose reading is shown."""
        return self._pictures[self._current] if self._pictures else None

    def show_pictures(
        self,
        pictures: Sequence[SetPicture],
        *,
        current: int,
        life_unit: str,
        further: Sequence[FurtherPicture] = (),
    ) -> None:
        """Draw these sets over each other, with the reading of the one at `current`."""
        before = self.current
        was = self._pictures
        if life_unit != self._life_unit:
            self._forget_drawings()
        self._pictures, self._life_unit, self._further = tuple(pictures), life_unit, tuple(further)
        self._current = min(max(current, 0), max(len(pictures) - 1, 0))
        if before is None or self.current is None or before.name != self.current.name:
            self._is_moved_by_hand = False
        self._draw()
        is_same = len(was) == len(pictures) and all(map(_same_units, was, pictures))
        self._settle_view(is_new=not is_same)

    def take_candidates(self, lines: tuple[CandidateLine, ...]) -> None:
        """Take other families for the next drawing; only a page with a place for them draws them."""
        self._candidates = lines

    def retheme(self, theme: Theme) -> None:
        """Take the colours of a theme."""
        self._theme = theme
        self.view.setBackground(theme.background)
        font = self.font()
        for axis in (self._level, self._upright):
            axis.set_font(font)
            axis.retheme(theme)
        self._grid.retheme(theme)
        self._legend.dress(theme, font, self._mark_size)
        self._picked.dress(theme, self._mark_size)
        for label in (self._note, self.caption):
            label.setStyleSheet(f"QLabel {{ color: {theme.muted}; background: {theme.background}; }}")
        self.caption.setFont(self._small_font)
        self._legend.show_entries(self._legend_entries())
        self._dress_drawings()

    def reset_view(self) -> None:
        """Show the whole picture again."""
        self._is_moved_by_hand = False
        self._settle_view(is_new=True)

    def show_range(self, seen: Range) -> None:
        """Show a part that the user chose."""
        self.view.look_at(seen, self._limits(self._whole()))
        self._is_moved_by_hand = True

    def highlight(self, place: int, rows: Sequence[int]) -> None:
        """Mark the units of some rows of the table of the set at `place`."""
        self._picked.choose(place, rows)
        self._show_picked()

    def figure(self) -> Figure | None:
        """Return what is seen as a picture for print, with the statement it rests on; None where nothing is seen."""
        if self._nothing_to_show():
            return None
        return figure_of(self.name, self._shown())

    def menu(self) -> QMenu:
        """Return a new menu with the actions of this page."""
        menu = QMenu(self)
        for group in self._menu_groups():
            menu.addActions(group)
            menu.addSeparator()
        menu.addAction(self.copy_action)
        return menu

    def edit_range(self, which: str) -> None:
        """Let the range of the "level" or the "upright" axis be typed."""
        axis = self._level if which == "level" else self._upright
        ends = axis.shown_ends()
        area = self.view.area_of(which)
        title = axis.labelText or "Axis"
        self.editor.ask(
            f"{title}: show from", [axis.text_of(end) for end in ends], partial(self._take_range, which), beside=area
        )

    def changeEvent(self, event: QEvent) -> None:
        """Follow the palette and the font of the program."""
        super().changeEvent(event)
        kinds = (QEvent.Type.PaletteChange, QEvent.Type.StyleChange, QEvent.Type.FontChange)
        if self._is_built and event.type() in kinds:
            self.retheme(theme_of(self.palette()))

    # --- making

    def _lay_out(self) -> None:
        self._note.setAlignment(Qt.AlignmentFlag.AlignCenter)
        for label in (self._note, self.caption):
            label.setWordWrap(True)
        self.caption.setContentsMargins(8, 0, 8, 4)
        self.caption.setAccessibleName(f"What the lines of the {self.name} page mean")
        sheet = QWidget()
        column = QVBoxLayout(sheet)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.view, 1)
        column.addWidget(self.caption)
        self._sheet = sheet
        self._layout = QStackedLayout(self)
        self._layout.addWidget(sheet)
        self._layout.addWidget(self._note)
        self.setAccessibleName(f"{self.name} page")
        self.view.setAccessibleName(f"{self.name} chart")
        self.setFocusProxy(self.view)

    def _make_actions(self) -> None:
        self.reset_action = QAction("&Reset view", self)
        self.reset_action.triggered.connect(self.reset_view)
        self.level_range_action = QAction("Range of the le&vel axis …", self)
        self.level_range_action.triggered.connect(lambda: self.edit_range("level"))
        self.upright_range_action = QAction("Range of the &upright axis …", self)
        self.upright_range_action.triggered.connect(lambda: self.edit_range("upright"))
        self.copy_action = QAction("&Copy picture", self)

    def _menu_groups(self) -> list[list[QAction]]:
        return [[self.reset_action, self.level_range_action, self.upright_range_action]]

    def _connect(self) -> None:
        self.view.moved_by_hand.connect(self._note_moved_by_hand)
        self.view.reset_wanted.connect(self.reset_view)
        self.view.menu_wanted.connect(self._show_menu)
        self.view.axis_double_clicked.connect(self.edit_range)
        self.view.framed.connect(self._pick_framed)
        self.view.clicked.connect(self._pick_clicked)

    def _show_menu(self, place: QPoint) -> None:
        menu = self.menu()
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.popup(place)

    def _note_moved_by_hand(self) -> None:
        self._is_moved_by_hand = True

    def _take_range(self, which: str, typed: list[str]) -> None:
        axis = self._level if which == "level" else self._upright
        limits = self._limits(self._whole())
        bounds = (limits.left, limits.right) if which == "level" else (limits.low, limits.high)
        ends = read_range(axis, typed, bounds)
        (left, right), (low, high) = self.view.plotItem.vb.viewRange()
        self.show_range(Range(*ends, low, high) if which == "level" else Range(left, right, *ends))

    # --- drawing

    @property
    def _mark_size(self) -> float:
        return round(_MARK_SHARE * QFontMetricsF(self.font()).height())

    @property
    def _small_font(self) -> QFont:
        font = QFont(self.font())
        font.setPointSizeF(_SMALL * font.pointSizeF() if font.pointSizeF() > 0 else 8.0)
        return font

    def _shown(self) -> Shown:
        across, along = self.view.plotItem.vb.viewRange()
        return Shown(
            self._pictures,
            self._current,
            self._life_unit,
            view=Range(*across, *along),
            statement=self.statement,
            further=self._further,
            candidates=self._candidates,
        )

    def _draw(self) -> None:
        nothing = self._nothing_to_show()
        self._note.setText(nothing)
        self._layout.setCurrentWidget(self._note if nothing else self._sheet)
        self.copy_action.setEnabled(not nothing)
        self._prepare()
        self._drawings.fit_to(len(self._pictures), self._new_drawing)
        self._drawings.bring_to_front(self._current)
        for place, (drawing, picture) in enumerate(zip(self._drawings, self._pictures, strict=True)):
            self._draw_set(place, drawing, picture)
        self._level.setLabel(self._level_title())
        self._upright.setLabel(self._upright_title())
        self._legend.show_entries(self._legend_entries())
        caption = self._caption_text()
        self.caption.setText(caption)
        self.caption.setVisible(bool(caption))
        self._dress_drawings()
        self._show_picked()

    def _draw_set(self, place: int, drawing: SetDrawing, picture: SetPicture) -> None:  # noqa: ARG002 - see pages
        drawing.show(picture, self._life_unit)

    def _dress_drawings(self) -> None:
        for drawing, picture in zip(self._drawings, self._pictures, strict=True):
            style = self._theme.style(picture.colour)
            drawing.dress(style, self._theme, mark_size=self._mark_size, font=self._small_font)

    def _forget_drawings(self) -> None:
        """Have everything drawn anew: the scales have changed."""
        self._drawings.forget()

    def _settle_view(self, *, is_new: bool) -> None:
        """Show the whole picture, unless the user has chosen a part or nothing would be gained by moving."""
        if self._keeps_view():
            return
        (left, right), (low, high) = self.view.plotItem.vb.viewRange()
        if is_new or self._is_out_of_sight(Range(left, right, low, high)):
            whole = self._whole()
            self.view.look_at(whole, self._limits(whole))

    # --- picked units

    def _show_picked(self) -> None:
        place = self._picked.place
        self._picked.show(self._drawings[place].marks() if place < len(self._drawings) else ())

    def _pick_clicked(self, spot: QPointF, joins: bool) -> None:
        """Select the rows of the mark at a point of the scene; a click beside all marks changes nothing."""
        place, rows = rows_clicked(self._drawings, spot)
        if rows:
            self.rows_picked.emit(place, rows, joins)

    def _pick_framed(self, frame: QRectF, joins: bool) -> None:
        """Select the rows of all marks in a frame of the view, of the current set first."""
        place, rows = rows_framed(self._drawings, frame, first=self._current)
        if rows:
            self.rows_picked.emit(place, rows, joins)


def _same_units(old: SetPicture, new: SetPicture) -> bool:
    """Tell whether two pictures show the same units on the same paper, so that the view may stay."""
    return (
        old.family == new.family
        and (old.failure is None) == (new.failure is None)
        and np.array_equal(old.point_age, new.point_age)
        and np.array_equal(old.point_fraction, new.point_fraction)
        and np.array_equal(old.running_age, new.running_age)
    )
