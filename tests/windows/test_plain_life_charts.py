"""Families of life itself on the charts: straight over a linear age axis, and quiet where an age is negative."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import FAMILY_NAMES
from reliability_app.engine.families import family
from reliability_app.reports.reading_places import age_at
from reliability_app.session.document import LifeAsk
from reliability_app.windows.charts.curve_page import HazardPage, SurvivalPage
from reliability_app.windows.charts.paper_page import PaperPage
from reliability_app.windows.charts.reading_marks import preview
from tests.windows.chart_pictures import PUMPS, Units, picture

# Invented: so spread out that a normal fit puts its B10 life below age 0.
SPREAD_OUT: Units = [
    (40, "failed", 1),
    (60, "failed", 1),
    (150, "failed", 1),
    (700, "failed", 1),
    (900, "running", 2),
]
PLAIN = [name for name in FAMILY_NAMES if not family(name).of_log_life]


@pytest.fixture
def shown(qtbot):
    def show(page, *pictures):
        qtbot.addWidget(page)
        page.resize(640, 480)
        page.show()
        page.show_pictures(pictures, current=0, life_unit="h")
        page.grab()
        return page

    return show


@pytest.mark.parametrize("name", PLAIN)
def test_the_fit_is_straight_on_the_linear_axis_the_paper_takes_by_itself(shown, name):
    page = shown(PaperPage(), picture(PUMPS, family=name))
    assert page.age_scale == "linear"
    assert page._linear_action.isChecked()
    ages, heights = page._drawings[0].fit.line.getData()
    inside = np.abs(heights) < 4  # beyond, a fraction near 1 has lost the digits of z
    slopes = np.diff(heights[inside]) / np.diff(ages[inside])
    assert slopes == pytest.approx(slopes[0], rel=1e-6)


def test_each_kind_of_family_keeps_the_axis_chosen_for_it_and_only_the_user_is_heard(shown):
    page, told = shown(PaperPage(), picture(PUMPS, family="weibull")), []
    page.age_scale_changed.connect(told.append)
    page.show_pictures([picture(PUMPS, family="normal")], current=0, life_unit="h")
    assert page.age_scale == "linear"
    page.show_pictures([picture(PUMPS, family="frechet")], current=0, life_unit="h")
    assert page.age_scale == "log"
    assert told == []
    page._linear_action.trigger()
    assert told == ["linear"]
    page.show_pictures([picture(PUMPS, family="logistic")], current=0, life_unit="h")
    page.show_pictures([picture(PUMPS, family="lognormal")], current=0, life_unit="h")
    assert page.age_scale == "linear"


@pytest.mark.parametrize("kind", [PaperPage, HazardPage, SurvivalPage])
@pytest.mark.parametrize("axis", ["log", "linear"])
@pytest.mark.parametrize("name", PLAIN)
def test_a_negative_reading_and_bound_break_nothing(shown, name, axis, kind):
    one = picture(SPREAD_OUT, family=name, side="two", ask=LifeAsk(2.0))
    assert one.reading.lower < one.reading.estimate < 0
    page = shown(kind(), one)
    page.set_age_scale(axis)
    page.grab()
    assert np.all(np.isfinite(page.view.plotItem.vb.viewRange()))
    page._step_reading(1, False)
    page._choose_percent()
    page.show_pictures([picture(SPREAD_OUT, family=name, ask=LifeAsk(50.0))], current=0, life_unit="h")
    page.grab()
    assert np.all(np.isfinite(page.view.plotItem.vb.viewRange()))


def test_on_a_log_axis_a_negative_age_stands_to_the_left_and_the_level_line_stays(shown):
    one = picture(SPREAD_OUT, family="normal", side="two", ask=LifeAsk(2.0))
    page = shown(PaperPage(), one)
    page.set_age_scale("log")
    mark = page.reading_line.mark
    assert (mark.age, mark.lower) == (-np.inf, -np.inf)
    assert page.reading_line.isVisible()
    low, high = page.view.plotItem.vb.viewRange()[1]
    assert low < mark.value < high


def test_between_percents_and_ages_the_drawn_fit_is_followed_below_age_zero():
    one = picture(SPREAD_OUT, family="normal", side="two", ask=LifeAsk(2.0))
    assert age_at(one, 0.02) == pytest.approx(one.reading.estimate, rel=1e-6)
    assert preview(one, 2.0, "h").age == pytest.approx(one.reading.estimate, rel=1e-6)
