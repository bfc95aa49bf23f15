"""A life known to a very narrow interval must give the fit of the exact life."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import LifeData, fit
from tests.reference.reference_data import units_of

# Width of the interval relative to the life: an hour in ten thousand, down to the last digits of a file.
WIDTHS = (1e-4, 1e-6, 1e-8, 1e-10)


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("family", ["lognormal", "weibull", "exponential"])
def test_narrow_interval_gives_the_fit_of_the_exact_life(family: str, width: float) -> None:
    units = units_of("syn03_n20_cens60")
    failed = units.lower == units.upper
    low = np.where(failed, units.lower * (1 - width / 2), units.lower)
    high = np.where(failed, units.lower * (1 + width / 2), units.upper)
    exact = fit(units.life_data(), family)
    narrow = fit(LifeData.from_intervals(low, high), family)
    assert narrow.converged
    # ln of a probability instead of ln of a density: the widths come in, as they stand in double precision.
    offset = float(np.log((high - low)[failed]).sum())
    # ln of an age holds 16 digits, so the width of each of the 8 intervals is known to some 2e-15/width.
    reachable = 1e-8 + width + 8 * 2e-15 / width
    assert narrow.log_likelihood - offset == pytest.approx(exact.log_likelihood, abs=reachable)
    for name, value in exact.parameters.items():
        assert narrow.parameters[name] == pytest.approx(value, rel=max(1e-7, width)), name
    assert np.asarray(narrow.covariance) == pytest.approx(np.asarray(exact.covariance), rel=max(1e-5, width))
