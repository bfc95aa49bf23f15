"""The work of the Visits page: it heeds its own orders and not those of the work whose fits it is given."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, datetime

import pytest
from pytestqt.qtbot import QtBot

from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import Basis, LifeAsk, Session, UnitSet
from reliability_app.session.held_requirement import HeldRequirement
from reliability_app.session.requirement import Requirement, Verdict
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.background import Outdated
from reliability_app.windows.visit_work import JudgedSets, ReadyToRecord, RequirementJudge, VisitPreparer

HELD = HeldRequirement(Requirement(LifeAsk(50.0), 100.0, 0.9), datetime(2026, 1, 5, tzinfo=UTC))


@pytest.fixture(scope="module")
def analysis() -> SetAnalysis:
    """An answer with calibrated bounds whose fit was made in work that nobody waits for any more."""

    def outdated() -> None:
        raise Outdated

    table = UnitTable.from_rows({"life": str(life), "state": "failed"} for life in (310, 420, 530, 610, 790))
    session = Session(sets=[UnitSet("A", table, Basis(bound="calibrated"))], asks=(LifeAsk(50.0),))
    found = analyse(Question.about(session, 0), quick=True)
    assert found.fit is not None
    return replace(found, fit=replace(found.fit, proceed=outdated))


def test_a_verdict_comes_from_a_fit_of_outdated_work(qtbot: QtBot, analysis: SetAnalysis) -> None:
    judge = RequirementJudge()
    with qtbot.waitSignal(judge.answered, timeout=30_000) as told:
        judge.judge(HELD, [analysis], 1)
    outcome = told.args[0]
    assert isinstance(outcome, JudgedSets)
    ((name, judgement),) = outcome.verdicts
    assert name == "A"
    assert judgement is not None
    assert judgement.verdict is Verdict.MET
    assert judgement.bound_used == "calibrated"
    judge.close()


def test_a_visit_is_prepared_from_a_fit_of_outdated_work(qtbot: QtBot, analysis: SetAnalysis) -> None:
    preparer = VisitPreparer()
    with qtbot.waitSignal(preparer.answered, timeout=30_000) as told:
        preparer.prepare([analysis], HELD, 1, label="week 2", then_save=False)
    outcome = told.args[0]
    assert isinstance(outcome, ReadyToRecord)
    assert outcome.judgements[0] is not None
    assert outcome.judgements[0].verdict is Verdict.MET
    preparer.close()
