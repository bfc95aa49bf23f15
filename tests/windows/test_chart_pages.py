"""The chart pages: axes that never stand empty, view and keyboard, themes, menu, empty pages, several sets."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QAccessible, QGuiApplication
from PySide6.QtWidgets import QMenu

from reliability_app.engine.paper import AgeScale
from reliability_app.windows.charts.chart import NO_UNITS
from reliability_app.windows.charts.copied_picture import copy_figure
from reliability_app.windows.charts.curve_page import NO_ESTIMATE, HazardPage, SurvivalPage
from reliability_app.windows.charts.paper_page import PaperPage
from reliability_app.windows.theme import dark, dark_palette, light
from tests.windows.chart_pictures import NONE_FAILED, PUMPS, SECOND_LOT, picture

PAGES = [PaperPage, HazardPage, SurvivalPage]


@pytest.fixture
def shown(qtbot):
    """Give a page of a kind, shown with these pictures, as a window."""

    def show(kind, *pictures, current=0):
        page = kind()
        qtbot.addWidget(page)
        page.resize(760, 520)
        page.show_pictures(pictures, current=current, life_unit="h")
        with qtbot.waitExposed(page):
            page.show()
        return page

    return show


def view_range(page):
    return np.array(page.view.plotItem.vb.viewRange())


def labels(axis):
    return [tick.label for tick in axis.shown_ticks() if tick.major]


class TestAxes:
    @pytest.mark.parametrize("kind", PAGES)
    def test_no_axis_stands_empty_however_far_one_zooms(self, shown, kind):
        page = shown(kind, picture(PUMPS, side="two"))
        for _ in range(24):
            page.view.zoom(1.6)
            page.grab()
            for axis in (page._age_axis, page._upright):
                assert len(labels(axis)) >= 2, view_range(page)
        page.reset_view()
        for kind_of_age in ("log", "linear"):
            page.set_age_scale(kind_of_age)
            for _ in range(24):
                page.view.zoom(1.0 / 1.6)
                page.grab()
                for axis in (page._age_axis, page._upright):
                    assert len(labels(axis)) >= 2, view_range(page)

    def test_age_labels_keep_apart(self, shown):
        page = shown(PaperPage, picture(PUMPS))
        for width in (320, 500, 760, 1400):
            page.resize(width, 400)
            page.grab()
            axis = page._age_axis
            each = axis.geometry().width() / (axis.range[1] - axis.range[0])
            ends = [
                (tick.position * each - 0.5 * axis.label_size(tick.label), axis.label_size(tick.label))
                for tick in axis.shown_ticks()
                if tick.major
            ]
            assert len(ends) >= 2
            assert all(left + size < after for (left, size), (after, _) in pairwise(ends))

    def test_titles_carry_units(self, shown):
        pictures = [picture(PUMPS)]
        titles = [(shown(kind, *pictures)._upright.labelText, kind) for kind in PAGES]
        assert [title for title, _ in titles] == [
            "Failed (%)",
            "Hazard rate (failures per unit per h)",
            "Reliability (%)",
        ]
        page = shown(PaperPage, *pictures)
        page.show_pictures(pictures, current=0, life_unit="cycles")
        assert page._age_axis.labelText == "Age (cycles)"

    def test_the_paper_is_that_of_the_family(self, shown):
        page = shown(PaperPage, picture(PUMPS, family="lognormal"))
        heights = page._drawings[0].points.item.getData()[1]
        weibull = picture(PUMPS, family="weibull")
        page.show_pictures([weibull], current=0, life_unit="h")
        on_weibull = page._drawings[0].points.item.getData()[1]
        assert page._probability.family_name == "weibull"
        assert on_weibull == pytest.approx(np.log(-np.log1p(-weibull.point_fraction)))
        assert not np.allclose(heights, on_weibull)

    def test_an_own_fit_is_straight_on_its_paper(self, shown):
        for family in ("lognormal", "weibull", "exponential"):
            page = shown(PaperPage, picture(PUMPS, family=family))
            x, y = page._drawings[0].fit.line.getData()
            inside = (y > -8.0) & (y < 1.5)
            slopes = np.diff(y[inside]) / np.diff(x[inside])
            assert slopes == pytest.approx(np.full_like(slopes, slopes[0]), rel=1e-6)
            if family == "exponential":
                assert slopes[0] == pytest.approx(1.0, rel=1e-6)


class TestView:
    def test_the_whole_picture_is_in_sight(self, shown):
        one = picture(PUMPS)
        page = shown(PaperPage, one)
        (left, right), (low, high) = view_range(page)
        ages = np.log(np.concatenate([one.point_age, one.running_age, [one.reading.estimate, one.reading.lower]]))
        heights = page._probability.to_scale(np.concatenate([one.point_fraction, [0.01, 0.9]]))
        assert left < ages.min() < ages.max() < right
        assert low < heights.min() < heights.max() < high

    @pytest.mark.parametrize(
        ("key", "expected"),
        [
            (Qt.Key.Key_Left, [[-0.1, -0.1], [0, 0]]),
            (Qt.Key.Key_Right, [[0.1, 0.1], [0, 0]]),
            (Qt.Key.Key_Up, [[0, 0], [0.1, 0.1]]),
            (Qt.Key.Key_Down, [[0, 0], [-0.1, -0.1]]),
            (Qt.Key.Key_Plus, [[0.1, -0.1], [0.1, -0.1]]),
            (Qt.Key.Key_Minus, [[-0.125, 0.125], [-0.125, 0.125]]),
        ],
    )
    def test_arrows_pan_and_plus_and_minus_zoom(self, qtbot, shown, key, expected):
        page = shown(PaperPage, picture(PUMPS))
        before = view_range(page)
        qtbot.keyClick(page.view, key)
        size = before[:, 1] - before[:, 0]
        assert (view_range(page) - before) / size[:, None] == pytest.approx(np.array(expected), abs=1e-9)

    @pytest.mark.parametrize("key", [Qt.Key.Key_0, Qt.Key.Key_Home])
    def test_zero_and_home_show_the_whole_again(self, qtbot, shown, key):
        page = shown(PaperPage, picture(PUMPS))
        whole = view_range(page)
        for _ in range(3):
            qtbot.keyClick(page.view, Qt.Key.Key_Plus)
        assert not np.allclose(view_range(page), whole)
        qtbot.keyClick(page.view, key)
        assert view_range(page) == pytest.approx(whole)

    def test_the_view_follows_new_units_until_the_user_has_moved_it(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS))
        before = view_range(page)
        page.show_pictures([picture(SECOND_LOT)], current=0, life_unit="h")
        assert view_range(page)[0, 0] < before[0, 0]
        qtbot.keyClick(page.view, Qt.Key.Key_Right)
        chosen = view_range(page)
        page.show_pictures([picture(PUMPS)], current=0, life_unit="h")
        assert view_range(page) == pytest.approx(chosen)

    def test_another_basis_leaves_the_view_alone(self, shown):
        page = shown(PaperPage, picture(PUMPS, side="lower"))
        before = view_range(page)
        page.show_pictures([picture(PUMPS, side="two")], current=0, life_unit="h")
        assert view_range(page) == pytest.approx(before)

    def test_running_units_stay_on_the_lower_edge(self, shown):
        page = shown(PaperPage, picture(PUMPS))
        item = page._drawings[0].running.item
        for shift in (0.0, 0.4, -1.3):
            page.view.pan(0.0, shift)
            page.grab()
            scene = item.mapToScene(QPointF(np.log(1500.0), 0.0))
            bottom = page.view.plotItem.vb.sceneBoundingRect().bottom()
            assert 3.0 < bottom - scene.y() < 14.0


class TestLooks:
    @pytest.mark.parametrize("kind", PAGES)
    def test_a_theme_recolours_everything(self, shown, kind):
        page = shown(kind, picture(PUMPS))
        for theme in (dark(), light()):
            page.retheme(theme)
            image = page.grab().toImage()
            assert image.pixelColor(3, image.height() // 4).name() == theme.background
            assert page._drawings[0].fit.line.opts["pen"].color().name() == theme.style(0).colour.lower()
            assert page._age_axis.textPen().color().name() == theme.foreground
            assert page._age_axis.labelStyle["color"] == theme.foreground

    def test_the_page_follows_the_palette(self, shown):
        page = shown(PaperPage, picture(PUMPS))
        page.setPalette(dark_palette())
        assert page.grab().toImage().pixelColor(3, 100).name() == dark().background

    def test_every_set_has_colour_mark_and_dash_of_its_own(self):
        for theme in (light(), dark()):
            looks = [(style.symbol, style.dash) for style in theme.series]
            assert len({style.colour for style in theme.series}) == len(theme.series)
            assert len(set(looks)) == len(looks)

    def test_two_sets_have_a_legend_and_one_has_none(self, shown):
        first, second = picture(PUMPS), picture(SECOND_LOT, name="Second lot", colour=1)
        page = shown(PaperPage, first, second)
        assert page._legend.names == ("Design A", "Second lot")
        page.show_pictures([first], current=0, life_unit="h")
        assert page._legend.names == ()
        assert len(page._drawings) == 1

    def test_the_reading_is_that_of_the_current_set(self, shown):
        first, second = picture(PUMPS), picture(SECOND_LOT, name="Second lot", colour=1)
        page = shown(PaperPage, first, second, current=1)
        assert np.exp(page.reading_line.mark.age) == pytest.approx(second.reading.estimate)

    def test_a_one_sided_band_has_one_edge(self, shown):
        page = shown(PaperPage, picture(PUMPS, side="lower"))
        fit = page._drawings[0].fit
        assert fit.high_edge.isVisible()
        assert not fit.low_edge.isVisible()
        assert not fit.band.path().isEmpty()

    def test_survival_has_the_steps_with_a_tick_at_running_units(self, shown):
        one = picture(PUMPS)
        page = shown(SurvivalPage, one)
        x, y = page._drawings[0].steps.line.getData()
        assert x[0] == 0.0
        assert y[0] == 100.0
        ages, heights = page._drawings[0].running.item.getData()
        assert ages.tolist() == one.running_age.tolist()
        # By hand: 3 of 13 failed before 1500 h, one by one: 12/13 * 11/12 * 10/11.
        assert heights[0] == pytest.approx(100.0 * 10.0 / 13.0)

    def test_a_linear_age_axis_is_on_request(self, shown):
        page = shown(PaperPage, picture(PUMPS))
        told = []
        page.age_scale_changed.connect(told.append)
        page._linear_action.trigger()
        assert told == ["linear"]
        assert page._drawings[0].points.item.getData()[0].tolist() == picture(PUMPS).point_age.tolist()
        page.set_age_scale("log")
        assert told == ["linear", "log"]
        assert page._log_action.isChecked()

    def test_steps_from_age_zero_are_drawn_on_a_log_axis(self, shown):
        page = shown(SurvivalPage, picture(PUMPS))
        page.set_age_scale("log")
        x, _ = page._drawings[0].steps.line.getData()
        assert np.all(np.isfinite(x))
        assert x[0] < view_range(page)[0, 0]


class TestPageWithoutMuch:
    @pytest.mark.parametrize("kind", PAGES)
    def test_an_empty_page_says_what_to_do(self, shown, kind):
        page = shown(kind)
        assert page._note.isVisible()
        assert page._note.text() == NO_UNITS
        page.show_pictures([picture(PUMPS)], current=0, life_unit="h")
        assert not page._note.isVisible()

    def test_units_without_an_estimate_are_shown(self, shown):
        one = picture(NONE_FAILED)
        page = shown(PaperPage, one)
        assert page._drawings[0].running.item.getData()[0] == pytest.approx(AgeScale("log").to_scale([500, 700]))
        assert page._drawings[0].fit.line.getData()[0] is None or len(page._drawings[0].fit.line.getData()[0]) == 0
        assert shown(HazardPage, one)._note.text() == NO_ESTIMATE
        assert shown(SurvivalPage, one)._drawings[0].steps.line.getData()[1].tolist() == [100.0] * 2


class TestMenuAndAccess:
    def test_the_menu_has_our_entries_only(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS))
        viewport = page.view.viewport()
        qtbot.mouseClick(viewport, Qt.MouseButton.RightButton, pos=QPoint(500, 300))
        menu = page.findChild(QMenu)
        assert menu.isVisible()
        texts = [action.text().replace("&", "") for action in menu.actions() if not action.isSeparator()]
        assert texts == [
            "Read at a percent or an age …",
            "Reset view",
            "Range of the level axis …",
            "Range of the upright axis …",
            "Log age axis",
            "Linear age axis",
            "Candidates as thin lines",
            "Copy picture",
        ]
        menu.close()

    def test_the_picture_is_copied_finer_than_the_screen(self, shown):
        page = shown(PaperPage, picture(PUMPS))
        copy_figure(page.figure())
        image = QGuiApplication.clipboard().image()
        assert image.width() > 1.5 * page.view.viewport().width()
        pixels = [(x, y) for x in range(0, image.width(), 3) for y in range(0, image.height(), 3)]
        colours = {image.pixelColor(x, y).name() for x, y in pixels}
        assert {light().background, light().style(0).colour.lower()} <= colours

    @pytest.mark.parametrize("kind", PAGES)
    def test_a_screen_reader_hears_page_and_reading(self, shown, kind):
        page = shown(kind, picture(PUMPS))
        spoken = QAccessible.queryAccessibleInterface(page.view)
        assert spoken.text(QAccessible.Text.Name) == f"{page.name} chart"
        assert spoken.text(QAccessible.Text.Description).startswith("B10 life ")
        assert QAccessible.queryAccessibleInterface(page).text(QAccessible.Text.Name) == f"{page.name} page"

    def test_a_mark_says_which_units_it_is(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS))
        item = page._drawings[0].points.item
        x, y = item.getData()
        place = page.view.mapFromScene(item.mapToScene(QPointF(x[3], y[3])))
        qtbot.mouseMove(page.view.viewport(), place - QPoint(60, 60))
        qtbot.wait(20)
        qtbot.mouseMove(page.view.viewport(), place)
        qtbot.wait(20)
        said = page.view.plotItem.vb.toolTip()
        assert said.startswith("P-05: 2 failed at 1640 h, plotted at ")
        assert said.endswith("(row 5)")
