"""Late entry can make a likelihood region run away: bounds must still hold the estimate, or be refused by name.

Invented units, few and watched only over a short last part of their lives; the log-likelihood is then no longer
concave, and nearly flat towards a very early or very spread life.
"""

from __future__ import annotations

import pytest

from reliability_app.engine import fit
from reliability_app.engine.errors import BoundUnavailable
from tests.engine.naive_likelihood import NaiveFit, hazard_reading, life_reading
from tests.reference.reference_data import Units, right_censored_units

CASES: dict[str, Units] = {
    "one failed, one running": right_censored_units([1496.669, 897.886], [0, 1], entered=[309.042, 390.04]),
    "each watched for its last hour": right_censored_units([100, 110, 120], [1, 1, 1], entered=[99, 109, 119]),
    "half of life watched": right_censored_units(
        [800, 950, 1100, 1300, 1400], [1, 1, 0, 1, 0], entered=[420, 510, 480, 700, 650]
    ),
}


@pytest.mark.parametrize("family", ["lognormal", "weibull"])
@pytest.mark.parametrize("case", CASES)
@pytest.mark.parametrize("fraction", [0.1, 0.5])
@pytest.mark.parametrize("confidence", [0.8, 0.95])
def test_likelihood_bounds_hold_the_estimate_and_agree_with_a_naive_profile(
    case: str, family: str, fraction: float, confidence: float
) -> None:
    f = fit(CASES[case].life_data(), family)
    assert f.converged
    try:
        lower, upper = f.life_bounds(fraction, confidence=confidence, side="two", kind="likelihood")
    except BoundUnavailable:
        return
    assert lower <= f.life(fraction) <= upper
    judged = NaiveFit(CASES[case], family).likelihood_bounds(life_reading(family, fraction), confidence, "two")
    assert upper == pytest.approx(judged[1], rel=1e-6)
    # Below 1e-100 of anything a lower bound says no more than 0, and how far it is followed does not matter.
    assert lower == pytest.approx(judged[0], rel=1e-6, abs=1e-100)


def test_hazard_far_below_a_steep_fit() -> None:
    """Two failures of eight and a shape of 85: the least hazard lies 18 units of z away from the estimate."""
    units = right_censored_units(
        [429.035, 475.44, 356.555, 426.832, 417.596, 349.871, 474.125, 490.26],
        [0, 1, 0, 0, 0, 0, 0, 1],
        entered=[338.509, 0, 0, 163.842, 0, 0, 447.878, 0],
    )
    age = 427.9335
    got = fit(units.life_data(), "weibull").hazard_bounds(age, confidence=0.95, side="two", kind="likelihood")
    judged = NaiveFit(units, "weibull").likelihood_bounds(hazard_reading("weibull", age), 0.95, "two")
    assert got == pytest.approx(judged, rel=1e-6)
