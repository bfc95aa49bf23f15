"""Units found failed are drawn on the paper and as steps, and their marks say between which ages they failed."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine.paper import AgeScale
from reliability_app.session.analysis import Question, analyse
from reliability_app.session.document import Basis, LifeAsk, Session, UnitSet
from reliability_app.session.picture import SetPicture
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.charts.curve_page import SurvivalPage
from reliability_app.windows.charts.paper_page import PaperPage
from reliability_app.windows.charts.reading_marks import failed_tip

# Invented: pumps looked at every 200 h, one that failed under watch.
ROWS = [
    {"unit": "P-1", "life": "<200"},
    {"unit": "P-2", "life": "200-400", "quantity": "2"},
    {"unit": "P-3", "life": "450", "state": "failed"},
    {"unit": "P-4", "life": "400-800"},
    {"unit": "P-5", "life": "600-800", "quantity": "2"},
    {"unit": "P-6", "life": "800+", "quantity": "2"},
]


@pytest.fixture
def looked_at() -> SetPicture:
    session = Session(
        sets=[UnitSet("Pumps", UnitTable.from_rows(ROWS), Basis(bound="likelihood"))], asks=(LifeAsk(10),)
    )
    return analyse(Question.about(session, 0)).picture


def shown(qtbot, kind, picture):
    page = kind()
    qtbot.addWidget(page)
    page.resize(900, 600)
    page.show_pictures([picture], current=0, life_unit="h")
    return page


def test_marks_say_between_which_ages_the_units_failed(looked_at):
    tips = [failed_tip(looked_at, "h", at).split(", plotted")[0] for at in range(4)]
    assert tips == [
        "P-1: failed by 200 h",
        "P-2: 2 failed between 200 and 400 h",
        "P-3, P-4: about 1 failed at 450 h",
        "P-4, P-5: about 3 failed between 600 and 800 h",
    ]


def test_the_paper_shows_every_mark(qtbot, looked_at):
    page = shown(qtbot, PaperPage, looked_at)
    x, _ = page._drawings[0].points.item.getData()
    assert x == pytest.approx(AgeScale("log").to_scale([100, 300, 450, 700]))


def test_survival_falls_inside_the_intervals_with_running_units_on_the_steps(qtbot, looked_at):
    page = shown(qtbot, SurvivalPage, looked_at)
    page.set_age_scale("linear")
    x, y = page._drawings[0].steps.line.getData()
    falls = np.flatnonzero(np.diff(y) < 0)
    assert x[falls].tolist() == [100, 300, 450, 700]
    ages, heights = page._drawings[0].running.item.getData()
    assert ages.tolist() == [800]
    assert heights == pytest.approx([100 * 2 / 9])
