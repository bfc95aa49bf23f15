"""Questions about several sets: all answered quickly before any slowly, and none asked again that is being answered."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest
from pytestqt.qtbot import QtBot

from reliability_app.session.analysis import Question, SetAnalysis
from reliability_app.session.document import Basis, Session, UnitSet
from reliability_app.session.set_edits import HideSet, RecolourSet
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows import background
from reliability_app.windows.background import Analyst
from reliability_app.windows.set_answers import SetAnswers

# Invented lives in hours.
ROWS = [{"life": life, "state": "failed"} for life in ("812", "1230", "1410", "1640")]


def three_sets() -> Session:
    basis = Basis(bound="likelihood")
    return Session(sets=[UnitSet(name, UnitTable.from_rows(ROWS), basis) for name in "ABC"])


@pytest.fixture
def order(monkeypatch: pytest.MonkeyPatch) -> list[tuple[str, bool]]:
    """Which sets are analysed in which order, and whether quickly; what is quick is provisional."""
    seen: list[tuple[str, bool]] = []
    real = background.analyse

    def noted(question: Question, *, quick: bool = False, proceed: Callable[[], None] | None = None) -> SetAnalysis:
        seen.append((question.name, quick))
        return replace(real(question, quick=quick, proceed=proceed), is_provisional=quick)

    monkeypatch.setattr(background, "analyse", noted)
    return seen


def test_every_set_is_answered_quickly_first_and_the_one_in_front_before_the_others(
    qtbot: QtBot, order: list[tuple[str, bool]]
) -> None:
    session = three_sets()
    analyst, answers = Analyst(), SetAnswers(session)
    analyst.answered.connect(answers.take)
    wanted = answers.ask(1)
    assert wanted is not None
    analyst.ask(wanted)
    assert answers.ask(1) is None  # it is being answered
    qtbot.waitUntil(lambda: not analyst.is_busy, timeout=30_000)
    assert order == [(name, quick) for quick in (True, False) for name in "BAC"]
    held = answers.all_held(1)
    assert held is not None
    assert not any(one.is_provisional for one in held)
    assert answers.ask(0) == []
    analyst.close()


def test_what_stopped_at_its_quick_answer_is_asked_slowly_only(order: list[tuple[str, bool]]) -> None:
    session = three_sets()
    answers = SetAnswers(session)
    wanted = answers.ask(0)
    assert wanted is not None
    answers.take(background.analyse(wanted[0].question, quick=True))
    answers.settle()
    (first, *others) = answers.ask(0) or []
    assert first.provisional is answers.held(0)
    assert [one.provisional for one in others] == [None, None]
    assert order == [("A", True)]


def test_an_answer_holds_under_another_name_and_colour_but_not_for_other_units() -> None:
    session = three_sets()
    answers = SetAnswers(session)
    for one in answers.ask(0) or []:
        answers.take(background.analyse(one.question))
    session.sets[1].name = "Beta"
    RecolourSet(1, 0, 4).apply(session)
    named = answers.held(1)
    assert named is not None
    assert (named.picture.name, named.picture.colour, named.question.name) == ("Beta", 4, "Beta")
    session.sets[1].table.set_block(0, ("life",), (("900",),))
    assert answers.drawn(1) is None
    assert answers.drawn(2) is not None
    # Other readings leave the curves true, and nothing else.
    session.asks = session.asks[1:]
    assert answers.held(2) is None
    assert answers.drawn(2) is not None


def test_a_late_answer_about_a_set_that_is_gone_or_was_changed_is_dropped() -> None:
    session = three_sets()
    answers = SetAnswers(session)
    late = [background.analyse(one.question) for one in answers.ask(0) or []]
    gone = session.sets.pop(2)
    assert answers.take(late[2]) is None
    session.sets[0].table.set_block(0, ("life",), (("900",),))
    answers.take(late[0])
    assert answers.held(0) is None
    assert gone not in session.sets


def test_a_hidden_set_is_shown_only_while_it_is_in_front() -> None:
    session = three_sets()
    HideSet(1, True).apply(session)
    answers = SetAnswers(session)
    assert answers.shown(0) == [0, 2]
    assert answers.shown(1) == [0, 1, 2]
    assert [one.question.name for one in answers.ask(0) or []] == ["A", "C"]
