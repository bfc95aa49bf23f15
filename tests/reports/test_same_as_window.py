"""A picture says the same as the page of the window: the same curves, marks, part, titles, reading and looks."""

from __future__ import annotations

from typing import TypeVar

import numpy as np
import pytest
from pyqtgraph.graphicsItems.ScatterPlotItem import Symbols
from PySide6.QtGui import QColor, QPainterPath
from pytestqt.qtbot import QtBot

from reliability_app.reports.figure import Figure, Line, Marks
from reliability_app.reports.mark_paths import mark_path
from reliability_app.reports.page_figures import PAGES
from reliability_app.reports.series_looks import (
    FINE_GRID,
    GRID,
    INK,
    MUTED,
    PAPER,
    PRINT_LOOKS,
)
from reliability_app.reports.shown import Shown
from reliability_app.windows.charts.chart import Chart
from reliability_app.windows.charts.chart_page import ChartPage
from reliability_app.windows.charts.curve_page import HazardPage, SurvivalPage
from reliability_app.windows.charts.further_pages import CumulativeHazardPage, DensityPage
from reliability_app.windows.charts.likelihood_page import LikelihoodPage
from reliability_app.windows.charts.paper_page import PaperPage
from reliability_app.windows.charts.residuals_page import ResidualsPage
from reliability_app.windows.charts.set_drawings import SetDrawing
from reliability_app.windows.theme import light

PageKind = TypeVar("PageKind", bound=Chart)

pytestmark = pytest.mark.qt_log_ignore("This plugin does not support", extend=True)


def shown_page(qtbot: QtBot, kind: type[PageKind], shown: Shown) -> PageKind:
    page = kind()
    qtbot.addWidget(page)
    page.resize(720, 480)
    page.show()
    page.statement = shown.statement
    page.show_pictures(shown.pictures, current=shown.current, life_unit=shown.life_unit, further=shown.further)
    return page


def figure_of(page: Chart) -> Figure:
    figure = page.figure()
    assert figure is not None
    return figure


def fits(figure: Figure) -> list[Line]:
    return [part for part in figure.parts if isinstance(part, Line) and part.width == 2.0]


def from_the_back(page: Chart) -> list[SetDrawing]:
    """The drawings of a page as they lie over each other: that of the set in front last."""
    return sorted(page._drawings, key=lambda drawing: drawing is page._drawings[page._current])


@pytest.mark.parametrize("kind", [PaperPage, HazardPage, SurvivalPage, DensityPage, CumulativeHazardPage])
def test_a_picture_says_what_the_page_says(qtbot: QtBot, two_sets: Shown, kind: type[ChartPage]) -> None:
    page = shown_page(qtbot, kind, two_sets)
    figure, whole = figure_of(page), PAGES[page.name.lower()](two_sets)
    # A page left to itself shows the part that a picture without a window shows.
    for axis in ("level", "upright"):
        of_page, of_figure = getattr(figure, axis), getattr(whole, axis)
        assert (of_page.low, of_page.high) == pytest.approx((of_figure.low, of_figure.high), rel=1e-9)
    assert figure.reading is not None
    assert figure.reading.mark == page.reading_line.mark
    for line, drawing in zip(fits(figure), from_the_back(page), strict=True):
        x, y = drawing.fit.line.getData()
        np.testing.assert_array_equal(line.x, x)
        np.testing.assert_array_equal(line.y, y)
        assert QColor(line.colour) == drawing.fit.line.opts["pen"].color()
    assert figure.level.title == page._age_axis.labelText
    assert figure.upright.title == page._upright.labelText
    caption = page.caption.text()
    assert figure.foot == ((caption,) if caption else ()) + tuple(two_sets.statement.splitlines())


@pytest.mark.parametrize("kind", [LikelihoodPage, ResidualsPage])
def test_a_picture_without_ages_says_what_its_page_says(qtbot: QtBot, two_sets: Shown, kind: type[Chart]) -> None:
    page = shown_page(qtbot, kind, two_sets)
    figure, whole = figure_of(page), PAGES[page.name.lower()](two_sets)
    for axis, of_window in (("level", page._level), ("upright", page._upright)):
        of_page, of_figure = getattr(figure, axis), getattr(whole, axis)
        assert (of_page.low, of_page.high) == pytest.approx((of_figure.low, of_figure.high), rel=1e-9)
        assert of_page.title == of_window.labelText
    assert figure.foot == (page.caption.text(), *two_sets.statement.splitlines())
    marks = [part for part in figure.parts if isinstance(part, Marks) and part.filled]
    shown = [drawing.peak if kind is LikelihoodPage else drawing.known for drawing in from_the_back(page)]
    for part, drawn in zip(marks, shown, strict=True):
        np.testing.assert_array_equal(part.x, drawn.item.getData()[0])
        np.testing.assert_array_equal(part.y, drawn.item.getData()[1])


def test_marks_stand_where_they_stand_on_the_paper(qtbot: QtBot, two_sets: Shown) -> None:
    page = shown_page(qtbot, PaperPage, two_sets)
    marks = [part for part in figure_of(page).parts if isinstance(part, Marks)]
    failed = [part for part in marks if part.filled]
    assert [part.edge_row for part in marks if not part.filled] == [1, 0]
    for part, drawing in zip(failed, from_the_back(page), strict=True):
        x, y = drawing.points.item.getData()
        np.testing.assert_array_equal(part.x, x)
        np.testing.assert_array_equal(part.y, y)


def test_what_was_zoomed_to_is_what_is_exported(qtbot: QtBot, one_set: Shown) -> None:
    page = shown_page(qtbot, PaperPage, one_set)
    page.set_age_scale("linear")
    page.view.plotItem.vb.setRange(xRange=(900.0, 1300.0), yRange=(-2.0, -0.5), padding=0.0)
    figure = figure_of(page)
    assert (figure.level.low, figure.level.high, figure.upright.low, figure.upright.high) == (900, 1300, -2.0, -0.5)
    assert "1000" in [tick.label for tick in figure.level.ticks(900.0, 1300.0, 8)]


def test_an_empty_page_has_no_picture(qtbot: QtBot) -> None:
    assert shown_page(qtbot, PaperPage, Shown(())).figure() is None


def test_print_has_the_tones_of_the_light_theme() -> None:
    theme = light()
    assert (theme.background, theme.foreground, theme.muted) == (PAPER, INK, MUTED)
    assert (theme.grid, theme.fine_grid) == (GRID, FINE_GRID)


def test_the_marks_of_print_have_the_shapes_of_the_screen() -> None:
    for look, style in zip(PRINT_LOOKS, light().series, strict=True):
        assert look.colour == style.colour
        on_screen = QPainterPath(Symbols[style.symbol])
        apart = on_screen.subtracted(mark_path(look.symbol, 1.0)), mark_path(look.symbol, 1.0).subtracted(on_screen)
        assert all(_area(path) < 0.01 for path in apart), look.symbol


def _area(path: QPainterPath) -> float:
    corners = [np.array([(point.x(), point.y()) for point in polygon]) for polygon in path.toSubpathPolygons()]
    return sum(0.5 * abs(np.sum(c[:, 0] * np.roll(c[:, 1], -1) - c[:, 1] * np.roll(c[:, 0], -1))) for c in corners)
