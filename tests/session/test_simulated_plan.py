"""A plan simulated for a set says how often each kind of bound held, or why nothing can be simulated."""

from __future__ import annotations

from dataclasses import replace

import pytest

from reliability_app.engine.coverage import coverage_of_life
from reliability_app.session.analysis import Question, analyse
from reliability_app.session.document import Basis, LifeAsk, ReliabilityAsk, Session, UnitSet
from reliability_app.session.plan_simulation import simulate_plan, stale_sentence
from reliability_app.session.unit_table import UnitTable
from tests.session.test_analysis import NIST_ROWS
from tests.session.test_further_readings import RUNNING, analysed

SMALL = {"confidence": 0.95, "side": "lower", "tests": 12, "inner_tests": 100, "seed": 7, "proceed": None}


@pytest.fixture(autouse=True)
def few_tests(monkeypatch: pytest.MonkeyPatch) -> None:
    """12 tests with small calibrations in the place of 400: the road is the same, and shorter."""
    monkeypatch.setattr(coverage_of_life, "__kwdefaults__", SMALL)


def test_the_sentence_states_what_the_engine_found() -> None:
    analysis = analysed(NIST_ROWS, ReliabilityAsk(300.0))
    plan = simulate_plan(analysis)
    wald, likelihood, calibrated = coverage_of_life(analysis.fit, 0.10)
    assert plan.coverages == (wald, likelihood, calibrated)
    assert plan.sentence == (
        f"Of 12 simulated tests like this one {100 * calibrated.held:.1f} % (± {100 * calibrated.standard_error:.1f}) "
        "of the calibrated lower bounds of the B10 life held, where 95 % is promised; "
        f"likelihood ratio {100 * likelihood.held:.1f} %; Wald {100 * wald.held:.1f} %."
    )
    assert stale_sentence(plan) == (f"Out of date, because the units or the basis have changed since: {plan.sentence}")


def test_a_held_shape_is_held_in_the_simulated_tests_too() -> None:
    free, held = (simulate_plan(analysed(NIST_ROWS, **basis)) for basis in ({}, {"shape": 2.0}))
    assert held.coverages
    assert held.coverages != free.coverages


def test_both_sides_of_a_two_sided_basis_are_judged_with_half_of_what_is_left() -> None:
    plan = simulate_plan(analysed(NIST_ROWS, side="two", confidence=0.9))
    assert [(one.side, one.confidence) for one in plan.coverages] == [("lower", 0.95)] * 3 + [("upper", 0.95)] * 3
    assert "calibrated lower bounds" in plan.sentence
    assert "calibrated upper bounds" in plan.sentence


def test_every_simulated_test_is_a_step_that_can_end_the_work() -> None:
    steps = []

    def proceed() -> None:
        steps.append(1)
        if len(steps) == 5:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        simulate_plan(analysed(NIST_ROWS), proceed=proceed)
    assert len(steps) == 5


def test_it_is_about_the_units_and_the_basis_but_not_the_kind_of_bound() -> None:
    plan = simulate_plan(analysed(NIST_ROWS))
    question = plan.question
    assert plan.is_about(replace(question, asks=(LifeAsk(1.0),), basis=replace(question.basis, bound="wald")))
    for change in ({"confidence": 0.9}, {"side": "upper"}, {"family": "lognormal"}, {"shape": 2.0}):
        assert not plan.is_about(replace(question, basis=replace(question.basis, **change)))
    longer = UnitTable.from_rows([*NIST_ROWS, {"life": "600", "state": "running"}])
    other = Question.about(Session(sets=[UnitSet("A", longer, question.basis)]), 0)
    assert not plan.is_about(other)


@pytest.mark.parametrize(
    ("rows", "basis", "said"),
    [
        (RUNNING, {}, "no fit to these units"),
        (NIST_ROWS, {"family": "gamma"}, "Gamma has a further parameter"),
        (NIST_ROWS, {"threshold": True}, "Weibull with threshold has a further parameter"),
        (NIST_ROWS, {"fit": "median-rank regression of age"}, "fits by maximum likelihood only"),
    ],
)
def test_what_cannot_be_simulated_is_said(rows: list[dict[str, str]], basis: dict[str, object], said: str) -> None:
    plan = simulate_plan(analysed(rows, **basis))
    assert plan.coverages == ()
    assert plan.sentence.startswith("The plan cannot be simulated. ")
    assert said in plan.sentence


def test_without_a_life_among_the_readings_the_usual_percent_is_judged() -> None:
    session = Session(
        sets=[UnitSet("A", UnitTable.from_rows(NIST_ROWS), Basis(family="weibull", bound="likelihood"))],
        asks=(ReliabilityAsk(300.0),),
    )
    assert simulate_plan(analyse(Question.about(session, 0))).percent == 10.0
