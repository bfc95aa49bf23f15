"""Conditional reliability, mean residual life, mean, mode and age at a hazard: values of every family.

Judges: closed forms of textbooks (from memory), mpmath and scipy's quadrature of scipy.stats' survival functions. The
lives are invented.
"""

from __future__ import annotations

import itertools
import math
from functools import cache

import mpmath as mp
import numpy as np
import pytest
from scipy import integrate, special, stats

from reliability_app.engine import Fit, LifeData, fit
from reliability_app.engine.errors import DataError, NoEstimate
from reliability_app.engine.families import LOCATION_SCALE_NAMES
from tests.engine.test_family_contract import SCIPY

LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711, 640, 2200, 980])
DATA = LifeData.right_censored(np.minimum(LIVES, 1600), LIVES <= 1600)
SHARES = (np.arange(20) + 0.5) / 20
# Lives at even shares of distributions in which the fits that need more units have a maximum.
EVEN = {
    "generalized_gamma": 900 * stats.gengamma.ppf(SHARES, 2.0, 1.5),
    "weibull": 400 + 500 * stats.weibull_min.ppf(SHARES, 2.0),
    "lognormal": 300 + 500 * stats.lognorm.ppf(SHARES, 0.5),
    "loglogistic": 300 + 500 * stats.fisk.ppf(SHARES, 3.0),
}
SHAPED = ("gamma", "inverse_gaussian", "birnbaum_saunders", "generalized_gamma")
CASES = [(name, False) for name in (*LOCATION_SCALE_NAMES, *SHAPED)]
CASES += [(name, True) for name in ("weibull", "lognormal", "loglogistic")]


@cache
def fitted(name: str, threshold: bool) -> Fit:
    even = threshold or name == "generalized_gamma"
    data = LifeData.right_censored(EVEN[name], np.ones(20)) if even else DATA
    f = fit(data, name, threshold=threshold)
    assert f.converged
    return f


def quadrature(f: Fit, age: float) -> float:
    """The mean residual life from the fit's own reliability, which the contract suite holds against scipy."""
    ends = [age, *(age + 10.0**power for power in np.linspace(0, 13, 40))]
    parts = [integrate.quad(f.reliability, low, high, epsrel=1e-11)[0] for low, high in itertools.pairwise(ends)]
    return sum(parts) / float(f.reliability(age))


@pytest.mark.parametrize(("name", "threshold"), CASES)
def test_the_mean_residual_life_is_the_integral_of_the_reliability(name: str, threshold: bool) -> None:
    f = fitted(name, threshold)
    for age in (5.0, 800.0):
        assert f.mean_residual_life(age) == pytest.approx(quadrature(f, age), rel=1e-7)


@pytest.mark.parametrize(("name", "threshold"), CASES)
def test_the_mean_life_is_the_residual_life_at_the_start(name: str, threshold: bool) -> None:
    f = fitted(name, threshold)
    if threshold or f.family.life_scale.origin == 0.0:
        assert f.mean_residual_life(0.0) == pytest.approx(f.mean_life(), rel=1e-9)


@pytest.mark.parametrize(("name", "threshold"), CASES)
def test_the_mode_is_where_the_density_is_highest(name: str, threshold: bool) -> None:
    f = fitted(name, threshold)
    mode = f.mode()
    if name == "exponential":
        assert mode == 0.0
        return
    near = mode * (1.0 + np.array([-1e-3, -1e-5, 1e-5, 1e-3]))
    assert (f.density(near) < f.density(mode)).all()
    assert f.density(mode) >= np.max(f.density(np.linspace(0.3 * mode, 3 * mode, 500)))


@pytest.mark.parametrize(("name", "threshold"), CASES)
def test_the_hazard_reaches_the_rate_at_the_age_and_not_before(name: str, threshold: bool) -> None:
    f = fitted(name, threshold)
    if name == "exponential":
        constant = 1.0 / f.mean_life()
        assert f.age_at_hazard([0.9 * constant, 1.1 * constant]) == pytest.approx([0.0, math.inf])
        return
    rate = float(f.hazard(700.0))
    age = float(f.age_at_hazard(rate))
    assert age <= 700.0 * (1 + 1e-9)
    assert f.hazard(age) == pytest.approx(rate, rel=1e-8)
    assert (f.hazard(np.linspace(1.0, 0.999 * age, 300)) < rate).all()


@pytest.mark.parametrize("name", ["lognormal", "loglogistic", "frechet", "birnbaum_saunders"])
def test_a_hazard_that_rises_and_falls_never_reaches_more_than_its_peak(name: str) -> None:
    f = fitted(name, False)
    peak = float(np.max(f.hazard(np.linspace(10, 20_000, 40_000))))
    assert f.age_at_hazard(1.01 * peak) == math.inf
    assert f.age_at_hazard(0.999 * peak) < 20_000


def test_a_hazard_that_falls_from_infinity_has_reached_any_rate_at_the_start() -> None:
    falling = fit(LifeData.right_censored([1.0, 9.0, 80.0, 700.0, 9000.0], np.ones(5)), "weibull")
    assert falling.parameters["shape"] < 1
    assert falling.age_at_hazard(1e-9) == 0.0
    assert falling.mode() == 0.0


@pytest.mark.parametrize(("name", "threshold"), CASES)
def test_conditional_reliability_is_a_quotient_even_of_ages_close_together(name: str, threshold: bool) -> None:
    f = fitted(name, threshold)
    quotient = f.reliability(1500.0) / f.reliability(900.0)
    assert f.conditional_reliability(1500.0, given=900.0) == pytest.approx(quotient, rel=1e-9)
    lost = 1.0 - f.conditional_reliability(900.0 + 1e-6, given=900.0)
    assert lost == pytest.approx(1e-6 * f.hazard(900.0), rel=1e-3)
    assert f.conditional_reliability(900.0, given=900.0) == 1.0
    # Far beyond the last failure.
    assert 0.0 <= f.conditional_reliability(6000.0, given=5000.0) < 1.0


@pytest.mark.parametrize("name", ["weibull", "lognormal", "gamma", "inverse_gaussian", "birnbaum_saunders"])
def test_a_unit_that_has_not_begun_has_the_reliability_itself(name: str) -> None:
    f = fitted(name, False)
    assert f.conditional_reliability([500.0, 900.0], given=0.0) == pytest.approx(f.reliability([500.0, 900.0]))


def test_closed_forms() -> None:
    exponential, weibull, lognormal = (fitted(name, False) for name in ("exponential", "weibull", "lognormal"))
    mean = exponential.parameters["mean"]
    assert exponential.mean_residual_life([0.0, 10.0, 1e5]) == pytest.approx([mean] * 3, rel=1e-10)
    beta, eta = weibull.parameters["shape"], weibull.parameters["scale"]
    assert weibull.mode() == pytest.approx(eta * (1 - 1 / beta) ** (1 / beta), rel=1e-10)
    assert weibull.mean_residual_life(0.0) == pytest.approx(eta * special.gamma(1 + 1 / beta), rel=1e-10)
    wanted = eta * (beta * 0.003**-1 / eta) ** (1 / (1 - beta))
    assert weibull.age_at_hazard(0.003) == pytest.approx(wanted, rel=1e-10)
    mu, sigma = lognormal.parameters["mu"], lognormal.parameters["sigma"]
    assert lognormal.mode() == pytest.approx(math.exp(mu - sigma**2), rel=1e-10)
    assert lognormal.mean_residual_life(0.0) == pytest.approx(math.exp(mu + sigma**2 / 2), rel=1e-10)


@pytest.mark.parametrize("age", [1e-3, 300.0, 6000.0, 1e5])
def test_residual_lives_far_beyond_the_units(age: float) -> None:
    """Weibull by the incomplete gamma function, lognormal by partial expectation, in mpmath with 60 digits."""
    weibull, lognormal = fitted("weibull", False), fitted("lognormal", False)
    with mp.workdps(60):
        beta, eta = mp.mpf(weibull.parameters["shape"]), mp.mpf(weibull.parameters["scale"])
        x = (age / eta) ** beta
        wanted = eta / beta * mp.gammainc(1 / beta, x) * mp.exp(x)
        assert weibull.mean_residual_life(age) == pytest.approx(float(wanted), rel=1e-9)
        mu, sigma = mp.mpf(lognormal.parameters["mu"]), mp.mpf(lognormal.parameters["sigma"])
        z = (mp.log(age) - mu) / sigma
        beyond = mp.exp(mu + sigma**2 / 2) * mp.erfc((z - sigma) / mp.sqrt(2)) / mp.erfc(z / mp.sqrt(2))
        assert lognormal.mean_residual_life(age) == pytest.approx(float(beyond - age), rel=1e-9)


@pytest.mark.parametrize("name", ["loglogistic", "frechet"])
def test_a_tail_too_heavy_for_a_mean_has_none(name: str) -> None:
    f = fit(LifeData.right_censored([1.0, 9.0, 80.0, 700.0, 9000.0], np.ones(5)), name)
    assert f.parameters["shape"] < 1
    assert f.mean_life() == math.inf
    assert f.mean_residual_life([0.0, 50.0]) == pytest.approx([math.inf, math.inf])


def test_families_agree_with_scipy_in_the_mean_residual_life() -> None:
    """By scipy.stats' own expectation, on the conditional distribution."""
    for name in ("weibull", "gamma", "normal", "logistic"):
        f = fitted(name, False)
        lives = SCIPY[name]({key: float(value) for key, value in f.parameters.items()})
        beyond = lives.expect(lambda t: t, lb=1000.0, conditional=True)
        assert f.mean_residual_life(1000.0) == pytest.approx(beyond - 1000.0, rel=1e-6)


def test_what_cannot_be_asked_is_said_in_words() -> None:
    f = fitted("weibull", False)
    with pytest.raises(DataError, match="age of 0 or more"):
        f.mean_residual_life(-1.0)
    with pytest.raises(DataError, match="positive number"):
        f.age_at_hazard(0.0)
    with pytest.raises(DataError, match="at least the age reached"):
        f.conditional_reliability(5.0, given=6.0)
    none = fit(LifeData.right_censored([5.0, 6.0], [0, 0]), "weibull")
    for ask in (none.mode, none.mode_bounds, none.mean_life_bounds):
        with pytest.raises(NoEstimate):
            ask()
