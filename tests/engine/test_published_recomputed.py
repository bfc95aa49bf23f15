"""The published examples recomputed with 40 digits (mpmath): estimates, errors, log-likelihood and bounds.

The recomputation is its own likelihood, its own derivatives by differences in 40 digits, and its own roots of
the likelihood ratio; tests/reference/published.json holds its figures to 13 digits under "recomputed".
"""

from __future__ import annotations

from typing import Any

import pytest

from reliability_app.engine import Fit, fit
from tests.reference import published_data as examples
from tests.reference.reference_data import Units, published

CASES: dict[tuple[str, str], tuple[Units, str]] = {
    **{
        ("nist-8.4.1.3-weibull-mle", family): (examples.nist_8413(), family)
        for family in ("weibull", "lognormal", "exponential")
    },
    ("locomotive-controls-lognormal", "lognormal"): (examples.locomotive_controls(), "lognormal"),
    ("ball-bearings-weibull", "weibull"): (examples.ball_bearings(), "weibull"),
    ("ball-bearings-weibull", "lognormal"): (examples.ball_bearings(), "lognormal"),
    ("bearing-cage-weibull-B10-LR", "weibull"): (examples.bearing_cages(), "weibull"),
    **{("device-G-competing-modes", mode): (examples.device_g(mode), "weibull") for mode in ("S", "W", "pooled")},
    **{
        ("device-A-arrhenius-lognormal", degrees): (examples.device_a(degrees), "lognormal")
        for degrees in ("40", "60", "80")
    },
    ("r-cracks-weibull-interval", "weibull"): (examples.cracks(), "weibull"),
    **{
        ("alpha-particle-exponential-grouped", size): (examples.alpha_particles(size), "exponential")
        for size in ("n10220", "n2000", "n200", "n20")
    },
    ("epa-15-1-manganese-left-censored", "lognormal"): (examples.manganese(), "lognormal"),
    **{
        ("r-testreg-four-distributions", family): (examples.six_units(), family)
        for family in ("weibull", "lognormal", "exponential")
    },
    ("envstats-weibull-gamma-complete", "weibull"): (examples.generated_weibull_lives(), "weibull"),
    ("weibull3-rats", "weibull"): (examples.carcinogen(), "weibull"),
    ("weibull3-rats", "lognormal"): (examples.carcinogen(), "lognormal"),
}
ALL = pytest.mark.parametrize("case", CASES, ids="/".join)
TWO_SIDED: dict[str, Any] = {"confidence": 0.95, "side": "two"}


def fit_and_figures(case: tuple[str, str]) -> tuple[Fit, dict[str, Any]]:
    units, family = CASES[case]
    return fit(units.life_data(), family), published(case[0])["recomputed"][case[1]]


@ALL
def test_estimates(case: tuple[str, str]) -> None:
    f, figures = fit_and_figures(case)
    assert f.parameters == pytest.approx(figures["parameters"], rel=1e-7)
    assert f.log_likelihood == pytest.approx(figures["log_likelihood"], abs=1e-8)
    assert f.life(0.10) == pytest.approx(figures["B10"], rel=1e-7)


@ALL
def test_standard_errors_and_wald_bounds(case: tuple[str, str]) -> None:
    f, figures = fit_and_figures(case)
    assert f.standard_errors == pytest.approx(figures["standard_errors"], rel=1e-6)
    got = f.life_bounds(0.10, kind="wald", **TWO_SIDED)
    assert got == pytest.approx(figures["B10_wald95"], rel=1e-6)


@ALL
def test_likelihood_ratio_bounds(case: tuple[str, str]) -> None:
    f, figures = fit_and_figures(case)
    got = f.life_bounds(0.10, kind="likelihood", **TWO_SIDED)
    assert got == pytest.approx(figures["B10_LR95"], rel=1e-8)
    for name, ends in figures["parameter_LR95"].items():
        got = f.parameter_bounds(name, kind="likelihood", **TWO_SIDED)
        assert got == pytest.approx(ends, rel=1e-8), name
