"""An analysis answers for its set with readings, cautions and a picture, whatever state the units are in."""

from __future__ import annotations

from dataclasses import replace
from functools import cache

import numpy as np
import pytest

from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import (
    AgeAtHazardAsk,
    Basis,
    ConditionalReliabilityAsk,
    HazardAsk,
    LifeAsk,
    MeanLifeAsk,
    ModeAsk,
    ReliabilityAsk,
    ResidualLifeAsk,
    Session,
    UnitSet,
)
from reliability_app.session.unit_table import UnitTable

# NIST/SEMATECH e-Handbook of Statistical Methods, sec. 8.4.1.3: ten failures, ten units running at 500 h.
NIST_FAILURES = (54, 187, 216, 240, 244, 335, 361, 373, 375, 386)
NIST_ROWS = [
    *({"life": str(life), "state": "failed"} for life in NIST_FAILURES),
    {"life": "500", "state": "running", "quantity": "10"},
]


def analysed(rows: list[dict[str, str]], **basis: object) -> SetAnalysis:
    asks = (LifeAsk(10), LifeAsk(1), ReliabilityAsk(300), HazardAsk(300), LifeAsk(90))
    table = UnitTable.from_rows(rows)
    # The likelihood bound unless a test names another: quick, and the one the published limits are for.
    chosen = Basis(**{"bound": "likelihood", **basis})
    session = Session(sets=[UnitSet("A", table, chosen)], asks=asks)
    return analyse(Question.about(session, 0))


def codes(analysis: SetAnalysis) -> set[str]:
    return {caution.code for caution in analysis.cautions}


def test_readings_of_the_nist_example_come_with_their_bounds() -> None:
    analysis = analysed(NIST_ROWS, family="weibull", side="two")
    life, _, reliability, hazard, _ = analysis.readings
    # Estimate and limits recomputed from the data of the Handbook by an independent likelihood (tests/reference).
    assert (life.estimate, life.lower, life.upper) == pytest.approx((164.0224, 59.8546, 271.9495), rel=1e-6)
    # R(300) and h(300) follow from the Handbook's shape 1.7208 and scale 606.53 by the Weibull formulas.
    assert reliability.estimate == pytest.approx(np.exp(-((300 / 606.52756) ** 1.720797)), rel=1e-6)
    assert hazard.estimate == pytest.approx(1.720797 / 606.52756 * (300 / 606.52756) ** 0.720797, rel=1e-6)
    assert reliability.lower < reliability.estimate < reliability.upper
    assert hazard.lower < hazard.estimate < hazard.upper


def test_a_lower_bound_of_lives_goes_with_an_upper_bound_of_the_hazard() -> None:
    life, _, reliability, hazard, _ = analysed(NIST_ROWS, side="lower").readings
    assert life.lower is not None
    assert life.upper is None
    assert reliability.lower is not None
    assert reliability.upper is None
    assert hazard.lower is None
    assert hazard.upper is not None


def test_the_band_meets_the_bound_of_the_reading() -> None:
    analysis = analysed(NIST_ROWS, family="weibull", side="two")
    failure, life = analysis.picture.failure, analysis.readings[0]
    assert failure is not None
    # Where the bound of the life at 10 % stands, the band of the failure probability passes through 10 %.
    assert np.interp(life.lower, failure.x, failure.upper) == pytest.approx(0.10, rel=2e-3)
    assert np.interp(life.upper, failure.x, failure.lower) == pytest.approx(0.10, rel=2e-3)
    assert np.interp(life.estimate, failure.x, failure.y) == pytest.approx(0.10, rel=2e-3)


def test_bands_mirror_each_other_and_hold_the_estimate() -> None:
    picture = analysed(NIST_ROWS, side="two").picture
    assert np.allclose(picture.failure.upper + picture.survival.lower, 1.0, atol=1e-12)
    for curve in (picture.failure, picture.survival, picture.hazard):
        assert (curve.lower <= curve.y * (1 + 1e-9)).all()
        assert (curve.upper >= curve.y * (1 - 1e-9)).all()


@pytest.mark.parametrize(
    ("rows", "code"),
    [
        ([{"life": "100", "state": "running"}] * 3, "no-failure"),
        ([{"life": "100", "state": "failed"}], "one-failure-not-outlived"),
        ([{"life": "100", "state": "failed"}, {"life": "40", "state": "running"}], "one-failure-not-outlived"),
        ([{"life": "100", "state": "failed", "quantity": "4"}], "failures-at-one-age"),
        ([{"life": "100", "state": "failed"}, {"life": "200", "state": "running"}], "one-failure"),
        ([{"life": str(life), "state": "failed"} for life in (90, 120, 150)], "very-few-failures"),
        ([{"life": str(life), "state": "failed"} for life in (90, 120, 150, 170, 180)], "few-failures"),
    ],
)
def test_every_thin_set_of_units_is_named(rows: list[dict[str, str]], code: str) -> None:
    assert code in codes(analysed(rows))


def test_no_number_is_given_where_no_estimate_exists() -> None:
    analysis = analysed([{"life": "100", "state": "running"}] * 3)
    assert all(reading.estimate is None for reading in analysis.readings)
    assert analysis.main is None
    assert analysis.picture.failure is None
    assert analysis.picture.running_quantity.tolist() == [3]


def test_extrapolation_to_either_side_is_said_beside_the_number() -> None:
    _, b1, _, _, b90 = analysed(NIST_ROWS, family="weibull").readings
    assert [caution.code for caution in b1.cautions if caution.code.endswith("failure")] == ["below-first-failure"]
    assert "(54 h)" in b1.cautions[0].text
    assert b90.cautions[0].code == "beyond-last-observation"


def test_wald_bound_in_a_small_sample_is_cautioned() -> None:
    reading = analysed(NIST_ROWS, bound="wald").readings[0]
    assert "wald-small-sample" in {caution.code for caution in reading.cautions}


def test_unread_rows_are_left_out_and_said() -> None:
    whole = analysed(NIST_ROWS)
    analysis = analysed([*NIST_ROWS, {"life": "n/a", "state": "failed"}])
    assert "rows-unread" in codes(analysis)
    assert analysis.readings[0].estimate == whole.readings[0].estimate


def test_the_standing_caution_closes_every_list() -> None:
    for rows in (NIST_ROWS, [], [{"life": "1", "state": "running"}]):
        assert analysed(rows).cautions[-1].code == "responsible-engineer"


def test_an_exact_bound_that_does_not_exist_is_refused_beside_the_estimate() -> None:
    reading = analysed(NIST_ROWS, bound="exact").readings[0]
    assert reading.estimate is not None
    assert reading.lower is None
    assert reading.cautions[0].code == "bound-unavailable"


@pytest.mark.parametrize(("field", "name"), [("family", "pearson"), ("fit", "by eye")])
def test_a_basis_this_version_cannot_carry_out_is_named(field: str, name: str) -> None:
    analysis = analysed(NIST_ROWS, **{field: name})
    assert analysis.fit is None
    assert any(name in caution.text for caution in analysis.cautions)


def test_points_know_the_rows_they_stand_for() -> None:
    rows = [*NIST_ROWS, {"life": "187", "state": "failed", "quantity": "2"}]
    picture = analysed(rows).picture
    place = picture.point_age.tolist().index(187.0)
    assert picture.point_rows[place] == (1, 11)
    assert picture.point_quantity[place] == 3
    assert picture.running_age.tolist() == [500.0]


def test_moving_the_main_reading_gives_what_a_fresh_analysis_gives() -> None:
    analysis = analysed(NIST_ROWS)
    moved = analysis.with_main_ask(LifeAsk(25)).readings[0]
    fresh = analyse(replace(analysis.question, asks=(LifeAsk(25),))).readings[0]
    assert (moved.estimate, moved.lower) == (fresh.estimate, fresh.lower)


def test_found_failed_units_are_fitted_and_drawn() -> None:
    rows = [*NIST_ROWS, {"life": "100", "until": "200", "state": "found failed"}]
    analysis = analysed(rows)
    assert analysis.main is not None
    assert "points-not-drawn" not in codes(analysis)
    # The new unit joins the failure at 187 h, the only one between 100 h and 200 h.
    assert analysis.picture.point_age.tolist() == list(NIST_FAILURES)
    assert analysis.picture.point_rows[1] == (1, 11)
    assert analysis.picture.point_quantity[1] == 2
    # By hand: 1 of 21 units failed at 54 h, 2 at 187 h, so that 3/21 have failed after it and 1/21 before.
    assert analysis.picture.point_fraction[1] == pytest.approx(2 / 21, abs=1e-10)


@cache
def nist_calibrated() -> SetAnalysis:
    """Computed once: five readings and the bands, all by simulation."""
    return analysed(NIST_ROWS, family="weibull", bound="automatic")


def test_automatic_bounds_are_calibrated_and_a_quick_analysis_is_provisional() -> None:
    slow = nist_calibrated()
    assert slow.readings[0].bound_used == "calibrated"
    assert not slow.is_provisional
    quick = analyse(slow.question, quick=True)
    assert quick.is_provisional
    assert quick.readings[0].is_provisional
    assert quick.readings[0].bound_used == "likelihood"
    likelihood = analysed(NIST_ROWS, family="weibull", bound="likelihood").readings[0]
    assert quick.readings[0].lower == likelihood.lower
    assert slow.readings[0].lower < likelihood.lower


def test_a_calibrated_reading_moved_by_hand_follows_the_band() -> None:
    slow = nist_calibrated()
    moved = slow.with_main_ask(LifeAsk(25)).readings[0]
    fresh = analyse(replace(slow.question, asks=(LifeAsk(25),)), with_curves=False).readings[0]
    assert fresh.bound_used == "calibrated"
    assert moved.is_provisional
    assert moved.estimate == fresh.estimate
    # The band is drawn through calibrations at thirteen ages; between them it is smooth.
    assert moved.lower == pytest.approx(fresh.lower, rel=0.02)


def test_complete_lognormal_lives_have_the_exact_bound_at_once() -> None:
    rows = [{"life": str(life), "state": "failed"} for life in NIST_FAILURES]
    analysis = analyse(analysed(rows, bound="automatic").question, quick=True)
    assert analysis.readings[0].bound_used == "exact"
    assert not analysis.readings[0].is_provisional
    # No exact bound of a hazard is known: the likelihood-ratio bound stands in until it is calibrated.
    hazard = analysis.readings[3]
    assert (hazard.bound_used, hazard.is_provisional, analysis.is_provisional) == ("likelihood", True, True)


def test_units_of_one_name_are_told() -> None:
    rows = [{"unit": "P-1", "life": "10", "state": "failed"}, {"unit": "P-1", "life": "20", "state": "failed"}]
    assert "units-repeated" in codes(analysed(rows))


def test_where_nothing_can_be_simulated_the_reading_says_that_its_bound_is_not_calibrated() -> None:
    # Invented: four units, each watched for its last hour only.
    rows = [{"life": str(life), "state": "failed", "entered": str(life - 1)} for life in (100, 110, 120, 130)]
    session = Session(sets=[UnitSet("A", UnitTable.from_rows(rows), Basis(bound="automatic"))], asks=(LifeAsk(10.0),))
    analysis = analyse(Question.about(session, 0))
    (reading,) = analysis.readings
    assert reading.bound_used == "likelihood"
    assert 0.0 <= reading.lower < reading.estimate
    assert "not-calibrated" in {caution.code for caution in reading.cautions}
    assert not analysis.is_provisional
    assert analysis.picture.failure.upper is not None


def test_readings_without_an_exact_bound_are_calibrated_in_complete_lognormal_data() -> None:
    rows = [{"life": str(life), "state": "failed"} for life in (612, 701, 744, 850, 913, 1010, 1105)]
    asks = (
        ConditionalReliabilityAsk(900.0, 500.0),
        ResidualLifeAsk(500.0),
        MeanLifeAsk(),
        ModeAsk(),
        AgeAtHazardAsk(1e-3),
    )
    session = Session(sets=[UnitSet("A", UnitTable.from_rows(rows), Basis(bound="automatic"))], asks=asks)
    for reading in analyse(Question.about(session, 0)).readings:
        assert reading.bound_used == "calibrated"
        assert reading.lower is not None
        assert reading.lower < reading.estimate


def test_readings_are_the_same_where_no_curves_are_drawn() -> None:
    drawn = analysed(NIST_ROWS, family="weibull", bound="likelihood")
    bare = analyse(drawn.question, with_curves=False)
    assert bare.picture.failure is None
    assert drawn.picture.failure is not None
    assert [(one.estimate, one.lower, one.cautions) for one in bare.readings] == [
        (one.estimate, one.lower, one.cautions) for one in drawn.readings
    ]
