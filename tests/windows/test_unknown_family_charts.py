"""Charts of a set whose session names a family that this version does not know: marks, no fit, no exception."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.windows.charts.curve_page import HazardPage, SurvivalPage
from reliability_app.windows.charts.paper_page import PaperPage
from tests.windows.chart_pictures import PUMPS, analysis, picture


@pytest.mark.parametrize("kind", [PaperPage, HazardPage, SurvivalPage])
def test_a_family_that_nobody_knows_leaves_the_charts_without_a_fit(qtbot, kind):
    found = analysis(PUMPS, family="not_yet_written")
    assert "no family called 'not_yet_written'" in found.cautions[0].text
    page = kind()
    qtbot.addWidget(page)
    page.resize(640, 480)
    page.show_pictures([found.picture], current=0, life_unit="h")
    page.grab()
    page.set_age_scale("linear")
    page._step_reading(1, False)
    page.show_pictures([found.picture, picture(PUMPS, family="normal")], current=1, life_unit="h")
    page.grab()


def test_the_paper_of_a_known_family_comes_back_after_an_unknown_one(qtbot):
    page = PaperPage()
    qtbot.addWidget(page)
    for name, shown in (("not_yet_written", "lognormal"), ("weibull", "weibull"), ("not_yet_written", "weibull")):
        page.show_pictures([picture(PUMPS, family=name)], current=0, life_unit="h")
        assert page._probability_axis.scale_of_family.family_name == shown
        if name != "weibull":
            assert np.size(page._drawings[0].fit.line.getData()[0]) == 0
