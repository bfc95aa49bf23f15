"""What further pages draw is computed once, when asked for, and says what it stands for; so do the candidates."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy.stats import norm

from reliability_app.session.analysis import Question, analyse
from reliability_app.session.candidate_lines import MOST_LINES, candidate_lines
from reliability_app.session.candidate_table import compare_quickly, with_p_values
from reliability_app.session.document import Basis, LifeAsk, Session, UnitSet
from reliability_app.session.further_pictures import FurtherPicture, RegionPicture, ResidualPicture, further_of
from reliability_app.session.unit_table import UnitTable
from tests.windows.chart_pictures import NONE_FAILED, PUMPS, analysis


def test_residuals_are_in_order_with_the_rows_they_belong_to() -> None:
    done = analysis(PUMPS)
    found = FurtherPicture(done).residuals
    assert isinstance(found, ResidualPicture)
    assert found.units == found.value.size == sum(quantity for _, _, quantity in PUMPS)
    assert (np.diff(found.value) >= 0).all()
    np.testing.assert_allclose(found.expected, norm.ppf((np.arange(13) + 0.5) / 13))
    # Of a unit that failed at a known age the residual is its score; running units lie beyond theirs.
    mu, sigma = done.fit.parameters["mu"], done.fit.parameters["sigma"]
    score = {row: (np.log(life) - mu) / sigma for row, (life, _, _) in enumerate(PUMPS)}
    for value, is_drawn, row in zip(found.value, found.is_drawn, found.rows.tolist(), strict=True):
        assert is_drawn == (PUMPS[row][1] == "running")
        assert value > score[row] if is_drawn else value == pytest.approx(score[row])
    assert np.bincount(found.rows).tolist() == [quantity for _, _, quantity in PUMPS]
    assert ((found.low < found.expected) & (found.expected < found.high)).all()


def test_the_region_holds_two_parameters_and_the_cut_one() -> None:
    found = FurtherPicture(analysis(PUMPS, family="weibull")).region
    assert isinstance(found, RegionPicture)
    for joint, cut, peak in zip(
        (found.joint.first, found.joint.second), (found.cut.first, found.cut.second), found.maximum, strict=True
    ):
        assert joint.min() < cut.min() < peak < cut.max() < joint.max()


def test_without_an_estimate_there_is_a_sentence() -> None:
    further = FurtherPicture(analysis(NONE_FAILED))
    assert "no estimate" in str(further.region)
    assert "no estimate" in str(further.residuals)
    assert further.density is None
    assert further.cumulative_hazard is None
    assert further.hazard_steps is not None


def test_a_moved_reading_keeps_what_was_computed_and_new_units_do_not() -> None:
    done = analysis(PUMPS)
    first = further_of(done)
    assert further_of(done.with_main_ask(LifeAsk(20.0)), first) is first
    assert further_of(analysis(PUMPS), first) is not first


def test_running_units_know_their_rows_and_names() -> None:
    picture = analysis(PUMPS).picture
    assert picture.running_rows == ((3,), (7,))
    assert picture.running_names == (("P-04",), ("P-08",))


def test_candidates_are_fitted_at_once_and_tested_one_by_one() -> None:
    done = analysis(PUMPS)
    table = compare_quickly(done)
    assert table is not None
    criteria = [one.aicc for one in table.candidates if one.aicc is not None]
    assert criteria == sorted(criteria)
    assert table.cells(0)[-1] == "best"
    assert all(one.goodness is None for one in table.candidates)
    assert next(one.life for one in table.candidates if one.name == "lognormal") == pytest.approx(done.main.estimate)
    steps = with_p_values(table)
    first, second = next(steps), next(steps)
    assert (first.tested, second.tested) == (1, 2)
    assert first.candidates[0].anderson_darling.p_value is not None
    assert first.candidates[1].goodness is None
    assert second.candidates[1].goodness is not None


def test_a_table_of_candidates_is_about_its_units_and_follows_the_percent() -> None:
    done = analysis(PUMPS)
    table = compare_quickly(done)
    assert table.is_about(done)
    other = analysis(PUMPS, ask=LifeAsk(50.0))
    assert not table.is_about(other)
    read = table.read_anew(other)
    assert read.is_about(other)
    median = next(one.life for one in read.candidates if one.name == "lognormal")
    assert median == pytest.approx(np.exp(done.fit.parameters["mu"]))
    fewer = analysis(PUMPS[:-1])
    assert not table.is_about(fewer)
    assert table.read_anew(fewer) is table


def test_a_family_that_cannot_be_fitted_says_why() -> None:
    rows = [{"life": str(life), "state": "failed"} for life in (500, 500, 500)]
    session = Session(sets=[UnitSet("Same", UnitTable.from_rows(rows), Basis(family="exponential"))])
    table = compare_quickly(analyse(Question.about(session, 0)))
    standing = {one.name: table.standing(one) for one in table.candidates}
    assert standing["exponential"] in ("best", "too few units for AICc")
    assert len(standing["lognormal"]) > 20


def test_candidate_lines_leave_out_the_family_of_the_basis() -> None:
    done = analysis(PUMPS)
    table = compare_quickly(done)
    ages = np.array([500.0, 1500.0])
    lines = candidate_lines(table.candidates, "weibull", ages)
    assert len(lines) == MOST_LINES
    assert "Weibull" not in [line.title for line in lines]
    best = replace(table, candidates=table.candidates[1:]).candidates[0]
    assert lines[0].title == best.title
    np.testing.assert_allclose(lines[0].fraction, best.fit.failure_probability(ages))
