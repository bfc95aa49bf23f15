"""Methods other than plain maximum likelihood: what they estimate, where they apply, which bounds go with them."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import FAMILY_NAMES, METHODS, LifeData, fit, methods_for
from reliability_app.engine.errors import BoundUnavailable, MethodUnavailable, UnknownName
from reliability_app.engine.families import LOCATION_SCALE_NAMES, family
from reliability_app.engine.fitting import fit_batch
from reliability_app.engine.sample import NO_INTERVALS, NO_PART, Part, Sample
from reliability_app.engine.small_sample import shape_correction

PLAIN, WITH_N_MINUS_1, CORRECTED, OF_AGE, OF_RANK = METHODS
# Invented lives.
LIVES = np.array([112.0, 205.0, 241.0, 266.0, 330.0, 358.0, 401.0, 470.0])
COMPLETE = LifeData.right_censored(LIVES, np.ones(8))
REMOVALS = LifeData.right_censored(LIVES, [1, 0, 1, 1, 0, 1, 1, 0])


def johnson_scores(failed: list[int], family_name: str) -> np.ndarray:
    """Scores of exact median ranks by Johnson's recursion, one unit after the other."""
    count, rank, scores = len(failed), 0.0, []
    for place, has_failed in enumerate(failed):
        if has_failed:
            rank += (count + 1 - rank) / (1 + count - place)
            scores.append(stats.beta.median(rank, count - rank + 1))
    judge = {"weibull": stats.gumbel_l, "lognormal": stats.norm, "logistic": stats.logistic}
    return judge[family_name].ppf(scores)


@pytest.mark.parametrize("name", ["weibull", "lognormal", "logistic"])
@pytest.mark.parametrize("failed", [[1] * 8, [1, 0, 1, 1, 0, 1, 1, 0]])
def test_rank_regression_is_least_squares_either_way(failed: list[int], name: str) -> None:
    data = LifeData.right_censored(LIVES, failed)
    x = LIVES[np.array(failed) == 1]
    x = x if name == "logistic" else np.log(x)
    z = johnson_scores(failed, name)
    age, rank = (fit(data, name, method=method).bounder.own for method in (OF_AGE, OF_RANK))
    sigma, mu = np.polyfit(z, x, 1)
    assert (age.mu, age.sigma) == pytest.approx((mu, sigma), rel=1e-10)
    slope, level = np.polyfit(x, z, 1)
    assert (rank.mu, rank.sigma) == pytest.approx((-level / slope, 1.0 / slope), rel=1e-10)


def test_rank_regression_of_the_exponential_family_moves_the_line_without_turning_it() -> None:
    scores = johnson_scores([1] * 8, "weibull")
    for method in (OF_AGE, OF_RANK):
        mean = fit(COMPLETE, "exponential", method=method).parameters["mean"]
        assert np.log(mean) == pytest.approx(np.log(LIVES).mean() - scores.mean(), rel=1e-12)


@pytest.mark.parametrize(("name", "x"), [("lognormal", np.log(LIVES)), ("normal", LIVES)])
def test_sigma_with_n_minus_1_and_the_wald_bound_that_goes_with_it(name: str, x: np.ndarray) -> None:
    found = fit(COMPLETE, name, method=WITH_N_MINUS_1)
    deviation = x.std(ddof=1)
    assert found.parameters == pytest.approx({"mu": x.mean(), "sigma": deviation}, rel=1e-12)
    assert found.standard_errors["mu"] == pytest.approx(deviation / np.sqrt(8), rel=1e-12)
    assert found.standard_errors["sigma"] == pytest.approx(deviation / np.sqrt(14), rel=1e-12)
    z = stats.norm.ppf(0.1)
    end = x.mean() + z * deviation - 1.6448536269514722 * deviation * np.sqrt(1 / 8 + z * z / 14)
    low = found.life_bounds(0.1, kind="wald")[0]
    assert (np.log(low) if name == "lognormal" else low) == pytest.approx(end, rel=1e-10)
    assert found.log_likelihood == pytest.approx(
        stats.norm.logpdf(x, x.mean(), deviation).sum() - (np.log(LIVES).sum() if name == "lognormal" else 0.0)
    )


def test_the_corrected_shape_keeps_the_scale_that_is_likeliest_with_it() -> None:
    plain, found = fit(COMPLETE, "weibull"), fit(COMPLETE, "weibull", method=CORRECTED)
    shape = found.parameters["shape"]
    assert shape == pytest.approx(plain.parameters["shape"] / (1 + 1.37 / (8 - 1.92)), rel=1e-10)
    assert found.parameters["scale"] == pytest.approx((LIVES**shape).mean() ** (1 / shape), rel=1e-10)
    assert found.log_likelihood < plain.log_likelihood


@pytest.mark.parametrize("units", [4, 8, 20])
def test_the_correction_leaves_the_mean_of_the_shapes_right_within_2_percent(units: int) -> None:
    """Own simulation of 20,000 tests; uncorrected, the mean is 66, 22 and 7 % too great."""
    logs = np.log(np.random.default_rng(units).exponential(size=(20_000, units)))
    part = Part(logs, np.ones_like(logs))
    tests = Sample(part, NO_PART, NO_INTERVALS, NO_PART, NO_PART, 0.0, 1.0, np.zeros(20_000))
    top = fit_batch(tests, family("weibull"))
    assert top.converged.all()
    assert top.b.mean() * shape_correction(units) == pytest.approx(1.0, abs=0.02)


def test_where_each_method_applies() -> None:
    assert methods_for(None, "weibull") == (PLAIN, CORRECTED, OF_AGE, OF_RANK)
    assert methods_for(None, "lognormal") == (PLAIN, WITH_N_MINUS_1, OF_AGE, OF_RANK)
    assert methods_for(COMPLETE, "lognormal") == (PLAIN, WITH_N_MINUS_1, OF_AGE, OF_RANK)
    assert methods_for(REMOVALS, "lognormal") == methods_for(REMOVALS, "weibull") == (PLAIN, OF_AGE, OF_RANK)
    found = LifeData.from_intervals([1.0, 5.0, 3.0], [2.0, 5.0, np.inf])
    late = LifeData.right_censored([2.0, 5.0, 7.0], [1, 1, 1], entered=[1.0, 0.0, 0.0])
    one_age = LifeData.right_censored([2.0, 2.0, 7.0], [1, 1, 0])
    for data in (found, late, one_age):
        assert methods_for(data, "weibull") == (PLAIN,)
    for name in FAMILY_NAMES:
        assert (OF_AGE in methods_for(COMPLETE, name)) is (name in LOCATION_SCALE_NAMES)


@pytest.mark.parametrize("method", METHODS[1:])
@pytest.mark.parametrize("name", FAMILY_NAMES)
def test_a_method_fits_where_it_is_said_to_and_says_why_elsewhere(name: str, method: str) -> None:
    if method in methods_for(COMPLETE, name):
        found = fit(COMPLETE, name, method=method)
        assert found.method == method
        assert found.converged
        assert found.aicc is None
        assert found.bic is None
        assert "not-maximum-likelihood" in [caution.code for caution in found.cautions]
        assert found.log_likelihood <= fit(COMPLETE, name).log_likelihood
    else:
        with pytest.raises(MethodUnavailable, match=r"\. Choose maximum likelihood\.$"):
            fit(COMPLETE, name, method=method)


def test_exact_bounds_go_with_every_method_and_those_of_the_likelihood_with_none() -> None:
    plain = fit(COMPLETE, "weibull")
    for method in (CORRECTED, OF_AGE, OF_RANK):
        found = fit(COMPLETE, "weibull", method=method)
        assert found.life_question(0.1).bound_used("automatic") == "exact"
        assert found.life_bounds(0.1, kind="automatic") == plain.life_bounds(0.1, kind="exact")
        for kind in ("wald", "likelihood", "calibrated"):
            with pytest.raises(BoundUnavailable, match="exact bound, or"):
                found.life_bounds(0.1, kind=kind)
        with pytest.raises(BoundUnavailable):
            found.hazard_bounds(100.0, kind="automatic")
        assert set(found.standard_errors.values()) == {None}
    removed = fit(REMOVALS, "weibull", method=OF_AGE)
    with pytest.raises(BoundUnavailable, match="no exact bound is known"):
        removed.life_bounds(0.1, kind="automatic")
    assert removed.life(0.1) > 0


def test_an_unknown_method_is_named_with_those_there_are() -> None:
    with pytest.raises(UnknownName, match="median-rank regression of rank"):
        fit(COMPLETE, "weibull", method="least trouble")
