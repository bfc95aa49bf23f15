"""Anderson-Darling and plot correlation agree with independent computations, and their p-values mean what they say."""

from __future__ import annotations

import warnings

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import LifeData, fit
from reliability_app.engine.batch_survival import batch_steps
from reliability_app.engine.families import family
from reliability_app.engine.goodness import Goodness, anderson_darling, goodness_of, plot_correlation
from reliability_app.engine.refitting import samples_like
from reliability_app.engine.sample import sample_of
from tests.engine.naive_goodness import naive_anderson_darling, naive_correlation
from tests.reference.published_data import nist_8413
from tests.reference.reference_data import published

STANDARD = {"lognormal": stats.norm, "weibull": stats.gumbel_l, "exponential": stats.gumbel_l}

# Invented lives; the running units leave where the test stops, at ages of their own, or in between with quantities.
LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711])
COMPLETE = LifeData.right_censored(LIVES, np.ones(10))
STOPPED = LifeData.right_censored(np.minimum(LIVES, 1200.0), LIVES <= 1200.0)
SIXTH = LifeData.right_censored(np.minimum(LIVES, 1010.0), LIVES <= 1010.0)
STAGGERED = LifeData.right_censored(LIVES, [1, 0, 1, 1, 0, 1, 0, 1, 1, 0])
LAST_FAILED = LifeData.right_censored(LIVES, [1, 0, 1, 1, 0, 1, 0, 1, 0, 1])
TIED = LifeData.right_censored([100, 100, 150, 150, 200, 260], [1, 0, 1, 1, 0, 1], quantity=[2, 3, 1, 1, 4, 2])
LATE = LifeData.right_censored(LIVES, [1, 0, 1, 1, 0, 1, 0, 1, 1, 0], entered=[0, 0, 300, 700, 700, 0, 850, 0, 1000, 0])
SHAPES = {
    "complete": COMPLETE,
    "stopped": STOPPED,
    "sixth failure": SIXTH,
    "staggered": STAGGERED,
    "last failed": LAST_FAILED,
    "tied": TIED,
    "late entry": LATE,
}


def statistic_at(data: LifeData, name: str, mu: float, sigma: float) -> float:
    """Anderson-Darling at parameters of one's own choice."""
    sample = sample_of(data)
    a, b = (sample.shift - mu) / sigma, sample.spread / sigma
    steps = batch_steps(sample)
    return float(anderson_darling(steps, family(name).standard, np.array([a]), np.array([b]))[0])


def scipys_statistic(logs: np.ndarray, distribution: str) -> float:
    with warnings.catch_warnings():  # newer versions warn that their p-values, which are not used here, will change
        warnings.simplefilter("ignore", FutureWarning)
        return float(stats.anderson(logs, distribution).statistic)


def test_complete_normal_data_give_the_published_statistic() -> None:
    item = published("ad-normal-nortest")
    values = np.array(item["data"]["values"], dtype=float)
    lives = LifeData.right_censored(np.exp(values), np.ones(values.size))
    statistic = statistic_at(lives, "lognormal", values.mean(), values.std(ddof=1))
    assert statistic == pytest.approx(item["expected"]["A2"], abs=1e-6)


def test_complete_data_give_the_textbook_sum() -> None:
    # Anderson & Darling (1954): -n - sum (2i - 1)(ln u_i + ln(1 - u_(n+1-i)))/n, from memory; scipy agrees below.
    found = fit(COMPLETE, "weibull")
    u, i = np.asarray(found.failure_probability(LIVES)), np.arange(1, 11)
    textbook = -10 - np.sum((2 * i - 1) * (np.log(u) + np.log(1 - u[::-1]))) / 10
    assert goodness_of(found, repeats=9).anderson_darling.statistic == pytest.approx(textbook, rel=1e-12)


def test_complete_data_give_the_statistic_of_scipy() -> None:
    logs = np.log(LIVES)
    theirs = scipys_statistic(logs, "norm")
    assert statistic_at(COMPLETE, "lognormal", logs.mean(), logs.std(ddof=1)) == pytest.approx(theirs, rel=1e-9)
    theirs = scipys_statistic(logs, "gumbel_l")
    ours = goodness_of(fit(COMPLETE, "weibull"), repeats=9).anderson_darling.statistic
    assert ours == pytest.approx(theirs, rel=1e-6)


def test_a_fixed_number_of_failures_gives_the_published_sum() -> None:
    # Pettitt & Stephens (1976) for the r smallest of n, as in D'Agostino & Stephens (1986), sec. 4.7; from memory.
    found = fit(SIXTH, "lognormal")
    n, r, i = 10, 6, np.arange(1, 7)
    u = np.asarray(found.failure_probability(LIVES[:6]))
    body = -np.sum((2 * i - 1) * (np.log(u) - np.log(1 - u))) / n - 2 * np.sum(np.log(1 - u))
    end = -((r - n) ** 2 * np.log(1 - u[-1]) - r**2 * np.log(u[-1]) + n**2 * u[-1]) / n
    assert goodness_of(found, repeats=9).anderson_darling.statistic == pytest.approx(body + end, rel=1e-12)


@pytest.mark.parametrize("name", STANDARD)
@pytest.mark.parametrize("shape", SHAPES)
def test_censored_data_give_the_integral_by_quadrature(name: str, shape: str) -> None:
    data = SHAPES[shape]
    found = fit(data, name)
    mu, sigma = found.estimate.mu, found.estimate.sigma
    theirs = naive_anderson_darling(data, lambda age: float(STANDARD[name].cdf((np.log(age) - mu) / sigma)))
    assert goodness_of(found, repeats=9).anderson_darling.statistic == pytest.approx(theirs, rel=1e-8)


@pytest.mark.parametrize("name", STANDARD)
@pytest.mark.parametrize("shape", SHAPES)
def test_the_correlation_is_that_of_the_points_on_the_paper(name: str, shape: str) -> None:
    found = fit(SHAPES[shape], name)
    theirs = naive_correlation(SHAPES[shape], lambda p: float(STANDARD[name].ppf(p)))
    assert goodness_of(found, repeats=9).correlation.statistic == pytest.approx(theirs, rel=1e-12)


def test_points_on_a_line_have_correlation_one() -> None:
    shares = (np.arange(1, 9) - 0.5) / 8
    straight = LifeData.right_censored(np.exp(5 + 0.3 * stats.norm.ppf(shares)), np.ones(8))
    assert plot_correlation(batch_steps(sample_of(straight)), family("lognormal").standard)[0] == pytest.approx(1.0)


def test_every_sample_of_a_batch_gets_what_it_gets_alone() -> None:
    found = fit(STAGGERED, "weibull")
    drawn = next(iter(samples_like(found.estimate, STAGGERED, repeats=7, seed=4)))
    top, steps = drawn.fitted_by(found.family), batch_steps(drawn.sample)
    together = anderson_darling(steps, found.family.standard, top.a, top.b)
    for row in range(drawn.failures.size):
        part = drawn.sample.rows(np.array([row]))
        failed, running = part.failed, part.running
        life = np.exp(np.concatenate([failed.y[0], running.y[0]]))
        there = np.concatenate([failed.weight[0], running.weight[0]]) > 0
        data = LifeData.right_censored(life[there], (np.arange(life.size) < failed.size)[there])
        alone = goodness_of(fit(data, "weibull"), repeats=9).anderson_darling.statistic
        assert together[row] == pytest.approx(alone, rel=1e-6)


def simulated_p_values(name: str, *, share: float, tests: int) -> np.ndarray:
    """P-values of both statistics for samples of 30 of the right family, stopped where a share has failed."""
    generator, p_values = np.random.default_rng(20), []
    end = np.exp(0.5 * STANDARD[name].ppf(share))
    for _ in range(tests):
        lives = np.exp(0.5 * STANDARD[name].rvs(size=30, random_state=generator))
        data = LifeData.right_censored(np.minimum(lives, end), lives <= end)
        if data.failed_count >= 3:
            goodness = goodness_of(fit(data, name), repeats=199)
            p_values.append((goodness.anderson_darling.p_value, goodness.correlation.p_value))
    return np.array(p_values).T


class TestPValues:
    # D'Agostino & Stephens (1986), tables 4.7 and 4.17, both parameters estimated, upper 5 %, from memory. The first
    # takes the standard deviation with n - 1, by which a and b are smaller than the likelihood's.
    @pytest.mark.parametrize(
        ("name", "modifier", "point", "stretch"),
        [
            ("lognormal", 1 + 0.75 / 20 + 2.25 / 400, 0.752, np.sqrt(19 / 20)),
            ("weibull", 1 + 0.2 / np.sqrt(20), 0.757, 1.0),
        ],
    )
    def test_the_reference_of_complete_data_has_the_tabled_upper_point(
        self, name: str, modifier: float, point: float, stretch: float
    ) -> None:
        data = LifeData.right_censored(np.linspace(1.0, 3.0, 20), np.ones(20))
        found, statistics = fit(data, name), []
        for drawn in samples_like(found.estimate, data, repeats=20_000, seed=1):
            top = drawn.fitted_by(found.family)
            steps = batch_steps(drawn.sample)
            statistics.append(anderson_darling(steps, found.family.standard, stretch * top.a, stretch * top.b))
        # The 95 % point of 20,000 has a standard error of 1 %, and the table's own modifiers are approximations.
        assert modifier * np.quantile(np.concatenate(statistics), 0.95) == pytest.approx(point, rel=0.03)

    @pytest.mark.parametrize("name", ["weibull", "lognormal"])
    def test_they_are_uniform_when_the_family_is_right(self, name: str) -> None:
        for column in simulated_p_values(name, share=1.0, tests=250):
            # The p-value of a right method falls below 0.001 once in a thousand such tests.
            assert stats.kstest(column, "uniform").pvalue > 0.001

    @pytest.mark.parametrize("name", ["weibull", "lognormal"])
    @pytest.mark.parametrize("share", [0.6, 0.2])
    def test_they_promise_little_less_than_they_say_when_the_test_stopped(self, name: str, share: float) -> None:
        for column in simulated_p_values(name, share=share, tests=400):
            # Never too small (one-sided, as above). Own simulation of 1,500 sets a cell saw distribution functions up
            # to 0.06 below the diagonal in between; to that comes the 0.1 % point of Kolmogorov's one-sided distance.
            assert stats.kstest(column, "uniform", alternative="greater").pvalue > 0.001
            assert stats.kstest(column, "uniform", alternative="less").statistic < 0.06 + 1.86 / np.sqrt(column.size)

    def test_a_fixed_end_of_test_keeps_the_number_of_failures(self) -> None:
        for name in ("weibull", "lognormal"):
            found = fit(STOPPED, name)
            for drawn in samples_like(found.estimate, STOPPED, repeats=200, seed=2):
                assert (drawn.failures == STOPPED.failed_count).all()
                # The scores of the failures are a sample of the fit's, cut off at the end of the test.
                end = float(found.score(1200.0)[0])
                u = STANDARD[name].cdf(drawn.sample.failed.y) / STANDARD[name].cdf(end)
                assert stats.kstest(u.ravel(), "uniform").pvalue > 0.001

    def test_they_promise_no_less_than_they_say_when_units_leave_at_ages_of_their_own(self) -> None:
        generator = np.random.default_rng(21)
        below = np.zeros(2)
        for _ in range(250):
            lives, ends = generator.weibull(2.0, 30), generator.uniform(0.0, 3.0, 30)
            goodness = goodness_of(
                fit(LifeData.right_censored(np.minimum(lives, ends), lives <= ends), "weibull"), repeats=199
            )
            below += [goodness.anderson_darling.p_value <= 0.1, goodness.correlation.p_value <= 0.1]
        # Ten per cent expected; three standard errors are six.
        assert (below / 250 <= 0.1 + 3 * np.sqrt(0.09 / 250)).all()
        assert (below / 250 >= 0.02).all()

    def test_a_gross_misfit_is_found(self) -> None:
        generator = np.random.default_rng(22)
        early = generator.random(50) < 0.3
        lives = np.where(early, 0.05, 1.0) * generator.weibull(4.0, 50)
        ends = generator.uniform(0.5, 3.0, 50)
        for data in (
            LifeData.right_censored(lives, np.ones(50)),
            LifeData.right_censored(np.minimum(lives, ends), lives <= ends),
        ):
            goodness = goodness_of(fit(data, "weibull"))
            assert goodness.anderson_darling.p_value < 0.01
            assert goodness.correlation.p_value < 0.01

    def test_a_constant_hazard_is_refused_where_the_units_wear_out(self) -> None:
        lives = np.random.default_rng(23).weibull(4.0, 30)
        data = LifeData.right_censored(lives, np.ones(30))
        assert goodness_of(fit(data, "exponential")).anderson_darling.p_value < 0.01
        assert goodness_of(fit(data, "weibull")).anderson_darling.p_value > 0.05

    def test_the_seed_decides_them(self) -> None:
        found = fit(STAGGERED, "weibull")
        assert goodness_of(found, seed=5) == goodness_of(found, seed=5)
        assert goodness_of(found, seed=5) != goodness_of(found, seed=6)


def test_unit_of_age_and_splitting_of_rows_change_nothing() -> None:
    here = goodness_of(fit(nist_8413().life_data(), "weibull"))
    units = nist_8413()
    single = LifeData.right_censored(
        np.repeat(units.lower, units.quantity.astype(int)) * 60,
        np.repeat(np.isfinite(units.upper), units.quantity.astype(int)),
    )
    there = goodness_of(fit(single, "weibull"))
    assert (here.anderson_darling.p_value, here.correlation.p_value) == (
        there.anderson_darling.p_value,
        there.correlation.p_value,
    )
    assert here.anderson_darling.statistic == pytest.approx(there.anderson_darling.statistic, rel=1e-9)


def test_work_that_is_no_longer_wanted_can_be_ended() -> None:
    class Unwanted(Exception):
        pass

    def proceed() -> None:
        raise Unwanted

    with pytest.raises(Unwanted):
        goodness_of(fit(STAGGERED, "weibull"), proceed=proceed)


class TestWhatIsMissing:
    def test_units_found_failed_are_named(self) -> None:
        data = LifeData.from_intervals([100, 200, 150, 300], [200, 200, 150, np.inf])
        goodness = goodness_of(fit(data, "weibull"))
        assert goodness == Goodness(None, None, 0, goodness.reason)
        assert "between two ages" in goodness.reason

    def test_two_failures_say_nothing_about_the_family(self) -> None:
        data = LifeData.right_censored([100, 200, 300, 300], [1, 1, 0, 0])
        goodness = goodness_of(fit(data, "weibull"))
        assert goodness.correlation is None
        assert goodness.anderson_darling.p_value is None
        assert "three failures" in goodness.reason
