"""The standard distributions with a shape against mpmath with many digits: both tails, derivatives, quantiles, moments.

The references are the textbook densities and distribution functions of gamma and inverse Gaussian lives, carried to ln
life; derivatives are differences taken by mpmath, so that no formula of the engine is repeated here.
"""

from __future__ import annotations

from collections.abc import Callable

import mpmath
import numpy as np
import pytest

from reliability_app.engine.families.log_gamma import LogGamma
from reliability_app.engine.families.log_inverse_gaussian import LogInverseGaussian, centre_of, spread_of
from reliability_app.engine.families.mills_ratio import mills_ratio, mills_remainder
from reliability_app.engine.families.normal import Normal
from reliability_app.engine.families.smallest_extreme_value import SmallestExtremeValue

Real = mpmath.mpf
Tails = Callable[[Real], tuple[Real, Real]]

# From all but normal to all but a power of the life; 0.15 is where the engine changes its way.
LAMBDAS = (0.02, 0.149, 0.151, 0.4, 1.0, 2.5, 9.0)
SCORES = (-25.0, -9.0, -3.0, -0.4, 0.0, 0.7, 2.5, 6.0)
DIGITS = 60
# Of tail probabilities and hazards; a second derivative may lose what cancels in it (see `close_bend`).
CLOSE = 3e-13


def gamma_tails(lam: float) -> Tails:
    """ln F and ln S of w, where exp(lam w)/lam^2 has a gamma distribution of shape 1/lam^2."""
    k = 1 / Real(lam) ** 2

    def tails(w: Real) -> tuple[Real, Real]:
        x = k * mpmath.exp(Real(lam) * w)
        if w < 0:
            below = mpmath.exp(k * mpmath.log(x) - x - mpmath.loggamma(k + 1)) * mpmath.hyp1f1(1, k + 1, x)
            return mpmath.log(below), mpmath.log1p(-below)
        above = mpmath.gammainc(k, x, mpmath.inf, regularized=True)
        return mpmath.log1p(-above), mpmath.log(above)

    return tails


def inverse_gaussian_tails(q: float) -> Tails:
    """ln F and ln S of u = ln(life/mean) for shape/mean = 1/q^2 (Chhikara & Folks 1989, from memory)."""
    phi = 1 / Real(q) ** 2

    def tails(u: Real) -> tuple[Real, Real]:
        root, t = mpmath.sqrt(phi / mpmath.exp(u)), mpmath.exp(u)
        second = mpmath.exp(2 * phi) * mpmath.ncdf(-root * (t + 1))
        below, above = mpmath.ncdf(root * (t - 1)) + second, mpmath.ncdf(-root * (t - 1)) - second
        return (mpmath.log(below), mpmath.log1p(-below)) if u < 0 else (mpmath.log1p(-above), mpmath.log(above))

    return tails


def judged(standard: LogGamma | LogInverseGaussian, z: float, tails: Tails, place: Callable[[Real], Real]) -> None:
    """Compare ln F and ln S at z, and their derivatives, with differences of the reference."""
    at = np.array([[z]])
    step = Real(10) ** -12
    below, above = zip(*(tails(place(Real(z) + way * step)) for way in (-1, 0, 1)), strict=True)
    for got, wanted in ((standard.log_cdf(at), below), (standard.log_survival(at), above)):
        first = (wanted[2] - wanted[0]) / (2 * step)
        second = (wanted[2] - 2 * wanted[1] + wanted[0]) / step**2
        assert float(got.value[0, 0]) == pytest.approx(float(wanted[1]), rel=CLOSE, abs=1e-250)
        assert float(got.first[0, 0]) == pytest.approx(float(first), rel=CLOSE, abs=1e-250)
        assert float(got.second[0, 0]) == pytest.approx(float(second), rel=CLOSE, abs=close_bend(float(first)))


def close_bend(slope: float) -> float:
    """A hazard h and the slope of ln f nearly cancel far out: what is left is right to the rounding of h^2."""
    return 1e-14 * slope * slope + 1e-250


@pytest.mark.parametrize("z", SCORES)
@pytest.mark.parametrize("lam", LAMBDAS)
def test_tails_of_the_generalized_gamma(lam: float, z: float) -> None:
    with mpmath.workdps(DIGITS):
        tails = gamma_tails(lam)
        judged(LogGamma(np.array([[lam]])), z, tails, lambda w: w)
        judged(LogGamma(np.array([[-lam]])), -z, lambda w: tails(w)[::-1], lambda w: -w)


@pytest.mark.parametrize("z", [-12.0, -3.0, -0.4, 0.0, 1.1, 4.0, 12.0])
@pytest.mark.parametrize("lam", [1e-8, 1e-4, 0.004])
def test_tails_of_the_nearly_lognormal_by_quadrature(lam: float, z: float) -> None:
    at, standard = np.array([[z]]), LogGamma(np.array([[lam]]))
    with mpmath.workdps(40):
        k = 1 / Real(lam) ** 2
        norm = mpmath.log(lam) + k * mpmath.log(k) - mpmath.loggamma(k)
        side = -1 if z < 0 else 1
        tail = mpmath.quad(
            lambda s: mpmath.exp(norm + k * (lam * (z + side * s) - mpmath.exp(lam * (z + side * s)))),
            [0, 0.1, 0.5, 1, 2, 4, 8, 16],
        )
        wanted, other = float(mpmath.log(tail)), float(mpmath.log1p(-tail))
    small, rest = (standard.log_cdf, standard.log_survival)[::-side]
    assert float(small(at).value[0, 0]) == pytest.approx(wanted, rel=CLOSE)
    assert float(rest(at).value[0, 0]) == pytest.approx(other, rel=CLOSE)
    density = standard.log_density(at).value
    for function, way in ((standard.log_cdf, 1), (standard.log_survival, -1)):
        tail_at = function(at)
        assert tail_at.first == pytest.approx(way * np.exp(density - tail_at.value), rel=1e-11)


@pytest.mark.parametrize("z", [-30.0, -9.0, -2.0, 0.3, 5.0, 30.0])
def test_the_generalized_gamma_runs_into_the_lognormal_at_lambda_0(z: float) -> None:
    """The distance shrinks like lambda, on both sides of 0."""
    at, normal = np.array([[z]]), Normal()
    for ours, theirs in (
        (LogGamma(np.zeros((1, 1))).log_cdf(at), normal.log_cdf(at)),
        (LogGamma(np.zeros((1, 1))).log_survival(at), normal.log_survival(at)),
        (LogGamma(np.zeros((1, 1))).log_density(at), normal.log_density(at)),
    ):
        for mine, wanted in zip(ours, theirs, strict=True):
            assert mine == pytest.approx(wanted, rel=1e-13)
    for lam in (1e-9, 1e-6, 1e-3):
        up, down = (LogGamma(np.array([[way * lam]])).log_survival(at).value for way in (1, -1))
        middle = LogGamma(np.zeros((1, 1))).log_survival(at).value
        assert up + down - 2 * middle == pytest.approx(0, abs=lam**2 * (1 + abs(z)) ** 6 + 1e-12 * abs(middle[0, 0]))


@pytest.mark.parametrize("z", [-40.0, -3.0, 0.1, 2.0, 6.0])
def test_the_generalized_gamma_is_the_extreme_value_distribution_at_lambda_1(z: float) -> None:
    at, extreme, ours = np.array([[z]]), SmallestExtremeValue(), LogGamma(np.ones((1, 1)))
    for mine, wanted in (
        (ours.log_cdf(at), extreme.log_cdf(at)),
        (ours.log_survival(at), extreme.log_survival(at)),
        (ours.log_density(at), extreme.log_density(at)),
    ):
        for got, expected in zip(mine, wanted, strict=True):
            assert got == pytest.approx(expected, rel=1e-11)


# Within the range of doubles.
INVERSE_GAUSSIAN = [
    (q, u)
    for q in (0.08, 0.3, 1.0, 4.0, 60.0, 3000.0)
    for u in (-11.0, -4.0, -1.0, -0.02, 0.0, 0.5, 2.0, 6.0)
    if (2 * np.sinh(u / 2) / q) ** 2 < 1200
]


@pytest.mark.parametrize(("q", "u"), INVERSE_GAUSSIAN)
def test_tails_of_the_inverse_gaussian(q: float, u: float) -> None:
    spread, centre = float(spread_of(np.array(q))), float(centre_of(np.array(q)))
    z = (u + centre) / spread
    # Both terms of the textbook formula are of the size exp(2/q^2) phi.
    with mpmath.workdps(DIGITS + int(2 / q**2)):
        judged(
            LogInverseGaussian(np.array([[q]])),
            z,
            inverse_gaussian_tails(q),
            lambda at: Real(spread) * at - Real(centre),
        )


@pytest.mark.parametrize("q", [0.01, 0.7, 5.0, 400.0])
def test_density_of_the_inverse_gaussian_is_the_slope_of_its_distribution_function(q: float) -> None:
    standard, z = LogInverseGaussian(np.array([[q]])), np.array([[-2.0, -0.3, 0.0, 0.8, 2.5]])
    density, survival = standard.log_density(z), standard.log_survival(z)
    assert np.exp(density.value) == pytest.approx(-survival.first * np.exp(survival.value), rel=1e-12)
    step = 1e-4
    up, down = standard.log_density(z + step), standard.log_density(z - step)
    assert density.first == pytest.approx((up.value - down.value) / (2 * step), abs=1e-6)
    assert density.second == pytest.approx((up.first - down.first) / (2 * step), abs=1e-6)


FRACTIONS = np.array([[1e-200, 1e-12, 1e-4, 0.1, 0.5, 0.9, 1 - 1e-12]])


@pytest.mark.parametrize("shape", [*LAMBDAS, 100.0])
@pytest.mark.parametrize("kind", ["gamma", "mirrored gamma", "inverse Gaussian"])
def test_quantiles_undo_the_tails(kind: str, shape: float) -> None:
    if kind == "inverse Gaussian":
        standard: LogGamma | LogInverseGaussian = LogInverseGaussian(np.array([[shape]]))
    else:
        standard = LogGamma(np.array([[shape if kind == "gamma" else -shape]]))
    few = FRACTIONS < 0.5
    for z, own, other in (
        (standard.quantile(FRACTIONS), standard.log_cdf, standard.log_survival),
        (standard.survival_quantile(FRACTIONS), standard.log_survival, standard.log_cdf),
    ):
        assert own(z).value[few] == pytest.approx(np.log(FRACTIONS[few]), rel=1e-12)
        assert other(z).value[~few] == pytest.approx(np.log1p(-FRACTIONS[~few]), rel=1e-12)


@pytest.mark.parametrize("power", [0.05, 0.4, 1.0, 3.0])
@pytest.mark.parametrize("lam", [-2.0, -0.3, -1e-5, 0.0, 1e-7, 0.2, 1.0, 6.0])
def test_moments_of_the_generalized_gamma(lam: float, power: float) -> None:
    got = float(LogGamma(np.array([lam])).log_moment(np.array([power]))[0])
    with mpmath.workdps(40):
        if lam == 0:
            wanted = Real(power) ** 2 / 2
        else:
            k, s = 1 / Real(lam) ** 2, Real(power) / Real(lam)
            wanted = mpmath.loggamma(k + s) - mpmath.loggamma(k) - s * mpmath.log(k) if k + s > 0 else mpmath.inf
    assert got == pytest.approx(float(wanted), rel=1e-12)


@pytest.mark.parametrize("s", [-20.0, -1.0, 0.0, 2.0, 4.999, 5.001, 30.0, 1e6])
def test_mills_ratio_and_what_it_leaves(s: float) -> None:
    with mpmath.workdps(60):
        ratio = mpmath.ncdf(-Real(s)) / mpmath.npdf(Real(s))
        # Below 0 the ratio grows like exp(s^2/2), which carries the rounding of s along.
        assert float(mills_ratio(np.array(s))) == pytest.approx(float(ratio), rel=1e-14 + 1e-16 * min(s, 0) ** 2)
        assert float(mills_remainder(np.array(s))) == pytest.approx(
            float(1 - s * ratio), rel=1e-14 + 1e-16 * min(s, 0) ** 2
        )


def test_shapes_of_several_rows_are_those_of_each_row_alone() -> None:
    shapes, z = np.array([[-1.3], [0.0], [0.05], [0.8], [7.0]]), np.linspace(-3, 2, 4)[None, :] * np.ones((5, 1))
    together = LogGamma(shapes)
    for row in range(5):
        alone = LogGamma(shapes[row : row + 1])
        assert np.array_equal(together.log_survival(z).value[row], alone.log_survival(z[row : row + 1]).value[0])
        assert np.array_equal(together.log_cdf(z).second[row], alone.log_cdf(z[row : row + 1]).second[0])
        assert np.array_equal(together.rows(np.array([row])).shape, alone.shape)
