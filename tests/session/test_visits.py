"""A visit records what the session holds and said; it is taken back, deleted and labelled without loss."""

import json
from datetime import datetime, timedelta, timezone

import pytest

from reliability_app import __version__
from reliability_app.session.analysis import Question, analyse
from reliability_app.session.document import Basis, LifeAsk, MeanLifeAsk, ReliabilityAsk, Session, UnitSet
from reliability_app.session.held_requirement import SetRequirement
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.packed_units import packed, unpacked
from reliability_app.session.requirement import Requirement
from reliability_app.session.session_errors import SessionUnreadable
from reliability_app.session.unit_table import UnitTable
from reliability_app.session.visit import unit_sets_of
from reliability_app.session.visits import (
    DeleteVisit,
    RelabelVisit,
    VisitRefused,
    differs_from_last,
    look_of_today,
    record_visit,
)

# Invented.
ROWS = [
    *(
        {"unit": f"P-{number:02}", "life": life, "state": "failed"}
        for number, life in enumerate(["812", "1401.40", "1e3", "655"])
    ),
    {"unit": "P-10", "life": "1500", "state": "running", "quantity": "3", "rig": "tab\there \\ \\t"},
    {"unit": "P-11", "life": "n/a", "state": "failed", "note": "line\nbreak"},
    {},
    {"life": "400", "until": "600", "state": "found failed"},
]
START = datetime(2026, 3, 2, 14, 0, tzinfo=timezone(timedelta(hours=1)))


def session() -> Session:
    table = UnitTable.from_rows(ROWS, ["rig", "empty"])
    basis = Basis(family="weibull", bound="likelihood")
    return Session(sets=[UnitSet("Design A", table, basis)], asks=(LifeAsk(10.0), ReliabilityAsk(500.0)))


def analyses(of: Session):
    return [analyse(Question.about(of, place)) for place in range(len(of.sets))]


def visited(of: Session, label="week 6", days=0):
    edit = record_visit(of, analyses(of), label, START + timedelta(days=days))
    edit.apply(of)
    return edit


def failed(of: Session, row=4):
    of.sets[0].table.set_block(row, ["life", "state"], [["1600", "failed"]])


def texts(table: UnitTable):
    return table.columns, [table.row(row) for row in range(table.row_count)]


def test_a_visit_keeps_the_table_as_it_was_whatever_its_cells_hold():
    table = session().sets[0].table
    record = from_text(to_text(_with_visit())).visits[0].record
    assert texts(unpacked(record.sets[0].units)) == texts(table)
    assert packed(table)["rows"][1] == "P-01\t1401.40\t\tfailed"


def test_very_many_rows_are_compressed_and_come_back_exactly():
    rows = [
        {"unit": f"P-{unit}", "life": f"{unit}.50", "state": "failed", "note": "a\nb\tc\\n"} for unit in range(1, 6001)
    ]
    made = Session(sets=[UnitSet("A", UnitTable.from_rows(rows), Basis(bound="wald"))])
    visited(made)
    text = to_text(made)
    again = from_text(text)
    assert to_text(again) == text
    assert again.visits[0].record.sets[0].units.rows == []
    assert unit_sets_of(again.visits[0])[0].table.rows() == rows
    assert differs_from_last(again) == ()
    assert len(again.visits[0].text) < 0.1 * len(text)


def _with_visit() -> Session:
    made = session()
    visited(made)
    return made


def test_a_visit_records_the_numbers_and_what_they_rest_on():
    made = _with_visit()
    analysis, one = analyses(made)[0], made.visits[0].record.sets[0]
    assert one.parameters == analysis.fit.parameters
    assert one.covariance == analysis.fit.covariance.tolist()
    assert one.covariance_of == ["mu", "ln sigma"]
    assert one.log_likelihood == analysis.fit.log_likelihood
    assert [(taken.estimate, taken.lower, taken.upper, taken.bound_used) for taken in one.readings] == [
        (reading.estimate, reading.lower, reading.upper, "likelihood") for reading in analysis.readings
    ]
    assert (one.counts.failed, one.counts.running, one.counts.found_failed, one.counts.unread) == (4, 3, 1, 1)
    assert one.unread_rows == [6]
    assert (one.engine, one.seed) == (__version__, 20_260_101)
    assert (made.visits[0].at, made.visits[0].label) == (START, "week 6")


def test_opening_and_saving_a_session_with_visits_changes_no_byte():
    made = _with_visit()
    failed(made)
    visited(made, "week 8", 14)
    SetRequirement(Requirement(LifeAsk(10.0), 100.5, 0.9), at=START).apply(made)
    text = to_text(made)
    assert to_text(from_text(text)) == text
    assert '"P-01\\t1401.40\\t\\tfailed",\n' in text  # a line for each unit


def test_numbers_and_unknown_keys_of_a_visit_stay_as_they_were_written():
    text = to_text(_with_visit()).replace('"label": "week 6"', '"label": "week 6", "room": [1.50, null]')
    text = text.replace('"counts": {', '"checked": 1401.40, "counts": {"lost": 2.0, ')
    kept = to_text(from_text(text))
    assert '"room": [1.50, null]' in kept
    assert '"checked": 1401.40' in kept
    assert '"lost": 2.0' in kept


def test_a_mean_that_is_infinite_is_recorded_and_comes_back():
    # A loglogistic spread above 1 has no mean (common knowledge of the distribution).
    rows = [{"life": life, "state": "failed"} for life in ("1", "9", "100", "2000", "30000", "400000")]
    made = Session(sets=[UnitSet("A", UnitTable.from_rows(rows), Basis(family="loglogistic", bound="wald"))])
    made.asks = (LifeAsk(10.0), MeanLifeAsk())
    visited(made)
    again = from_text(to_text(made)).visits[0].record.sets[0].readings[1]
    assert again.estimate == "infinite"


def test_recording_deleting_and_labelling_are_undone_exactly():
    made = session()
    before = to_text(made)
    first = visited(made)
    one = to_text(made)
    second = visited(made, "earlier", days=-7)
    assert [visit.label for visit in made.visits] == ["earlier", "week 6"]  # in the order of time
    second.revert(made)
    assert to_text(made) == one
    label = RelabelVisit(0, "week six")
    label.apply(made)
    assert to_text(made) == one.replace("week 6", "week six")
    label.revert(made)
    gone = DeleteVisit(0)
    gone.apply(made)
    assert made.visits == []
    gone.revert(made)
    assert to_text(made) == one
    first.revert(made)
    assert to_text(made) == before


def test_the_sets_of_a_visit_open_beside_today_and_change_nothing():
    made = _with_visit()
    text = to_text(made)
    then = unit_sets_of(made.visits[0])
    assert [(one.name, one.basis) for one in then] == [("Design A", made.sets[0].basis)]
    then[0].table.set_block(0, ["life"], [["1"]])
    assert to_text(made) == text


def test_what_differs_from_the_last_visit_is_named():
    made = session()
    assert differs_from_last(made) == ("everything",)
    visited(made)
    assert differs_from_last(made, analyses(made)) == ()
    made.sets[0].basis = Basis(family="lognormal", bound="likelihood")
    assert differs_from_last(made) == ("the basis of Design A",)
    failed(made)
    made.asks = (LifeAsk(1.0),)
    made.sets.append(UnitSet("Design B"))
    assert differs_from_last(made) == ("the units of Design A", "the set Design B", "the readings asked for")


def test_answers_of_another_engine_are_a_difference_too():
    text = to_text(_with_visit())
    estimate = json.loads(text)["visits"][0]["sets"][0]["readings"][0]["estimate"]
    made = from_text(text.replace(str(estimate), str(estimate + 1)))
    assert differs_from_last(made) == ()
    assert differs_from_last(made, analyses(made)) == ("the readings of Design A",)


def test_a_visit_is_not_recorded_from_stale_or_provisional_readings():
    made = session()
    old = analyses(made)
    failed(made)
    with pytest.raises(VisitRefused, match="not those"):
        record_visit(made, old)
    with pytest.raises(VisitRefused, match="every set"):
        record_visit(made, [])
    with pytest.raises(VisitRefused, match="zone"):
        record_visit(made, analyses(made), at=datetime(2026, 3, 2))
    made.sets[0].basis = Basis(family="weibull")
    quick = [analyse(Question.about(made, 0), quick=True)]
    with pytest.raises(VisitRefused, match="still being computed"):
        record_visit(made, quick)


# The requirement


def required(at_least=100.0):
    return Requirement(LifeAsk(10.0), at_least, 0.9)


def test_the_requirement_is_judged_at_each_visit_and_the_looks_are_counted():
    made = session()
    SetRequirement(required(), at=START).apply(made)
    visited(made)
    assert made.requirement.looks == 1
    assert look_of_today(made) == 1  # the units are those just judged
    failed(made)
    assert look_of_today(made) == 2
    visited(made, days=7)
    judged = [visit.record.sets[0].judged for visit in made.visits]
    assert [(one.look, one.confidence) for one in judged] == [(1, 0.9), (2, 0.9)]
    assert judged[0].lower == pytest.approx(analyses_bound(made, 0))
    assert json.loads(to_text(made))["visits"][1]["requirement"]["looks"] == 2


def analyses_bound(made, place):
    then = Session(sets=unit_sets_of(made.visits[place]))
    return analyses(then)[0].fit.life_bounds(0.1, confidence=0.9, side="lower", kind="likelihood")[0]


def test_a_deleted_visit_was_a_look_all_the_same_and_an_undone_one_was_none():
    made = session()
    SetRequirement(required(), at=START).apply(made)
    edit = visited(made)
    edit.revert(made)
    assert look_of_today(made) == 1
    edit.apply(made)
    DeleteVisit(0).apply(made)
    assert look_of_today(made) == 2


def test_a_change_of_the_requirement_is_logged_and_begins_anew():
    made = session()
    SetRequirement(required(), at=START).apply(made)
    visited(made)
    text = to_text(made)
    easier = SetRequirement(required(50.0), at=START + timedelta(days=1))
    easier.apply(made)
    assert (made.requirement.looks, look_of_today(made)) == (0, 1)
    SetRequirement(None, at=START + timedelta(days=2)).apply(made)
    again = from_text(to_text(made))
    assert again.requirement is None
    assert [change.sentence("h") for change in again.requirement_log] == [
        "2026-03-02: set to B10 life at least 100 h, with 90 % confidence.",
        "2026-03-03: changed, after 1 look, from B10 life at least 100 h, with 90 % confidence "
        "to B10 life at least 50 h, with 90 % confidence.",
        "2026-03-04: withdrawn, not judged at a visit yet: B10 life at least 50 h, with 90 % confidence.",
    ]
    back = from_text(text)
    edit = SetRequirement(required(50.0))
    edit.apply(back)
    edit.revert(back)
    assert to_text(back) == text


def test_asking_for_the_adjusted_bound_keeps_the_looks_and_asks_for_more():
    made = session()
    SetRequirement(required(), at=START).apply(made)
    visited(made)
    SetRequirement(required(), adjusted=True, at=START).apply(made)
    failed(made)
    visited(made, days=7)
    assert made.requirement.looks == 2
    assert made.visits[1].record.sets[0].judged.confidence == pytest.approx(1 - 0.1 / 6)


@pytest.mark.parametrize(
    ("before", "after", "place"),
    [
        ('"at": "2026-03-02T14:00:00+01:00"', '"at": "2026-03-02T14:00:00"', "$.visits[0].at"),
        ('"at": "2026-03-02T14:00:00+01:00"', '"at": "soon"', "$.visits[0].at"),
        ('"P-00\\t812\\t\\tfailed"', '"P-00\\t812\\t\\tfailed\\t\\t\\t\\t\\t\\t"', "$.visits[0].sets[0].units.rows[0]"),
        ('"P-00\\t812\\t\\tfailed"', "5", "$.visits[0].sets[0].units.rows[0]"),
        ('"columns": ["unit"', '"columns": ["life"', "$.visits[0].sets[0].units.columns"),
        ('"columns": ["unit"', '"columns": [""', "$.visits[0].sets[0].units.columns"),
        ('"unread_rows": [6]', '"unread_rows": ["6"]', "$.visits[0].sets[0].unread_rows[0]"),
        ('"counts": {"failed": 4', '"counts": {"failed": -4', "$.visits[0].sets[0].counts.failed"),
        ('"verdict": "', '"verdict": "maybe ', "$.visits[0].sets[0].judged.verdict"),
        ('"seed": 20260101', '"seed": 1e999', "$.visits[0].sets[0].seed"),
        (
            '"at_least": 100, "confidence": 0.9, "set_at"',
            '"at_least": 0, "confidence": 0.9, "set_at"',
            "$.requirement.at_least",
        ),
        ('"became": {"ask": "life"', '"became": {"ask": "mode"', "$.requirement_log[0].became.ask"),
    ],
)
def test_a_broken_visit_is_refused_with_its_place(before, after, place):
    made = session()
    SetRequirement(required(), at=START - timedelta(days=1)).apply(made)
    visited(made)
    text = to_text(made)
    assert before in text
    with pytest.raises(SessionUnreadable) as refusal:
        from_text(text.replace(before, after, 1))
    assert refusal.value.place == place


def test_a_confidence_that_no_bound_can_have_is_refused_with_its_place():
    made = session()
    SetRequirement(required(), at=START).apply(made)
    text = to_text(made).replace('"confidence": 0.9, "set_at"', '"confidence": 0.99999999, "set_at"', 1)
    with pytest.raises(SessionUnreadable) as refusal:
        from_text(text)
    assert refusal.value.place == "$.requirement"
