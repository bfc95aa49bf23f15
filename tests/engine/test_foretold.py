"""The foretold number of failures: against the exact predictive distribution of the exponential, and its own rules."""

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.stats import binom, gamma

from reliability_app.engine import LifeData, fit
from reliability_app.engine.errors import DataError, NoEstimate
from reliability_app.engine.foretold import Foretold, Watch, foretell

LIVES = np.array([112.0, 205.0, 330.0, 412.0, 480.0, 533.0, 610.0, 689.0])  # invented


def stopped_at_the_eighth(units=30):
    life = np.append(LIVES, np.full(units - 8, LIVES[-1]))
    return LifeData.right_censored(life, np.arange(units) < 8)


def test_the_exponential_stopped_at_a_failure_has_its_exact_predictive_distribution():
    # Total time on test over the mean is Gamma(r) (Epstein & Sobel 1953), so the number that fails by t more of age is
    # a mixture of binomials over mean = T/G, G ~ Gamma(8).
    data = stopped_at_the_eighth()
    total = LIVES.sum() + 22 * LIVES[-1]
    found = foretell(fit(data, "exponential"), Watch.of([LIVES[-1]], [LIVES[-1] + 300.0], [22]))

    def exact(k):
        return quad(lambda g: binom.pmf(k, 22, -np.expm1(-300.0 * g / total)) * gamma.pdf(g, 8), 0, 60)[0]

    want = np.array([exact(k) for k in range(23)])
    np.testing.assert_allclose(found.probability, want, atol=0.004)  # 8,000 refits: some 3 standard errors
    assert found.expected == pytest.approx(float(want @ np.arange(23)), rel=0.01)


def test_the_exponential_stopped_at_an_age_lies_between_this_failure_and_the_next():
    # The mean of the mixtures over mean = T/G with G ~ Gamma(8) and Gamma(9), whose quantiles are the exact limits of
    # a Poisson mean (Garwood 1936), here with 8 failures in the total time T.
    data = LifeData.right_censored(np.append(LIVES, [700.0] * 22), np.arange(30) < 8)
    total = LIVES.sum() + 22 * 700.0
    found = foretell(fit(data, "exponential"), Watch.of([700.0], [1000.0], [22]))

    def exact(k):
        def density(g):
            return 0.5 * (gamma.pdf(g, 8) + gamma.pdf(g, 9))

        return quad(lambda g: binom.pmf(k, 22, -np.expm1(-300.0 * g / total)) * density(g), 0, 60)[0]

    np.testing.assert_allclose(found.probability, [exact(k) for k in range(23)], atol=0.004)


def test_many_failures_leave_only_the_chance_of_the_count_itself():
    generator = np.random.default_rng(1)
    life = 1000.0 * generator.weibull(2.0, 4000)
    data = LifeData.right_censored(np.minimum(life, 800.0), life <= 800.0)
    found = fit(data, "weibull")
    running = int((life > 800.0).sum())
    told = foretell(found, Watch.of([800.0], [820.0], [running]))
    chance = 1.0 - float(found.conditional_reliability(820.0, given=800.0))
    assert told.expected == pytest.approx(running * chance, rel=0.01)
    spread = np.sqrt(told.probability @ np.arange(running + 1) ** 2 - told.expected**2)
    # The doubt of the parameters still widens it, by less than a third.
    assert 1.0 <= spread / np.sqrt(running * chance * (1 - chance)) < 1.33


def test_units_of_several_ages_are_foretold_like_those_of_one():
    found = fit(stopped_at_the_eighth(), "weibull")
    together = foretell(found, Watch.of([689.0], [900.0], [22]))
    apart = foretell(found, Watch.of([689.0, 689.0 + 1e-9], [900.0, 900.0], [11, 11]))
    assert apart.watch.then.size == 2
    np.testing.assert_allclose(apart.probability, together.probability, atol=0.006)
    assert apart.expected == pytest.approx(together.expected, rel=1e-6)


def test_limits_and_the_mid_p_follow_from_the_probabilities():
    told = Foretold(Watch.of([1.0], [2.0], [3]), np.array([0.4]), np.array([0.1, 0.2, 0.3, 0.4]))
    assert (told.at_most(0.6), told.at_most(0.95)) == (2, 3)
    assert (told.at_least(0.9), told.at_least(0.95)) == (1, 0)
    assert told.share_above(2) == pytest.approx(0.55)
    assert told.mid_p(0) == pytest.approx(0.1)
    assert told.mid_p(2) == pytest.approx(0.9)
    with pytest.raises(DataError, match="4 failures"):
        told.mid_p(4)


def test_the_same_seed_foretells_the_same_and_no_further_age_foretells_nothing():
    found = fit(stopped_at_the_eighth(), "lognormal")
    watch = Watch.of([689.0, 700.0], [900.0, 950.0])
    first, again = foretell(found, watch), foretell(found, watch)
    np.testing.assert_array_equal(first.probability, again.probability)
    still = foretell(found, Watch.of([689.0], [689.0], [22]))
    assert still.expected == 0.0
    assert still.at_most(0.95) == 0


def test_a_unit_cannot_grow_younger_and_nothing_is_foretold_without_a_fit():
    with pytest.raises(DataError, match="second not below the first"):
        Watch.of([10.0], [9.0])
    nothing = fit(LifeData.right_censored([5.0, 6.0], [False, False]), "weibull")
    with pytest.raises(NoEstimate):
        foretell(nothing, Watch.of([6.0], [7.0]))


def test_foretelling_can_be_stopped():
    class Stopped(Exception):
        pass

    def stop():
        raise Stopped

    with pytest.raises(Stopped):
        foretell(fit(stopped_at_the_eighth(), "weibull"), Watch.of([689.0], [900.0]), proceed=stop)
