"""The two lines on which families lie: there and back, slopes, and the digits of narrow intervals."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest

from reliability_app.engine.errors import DataError
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_scale import LOG_LIFE, PLAIN_LIFE, LifeScale

BOTH = pytest.mark.parametrize("scale", [LOG_LIFE, PLAIN_LIFE])
AGES = np.array([1e-9, 0.3, 1.0, 47.5, 8e6])


@BOTH
def test_ages_come_back(scale: LifeScale) -> None:
    assert scale.from_line(scale.to_line(AGES)) == pytest.approx(AGES, rel=1e-14)


@BOTH
def test_the_slope_is_that_of_the_line(scale: LifeScale) -> None:
    step = 1e-6 * AGES
    slope = (scale.to_line(AGES + step) - scale.to_line(AGES - step)) / (2 * step)
    assert np.exp(scale.log_slope(scale.to_line(AGES))) == pytest.approx(slope, rel=1e-8)


@BOTH
@pytest.mark.parametrize("width", [1e-13, 1e-8, 0.1, 30.0])
def test_half_widths_keep_their_digits(scale: LifeScale, width: float) -> None:
    low, high = AGES, AGES * (1 + width)
    with mpmath.workdps(40):
        pairs = [(mpmath.mpf(float(a)), mpmath.mpf(float(b))) for a, b in zip(low, high, strict=True)]
        want = [float((mpmath.log(b / a) if scale is LOG_LIFE else b - a) / 2) for a, b in pairs]
    assert scale.half_width(low, high) == pytest.approx(np.array(want), rel=1e-14)


def test_only_ln_life_has_a_beginning() -> None:
    ages = np.array([-1.0, 0.0, 2.0, np.inf, np.nan])
    assert LOG_LIFE.admits(ages).tolist() == [False, False, True, False, False]
    assert PLAIN_LIFE.admits(ages).tolist() == [True, True, True, False, False]


@pytest.mark.parametrize(
    ("lower", "upper"),
    [([-np.inf], [np.inf]), ([np.nan], [3.0]), ([np.inf], [np.inf]), ([2.0], [np.nan]), ([-np.inf], [-np.inf])],
)
def test_a_record_that_says_nothing_is_refused(lower: list[float], upper: list[float]) -> None:
    with pytest.raises(DataError, match="Record 1: the life is not a finite number"):
        LifeData.from_intervals(lower, upper)


def test_lives_before_a_familys_origin_are_named_with_the_family() -> None:
    data = LifeData.from_intervals([0, -np.inf, -2, 0, 5, -3], [4, 2, 1, 0, np.inf, np.inf])
    with pytest.raises(DataError, match="Record 3, 4, 6: the life is not above 0, as the Weibull family has it"):
        data.check_beyond(0.0, "Weibull")
    data.check_beyond(-np.inf, "Normal")
    LifeData.from_intervals([0, -np.inf, 5], [4, 2, np.inf]).check_beyond(0.0, "Weibull")
