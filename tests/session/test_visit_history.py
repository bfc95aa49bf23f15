"""Through the visits: how a reading moved, what changed, what was foretold, and the same numbers again."""

from datetime import datetime, timedelta, timezone

import pytest

from reliability_app.session.analysis import Question, analyse
from reliability_app.session.document import Basis, LifeAsk, MeanLifeAsk, Session, UnitSet
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.unit_table import UnitTable
from reliability_app.session.visit_agreement import Agreements, pairs_in_turn
from reliability_app.session.visit_history import changes_between, history, set_then
from reliability_app.session.visit_reproduction import computed_otherwise, reproduce
from reliability_app.session.visits import RelabelVisit, record_visit

# Invented: 8 failures and 12 units running at 700 h; then at 900 h; then at 920 h.
LIVES = (112, 205, 330, 412, 480, 533, 610, 689)
START = datetime(2026, 3, 2, 14, 0, tzinfo=timezone(timedelta(hours=1)))


def table(running_at, *later, **cells) -> UnitTable:
    """Twelve units followed, of which the first failed at `later`; `cells` gives a unit another life."""
    rows = [{"unit": f"F-{number}", "life": str(life), "state": "failed"} for number, life in enumerate(LIVES)]
    rows += [{"unit": f"R-{number}", "life": str(life), "state": "failed"} for number, life in enumerate(later)]
    rows += [{"unit": f"R-{number}", "life": str(running_at), "state": "running"} for number in range(len(later), 12)]
    for row in rows:
        row["life"] = cells.get(row["unit"].replace("-", "_"), row["life"])
    return UnitTable.from_rows(rows)


TABLES = (
    table(700),
    table(900, 720, 790, 860, F_0="n/a"),
    table(920, 720, 791, 860, 901, 902, 903, 904, 906, 907, 908, 910, F_7="690.5"),
)
WEIBULL, LOGNORMAL = Basis(family="weibull", bound="likelihood"), Basis(bound="wald", confidence=0.9)


@pytest.fixture(scope="module")
def text() -> str:
    made = Session(asks=(LifeAsk(10.0),))
    for number, (units, basis) in enumerate(zip(TABLES[:2], (WEIBULL, WEIBULL), strict=True)):
        made.sets = [UnitSet("Design A", units, basis)]
        analyses = [analyse(Question.about(made, 0))]
        record_visit(made, analyses, f"week {number}", START + timedelta(weeks=number)).apply(made)
    made.sets = [UnitSet("Design A", TABLES[2], LOGNORMAL)]
    return to_text(made)


def test_a_reading_is_followed_as_it_was_recorded_up_to_today(text):
    session = from_text(text)
    today = analyse(Question.about(session, 0))
    points = history(session, "Design A", LifeAsk(10.0), today, now=START + timedelta(weeks=2))
    assert [(point.place, point.title) for point in points] == [
        (0, "week 0 (2026-03-02)"),
        (1, "week 1 (2026-03-09)"),
        (None, "today"),
    ]
    for point, units, basis in zip(points, TABLES, (WEIBULL, WEIBULL, LOGNORMAL), strict=True):
        anew = analyse(Question.about(Session(sets=[UnitSet("A", units, basis)], asks=(LifeAsk(10.0),)), 0)).main
        assert (point.reading.estimate, point.reading.lower) == (anew.estimate, anew.lower)
        assert point.reading.basis == basis
    assert [point.counts.failed for point in points] == [8, 10, 19]
    assert points[0].sentence("h").startswith("B10 life ")


def test_a_reading_that_a_visit_did_not_take_is_said_to_be_missing(text):
    points = history(from_text(text), "Design A", MeanLifeAsk())
    assert [point.reading for point in points] == [None, None]
    assert points[0].sentence("h") == "This reading was not taken."


def test_the_only_set_is_followed_under_a_new_name_and_a_foreign_one_is_not(text):
    session = from_text(text)
    session.sets[0].name = "Design A2"
    assert len(history(session, "Design A2", LifeAsk(10.0))) == 2
    session.sets.append(UnitSet("Design B"))
    assert history(session, "Design B", LifeAsk(10.0)) == ()


def test_what_changed_between_visits_is_told_unit_by_unit_and_for_the_basis(text):
    session = from_text(text)
    first, second, today = (set_then(session, "Design A", place) for place in (0, 1, None))
    changes = changes_between(first, second)
    assert changes.excluded == ("F-0",)
    assert changes.sentence == "3 newly failed, 9 still running and older, 1 no longer read."
    changes = changes_between(second, today)
    assert changes.included == ("F-0",)
    assert changes.basis == (
        "family from Weibull to Lognormal",
        "bound from likelihood ratio to Wald",
        "confidence from 95 % to 90 %",
    )
    assert changes.sentence.startswith("8 newly failed, 1 still running and older, 3 corrected, 1 read again; changed:")
    assert changes_between(today, today).sentence == "The units are the same."


def test_foretold_and_found_in_turn_first_agrees_and_then_speaks(text):
    session = from_text(text)
    assert pairs_in_turn(session, "Design A") == [(0, 1), (1, None)]
    first, last = Agreements().in_turn(session, "Design A")
    assert not first.speaks
    assert first.sentence.endswith("3 failed: in agreement.")
    assert last.speaks
    assert last.sentence.endswith("look for a new cause, lot or duty.")
    rows = {row.unit: row for row in last.rows()}
    assert (rows["R-3"].then, rows["R-3"].reached, rows["R-3"].failed) == (900, 920, 1)
    assert 0 < rows["R-3"].chance < 0.2
    assert "aged like those still running" in last.remarks()[0]


def test_an_agreement_is_computed_once_until_units_change(text):
    session, cache, calls = from_text(text), Agreements(), []
    first = cache.between(session, "Design A", 0, None, proceed=lambda: calls.append(1))
    assert calls
    calls.clear()
    RelabelVisit(0, "begin").apply(session)
    again = cache.between(session, "Design A", 0, None, proceed=lambda: calls.append(1))
    assert again.agreement is first.agreement
    assert again.titles == ("begin (2026-03-02)", "today")
    assert not calls
    session.sets[0].table.set_block(0, ["life"], [["113"]])
    assert cache.known(session, "Design A", 0, None) is None


def test_slow_work_is_ended_by_what_proceed_raises(text):
    class Stop(Exception):
        pass

    def stop():
        raise Stop

    cache, session = Agreements(), from_text(text)
    with pytest.raises(Stop):
        cache.between(session, "Design A", 0, 1, proceed=stop)
    assert cache.known(session, "Design A", 0, 1) is None


@pytest.mark.parametrize(
    ("was", "now", "reason"),
    [
        ('"fit": "maximum likelihood"', '"fit": "median-rank regression of age"', "choose maximum likelihood"),
        ('"family": "weibull"', '"family": "gamma"', "location and a spread"),
    ],
)
def test_a_basis_that_foretells_nothing_is_a_reason_in_words(text, was, now, reason):
    session = from_text(text.replace(was, now))
    assert reason in Agreements().between(session, "Design A", 0, 1).sentence


def test_a_visit_is_computed_anew_to_the_same_numbers(text):
    session = from_text(text)
    for visit in session.visits:
        again = reproduce(visit)
        assert again.differences == ()
        assert again.sentence == ""
        for taken, reading in zip(visit.record.sets[0].readings, again.analyses[0].readings, strict=True):
            assert (taken.estimate, taken.lower, taken.upper) == (reading.estimate, reading.lower, reading.upper)
    assert computed_otherwise(session) == ()


def test_an_engine_that_gives_other_numbers_than_stored_says_so(text):
    lower = from_text(text).visits[0].record.sets[0].readings[0].lower
    session = from_text(text.replace(str(lower), "77.5").replace('"engine": "0.1.0"', '"engine": "0.0.9"'))
    assert [visit.label for visit in computed_otherwise(session)] == ["week 0", "week 1"]
    told = reproduce(session.visits[0]).sentence
    assert told.startswith("Visit week 0 (2026-03-02) was computed by version 0.0.9; this version")
    assert "Design A, B10 life: lower bound 77.5 h (77.5) then" in told
    assert reproduce(session.visits[1]).differences == ()
