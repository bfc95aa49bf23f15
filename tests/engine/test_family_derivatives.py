"""Each family's standard density, its integrals and derivatives against mpmath with 60 digits, in both tails.

The derivatives of the reference are differences taken by mpmath in extended precision, not formulas, so a
wrong formula in the engine cannot be repeated here.
"""

from __future__ import annotations

from collections.abc import Callable

import mpmath
import numpy as np
import pytest
from numpy.typing import NDArray

from reliability_app.engine.families import LOCATION_SCALE_NAMES, family
from reliability_app.engine.families.interval import log_interval

DIGITS = 60
TINY = 1e-300  # a double cannot hold less; the reference may
Function = Callable[[mpmath.mpf], mpmath.mpf]


def half_erfc(z: mpmath.mpf) -> mpmath.mpf:
    return mpmath.erfc(z / mpmath.sqrt(2)) / 2


def normal_log_cdf(z: mpmath.mpf) -> mpmath.mpf:
    return mpmath.log(half_erfc(-z)) if z < 0 else mpmath.log1p(-half_erfc(z))


class Normal:
    """Standard normal."""

    density = staticmethod(mpmath.npdf)
    survival = staticmethod(half_erfc)

    @staticmethod
    def cdf(z: mpmath.mpf) -> mpmath.mpf:
        return half_erfc(-z)

    @staticmethod
    def density_slope(z: mpmath.mpf) -> mpmath.mpf:
        return -z * mpmath.npdf(z)

    @staticmethod
    def log_density(z: mpmath.mpf) -> mpmath.mpf:
        return -z * z / 2 - mpmath.log(2 * mpmath.pi) / 2

    log_cdf = staticmethod(normal_log_cdf)

    @staticmethod
    def log_survival(z: mpmath.mpf) -> mpmath.mpf:
        return normal_log_cdf(-z)

    @staticmethod
    def quantile(p: mpmath.mpf) -> mpmath.mpf:
        if p > 0.5:
            return -Normal.quantile(1 - p)
        start = -mpmath.sqrt(-2 * mpmath.log(2 * p)) if p < 0.5 else mpmath.mpf(0)
        return mpmath.findroot(lambda z: mpmath.log(half_erfc(-z)) - mpmath.log(p), start)


class SmallestExtremeValue:
    """Standard smallest extreme value: ln of a unit exponential life."""

    @staticmethod
    def density(z: mpmath.mpf) -> mpmath.mpf:
        return mpmath.exp(z - mpmath.exp(z))

    @staticmethod
    def density_slope(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.expm1(z) * mpmath.exp(z - mpmath.exp(z))

    @staticmethod
    def survival(z: mpmath.mpf) -> mpmath.mpf:
        return mpmath.exp(-mpmath.exp(z))

    @staticmethod
    def cdf(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.expm1(-mpmath.exp(z))

    @staticmethod
    def log_density(z: mpmath.mpf) -> mpmath.mpf:
        return z - mpmath.exp(z)

    @staticmethod
    def log_survival(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.exp(z)

    @staticmethod
    def log_cdf(z: mpmath.mpf) -> mpmath.mpf:
        w = mpmath.exp(z)
        return mpmath.log(-mpmath.expm1(-w)) if w < 1 else mpmath.log1p(-mpmath.exp(-w))

    @staticmethod
    def quantile(p: mpmath.mpf) -> mpmath.mpf:
        return mpmath.log(-mpmath.log1p(-p))


class LargestExtremeValue:
    """Standard largest extreme value: -ln of a unit exponential life."""

    @staticmethod
    def density(z: mpmath.mpf) -> mpmath.mpf:
        return mpmath.exp(-z - mpmath.exp(-z))

    @staticmethod
    def density_slope(z: mpmath.mpf) -> mpmath.mpf:
        return mpmath.expm1(-z) * mpmath.exp(-z - mpmath.exp(-z))

    @staticmethod
    def survival(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.expm1(-mpmath.exp(-z))

    @staticmethod
    def cdf(z: mpmath.mpf) -> mpmath.mpf:
        return mpmath.exp(-mpmath.exp(-z))

    @staticmethod
    def log_density(z: mpmath.mpf) -> mpmath.mpf:
        return -z - mpmath.exp(-z)

    @staticmethod
    def log_survival(z: mpmath.mpf) -> mpmath.mpf:
        w = mpmath.exp(-z)
        return mpmath.log(-mpmath.expm1(-w)) if w < 1 else mpmath.log1p(-mpmath.exp(-w))

    @staticmethod
    def log_cdf(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.exp(-z)

    @staticmethod
    def quantile(p: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.log(-mpmath.log(p))


class Logistic:
    """Standard logistic: the log odds of a uniform number."""

    @staticmethod
    def density(z: mpmath.mpf) -> mpmath.mpf:
        return mpmath.sech(z / 2) ** 2 / 4

    @staticmethod
    def density_slope(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.tanh(z / 2) * mpmath.sech(z / 2) ** 2 / 4

    @staticmethod
    def survival(z: mpmath.mpf) -> mpmath.mpf:
        return 1 / (1 + mpmath.exp(z))

    @staticmethod
    def cdf(z: mpmath.mpf) -> mpmath.mpf:
        return 1 / (1 + mpmath.exp(-z))

    @staticmethod
    def log_density(z: mpmath.mpf) -> mpmath.mpf:
        return 2 * mpmath.log(mpmath.sech(z / 2)) - mpmath.log(4)

    @staticmethod
    def log_survival(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.log1p(mpmath.exp(z))

    @staticmethod
    def log_cdf(z: mpmath.mpf) -> mpmath.mpf:
        return -mpmath.log1p(mpmath.exp(-z))

    @staticmethod
    def quantile(p: mpmath.mpf) -> mpmath.mpf:
        return mpmath.log(p) - mpmath.log1p(-p)


Reference = type[Normal] | type[SmallestExtremeValue] | type[LargestExtremeValue] | type[Logistic]
REFERENCE: dict[str, Reference] = {
    "lognormal": Normal,
    "weibull": SmallestExtremeValue,
    "exponential": SmallestExtremeValue,
    "loglogistic": Logistic,
    "frechet": LargestExtremeValue,
    "normal": Normal,
    "smallest_extreme_value": SmallestExtremeValue,
    "largest_extreme_value": LargestExtremeValue,
    "logistic": Logistic,
}
# Both tails; the extreme values have left double range long before 8 on their short side (survival exp(-2981)).
POINTS = np.unique(np.concatenate([np.linspace(-40, 8, 49), np.linspace(-1.55, 1.45, 7), [-1e-3, 1e-6, 1e-3]]))
POINTS = np.unique(np.concatenate([POINTS, -POINTS]))


def errors(got: NDArray[np.float64], want: list[mpmath.mpf], floor: float = TINY) -> NDArray[np.float64]:
    """Relative error of each value; one that a double cannot hold counts as zero."""
    exact = np.array([float(value) for value in want])
    return np.abs(np.asarray(got) - exact) / np.maximum(np.abs(exact), floor)


def assert_close(
    got: NDArray[np.float64], want: list[mpmath.mpf], tolerance: float, at: object, floor: float = TINY
) -> None:
    assert np.all(np.isfinite(got))
    error = errors(got, want, floor)
    worst = int(np.argmax(error))
    place = np.asarray(at)[worst]
    assert error[worst] <= tolerance, f"at {place}: {got[worst]!r}, not {mpmath.nstr(want[worst], 17)}"


def reference_of(name: str) -> Reference:
    assert name in REFERENCE, f"no mpmath reference for the family {name}: add one here"
    return REFERENCE[name]


@pytest.mark.parametrize("function", ["log_density", "log_survival", "log_cdf"])
@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_value_and_derivatives_hold_in_both_tails(name: str, function: str) -> None:
    exact: Function = getattr(reference_of(name), function)
    got = getattr(family(name).standard, function)(POINTS)
    with mpmath.workdps(DIGITS):
        points = [mpmath.mpf(float(z)) for z in POINTS]
        assert_close(got.value, [exact(z) for z in points], 1e-12, POINTS)
        assert_close(got.first, [mpmath.diff(exact, z) for z in points], 1e-12, POINTS)
        assert_close(got.second, [mpmath.diff(exact, z, 2) for z in points], 1e-10, POINTS)


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_the_log_hazard_holds_in_both_tails(name: str) -> None:
    exact = reference_of(name)
    got = family(name).standard.log_hazard(POINTS)
    with mpmath.workdps(DIGITS):
        points = [mpmath.mpf(float(z)) for z in POINTS]

        def log_hazard(z: mpmath.mpf) -> mpmath.mpf:
            return exact.log_density(z) - exact.log_survival(z)

        # ln h may pass through 0, and its slope may vanish, where an absolute error counts.
        assert_close(got.value, [log_hazard(z) for z in points], 1e-12, POINTS, floor=0.1)
        assert_close(got.first, [mpmath.diff(log_hazard, z) for z in points], 1e-12, POINTS, floor=0.1)
        assert_close(got.second, [mpmath.diff(log_hazard, z, 2) for z in points], 1e-10, POINTS, floor=0.1)


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_tails_too_short_for_any_number_are_quiet(name: str) -> None:
    far, standard = np.array([-2000.0, 2000.0]), family(name).standard
    assert standard.cdf(far).tolist() == [0.0, 1.0]
    assert standard.survival(far).tolist() == [1.0, 0.0]
    with np.errstate(over="ignore"):
        assert np.all(np.exp(standard.log_density(far).value) == 0.0)
    value = standard.log_hazard(far).value
    assert not np.isnan(value).any()
    assert value[0] < -600.0


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_far_upper_tail(name: str) -> None:
    """Beyond z = 8: a normal survival of 1e-316, a smallest-extreme-value survival of exp(-2.7e11)."""
    exact, standard = reference_of(name), family(name).standard
    far = np.array([10.0, 15.0, 20.0, 26.3, 38.0])
    with mpmath.workdps(DIGITS):
        points = [mpmath.mpf(float(z)) for z in far]
        for function in ("log_density", "log_survival"):
            got, formula = getattr(standard, function)(far), getattr(exact, function)
            assert_close(got.value, [formula(z) for z in points], 1e-12, far)
            assert_close(got.first, [mpmath.diff(formula, z) for z in points], 1e-12, far)
            assert_close(got.second, [mpmath.diff(formula, z, 2) for z in points], 1e-10, far)


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_quantile_inverts_the_distribution_in_both_tails(name: str) -> None:
    fractions = np.array([1e-300, 1e-100, 1e-30, 1e-12, 1e-6, 0.001, 0.01, 0.1, 0.3, 0.5, 0.7, 0.9, 0.999])
    fractions = np.append(fractions, [1 - 1e-9, 1 - 2.0**-50])
    with mpmath.workdps(DIGITS):
        want = [reference_of(name).quantile(mpmath.mpf(float(p))) for p in fractions]
    got = np.array([family(name).standard.quantile(p) for p in fractions], dtype=float)
    assert_close(got, want, 1e-13, fractions, floor=1e-3)


HALF_WIDTHS = (1e-10, 1e-8, 1e-6, 1e-4, 1e-2, 0.1, 0.5, 1.0, 3.0)
MIDDLES = (-40.0, -30.0, -20.0, -12.0, -8.0, -5.0, -3.0, -2.0, -1.0, -0.4, 0.1, 0.3, 0.9, 1.5, 2.0, 3.0, 4.5)
FIELDS = ("value", "d_middle", "d_half", "d_middle_middle", "d_middle_half", "d_half_half")


def interval_reference(exact: Reference, middle: float, half: float) -> list[mpmath.mpf]:
    """ln(F(middle + half) - F(middle - half)) and its derivatives, in the order of FIELDS."""
    m, h = mpmath.mpf(middle), mpmath.mpf(half)
    a, b = m - h, m + h
    mass = exact.survival(a) - exact.survival(b) if m > 0 else exact.cdf(b) - exact.cdf(a)
    density = exact.density(a) / mass, exact.density(b) / mass
    slope = exact.density_slope(a) / mass, exact.density_slope(b) / mass
    d_m, d_h = density[1] - density[0], density[1] + density[0]
    difference, total = slope[1] - slope[0], slope[1] + slope[0]
    return [mpmath.log(mass), d_m, d_h, difference - d_m**2, total - d_m * d_h, difference - d_h**2]


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_probability_of_an_interval_from_tiny_to_wide_and_in_far_tails(name: str) -> None:
    exact = reference_of(name)
    # The long tail of the largest extreme value is the upper one.
    middles = np.negative(MIDDLES) if exact is LargestExtremeValue else np.array(MIDDLES)
    middle, half = (grid.ravel() for grid in np.meshgrid(middles, HALF_WIDTHS, indexing="ij"))
    with mpmath.workdps(DIGITS):
        want = [interval_reference(exact, m, h) for m, h in zip(middle, half, strict=True)]
        got = log_interval(family(name).standard, middle, half)
        at = np.column_stack([middle, half])
        for field, column in zip(FIELDS, zip(*want, strict=True), strict=True):
            # As they enter the likelihood: each derivative in the half width comes multiplied by it. Second
            # derivatives that vanish (a log-linear tail) are held to 1e-13 absolutely.
            size = half ** field.count("half")
            scaled = [value * mpmath.mpf(float(s)) for value, s in zip(column, size, strict=True)]
            tolerance = 1e-12 if field.count("_") < 2 else 1e-10
            assert_close(size * getattr(got, field), scaled, tolerance, at, floor=1e-3)
