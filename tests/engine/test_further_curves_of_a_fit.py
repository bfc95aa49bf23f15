"""Curves of density and cumulative hazard: against scipy, and their bands against a search over the region."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import minimize
from scipy.stats import chi2, lognorm

from reliability_app.engine import Curve, LifeData, fit
from reliability_app.engine.empirical import nelson_aalen
from reliability_app.engine.fit_curves import (
    cumulative_hazard_curve,
    density_curve,
    hazard_step_curve,
    probability_curves,
)
from tests.engine.test_parameter_region import data, log_likelihood

AGES = np.array([300.0, 900.0, 1600.0, 2600.0])


def test_the_band_of_the_density_holds_its_extremes_over_the_region() -> None:
    found = fit(data(), "lognormal")
    curve = density_curve(found, AGES, confidence=0.9, kind="likelihood")
    floor = found.log_likelihood - 0.5 * chi2.ppf(0.9, 1)
    start = np.array([found.parameters["mu"], found.parameters["sigma"]])
    inside = {"type": "ineq", "fun": lambda at: log_likelihood("lognormal", *at) - floor}
    for place, age in enumerate(AGES):
        for sign, edge in ((1.0, curve.lower), (-1.0, curve.upper)):
            extreme = minimize(
                lambda at, age=age, sign=sign: sign * lognorm.logpdf(age, at[1], scale=np.exp(at[0])),
                start + np.array([0.01, 0.01]),
                constraints=[inside],
                method="SLSQP",
                bounds=[(6.5, 9.0), (0.1, 2.0)],
                options={"ftol": 1e-12, "maxiter": 300},
            )
            assert edge is not None
            # No point of the region says more than the band; the outline is that of a picture.
            assert np.log(edge[place]) == pytest.approx(sign * extreme.fun, abs=2e-3)


def test_the_density_is_that_of_the_family_with_a_wald_band_round_it() -> None:
    found = fit(data(), "lognormal")
    curve = density_curve(found, AGES, confidence=0.9, kind="wald")
    law = lognorm(found.parameters["sigma"], scale=np.exp(found.parameters["mu"]))
    np.testing.assert_allclose(curve.y, law.pdf(AGES), rtol=1e-10)
    assert curve.lower is not None
    assert curve.upper is not None
    np.testing.assert_allclose(np.sqrt(curve.lower * curve.upper), curve.y, rtol=1e-10)


@pytest.mark.parametrize("name", ["exponential", "gamma"])
def test_a_density_without_a_known_band_has_none(name: str) -> None:
    curve = density_curve(fit(data(), name), AGES, confidence=0.9, kind="likelihood")
    assert curve.lower is None
    assert curve.upper is None
    assert (curve.y > 0).all()


def test_the_cumulative_hazard_keeps_its_digits_in_both_tails() -> None:
    found = fit(data(), "lognormal")
    ages = np.array([1.0, 1600.0, 1e6])
    curve = cumulative_hazard_curve(*probability_curves(found, ages, confidence=0.9, side="two", kind="likelihood"))
    law = lognorm(found.parameters["sigma"], scale=np.exp(found.parameters["mu"]))
    np.testing.assert_allclose(curve.y, -law.logsf(ages), rtol=1e-8)
    assert curve.lower is not None
    assert curve.upper is not None
    assert curve.lower[1] < curve.y[1] < curve.upper[1]


def test_nelson_aalen_steps_up_at_each_failure() -> None:
    # Three units: failures at 1 of 3, at 2 of 2; one running at 1.5 (by hand: 1/3, then 1/3 + 1/1).
    units = LifeData.from_intervals([1.0, 1.5, 2.0], [1.0, np.inf, 2.0])
    steps: Curve = hazard_step_curve(nelson_aalen(units), 0.0, 2.0)
    assert steps.x.tolist() == [0.0, 1.0, 1.0, 2.0, 2.0, 2.0]
    np.testing.assert_allclose(steps.y, [0.0, 0.0, 1 / 3, 1 / 3, 4 / 3, 4 / 3])
