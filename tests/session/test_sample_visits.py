"""The sample of eight visits tells its story, and this engine gives the numbers that it holds."""

from dataclasses import replace

import pytest

from reliability_app.engine import fit
from reliability_app.session.document import LifeAsk
from reliability_app.session.json_file import load
from reliability_app.session.requirement import judge
from reliability_app.session.shipped import shipped
from reliability_app.session.taking_readings import take_reading
from reliability_app.session.visit import ask_of, unit_sets_of
from reliability_app.session.visit_agreement import Agreements
from reliability_app.session.visit_history import changes_between, set_then
from reliability_app.session.visit_reproduction import ROUNDING
from reliability_app.session.visits import differs_from_last, look_of_today


@pytest.fixture(scope="module")
def session():
    return load(shipped("sample_sets") / "fans_eight_visits.json")


def test_eight_visits_agree_at_first_and_then_the_new_lot_is_found(session):
    assert len(session.visits) == 8
    cache = Agreements()
    told = [cache.between(session, "Fans", then, then + 1) for then in range(4)]
    assert [held.speaks for held in told] == [False, False, False, True]
    early = [row.unit for row in told[3].rows() if row.failed and row.chance < 0.1]
    assert len(early) >= 5
    assert all(unit.startswith("FB-") for unit in early)
    assert not cache.between(session, "Fans, lot B", 6, 7).speaks


def test_a_row_that_could_not_be_read_and_its_correction_are_told(session):
    first, second, third = (set_then(session, "Fans", place) for place in range(3))
    assert changes_between(first, second).excluded == ("FA-05",)
    assert changes_between(second, third).included == ("FA-05",)


def test_the_requirement_was_set_before_the_first_look_and_lot_b_does_not_meet_it(session):
    assert session.requirement.set_at < session.visits[0].at
    assert (session.requirement.looks, look_of_today(session)) == (8, 8)
    assert differs_from_last(session) == ()
    last = {one.name: one.judged.verdict for one in session.visits[-1].record.sets}
    assert last == {"Fans": "met", "Fans, lot B": "not met"}


def test_each_fit_and_estimate_of_a_visit_comes_out_again(session):
    for visit in session.visits:
        for unit_set, recorded in zip(unit_sets_of(visit), visit.record.sets, strict=True):
            fitted = fit(unit_set.table.life_data(), recorded.basis.family)
            assert fitted.parameters == pytest.approx(recorded.parameters, rel=ROUNDING)
            assert fitted.log_likelihood == pytest.approx(recorded.log_likelihood, rel=ROUNDING)
            assert fitted.covariance.tolist() == [pytest.approx(row, rel=ROUNDING) for row in recorded.covariance]
            # Wald bounds in the place of calibrated ones: what is held against the record here are the estimates.
            basis = replace(unit_set.basis, bound="wald")
            for taken in recorded.readings:
                again = take_reading(fitted, ask_of(taken), basis, "h")
                assert again.estimate == pytest.approx(taken.estimate, rel=ROUNDING)


def test_the_calibrated_bounds_and_the_verdict_of_the_first_visit_come_out_again(session):
    # About a second: the bounds are simulated. Those of all visits take a minute (`rigpaper read --visit`).
    recorded = session.visits[0].record.sets[0]
    fitted = fit(unit_sets_of(session.visits[0])[0].table.life_data(), recorded.basis.family)
    judged = judge(fitted, session.requirement.requirement, kind="automatic", look=1)
    taken = recorded.readings[0]  # the same life, with the same confidence
    assert (ask_of(taken), taken.confidence, taken.bound_used) == (LifeAsk(10.0), 0.9, "calibrated")
    assert judged.lower == pytest.approx(taken.lower, rel=ROUNDING)
    assert (judged.lower, judged.upper) == pytest.approx((recorded.judged.lower, recorded.judged.upper), rel=ROUNDING)
    assert judged.verdict.value == recorded.judged.verdict
