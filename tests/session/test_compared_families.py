"""Families compared for a set: a table for people, objects for scripts, reasons for what has no fit."""

from __future__ import annotations

import pytest

from reliability_app.engine import fit
from reliability_app.session import compared_families
from reliability_app.session.compared_families import as_objects, compare_families, table_lines
from tests.reference.reference_data import units_of
from tests.session.test_analysis import NIST_ROWS
from tests.session.test_further_readings import analysed


@pytest.fixture(autouse=True)
def few_families(monkeypatch: pytest.MonkeyPatch) -> None:
    """Some of the families only: those with a further parameter take seconds each for their p-values."""
    monkeypatch.setattr(compared_families, "FAMILY_NAMES", ("lognormal", "weibull"))


def five() -> list[dict[str, str]]:
    """Return units to which the generalized gamma family has no fit (see tests/session/test_shaped_readings)."""
    return [{"life": str(life), "state": "failed"} for life in units_of("syn01_complete_n5").lower]


def test_candidates_stand_in_a_table_with_the_verdict_below() -> None:
    compared = compare_families(analysed(NIST_ROWS))
    head, first, second, verdict = table_lines(compared)
    assert head.split("  ")[0] == "Family"
    assert head.endswith("B10 life")
    weibull = fit(analysed(NIST_ROWS).fit.data, "weibull")
    p_value = compared.candidates[0].anderson_darling.p_value
    assert first.split() == [
        "Weibull", "-75.135", f"{weibull.aicc:.2f}", f"{weibull.bic:.2f}", f"{p_value:.3f}", "164", "h",
    ]  # fmt: skip
    assert second.startswith("Lognormal")
    assert len({len(line) for line in (head, first, second)}) == 1
    # NIST/SEMATECH e-Handbook sec. 8.4.1.3: log-likelihoods -75.135 and -75.196 (the second recomputed).
    assert verdict == "Weibull and lognormal fit alike; B10 life is 164 h or 158 h."


def test_a_family_without_a_fit_says_why(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(compared_families, "FAMILY_NAMES", ("weibull", "generalized_gamma"))
    compared = compare_families(analysed(five()))
    (missing,) = [one for one in compared.candidates if not one.is_fitted]
    assert missing.name == "generalized_gamma"
    assert f"Generalized gamma: {missing.reason}" in table_lines(compared)
    objects = {entry["family"]: entry for entry in as_objects(compared)["candidates"]}
    assert objects["generalized_gamma"]["converged"] is False
    assert objects["generalized_gamma"]["log_likelihood"] is None
    assert objects["weibull"]["reason"] is None


def test_scripts_get_the_goodness_of_the_fit_of_the_basis() -> None:
    answer = as_objects(compare_families(analysed(five())))
    own = next(entry for entry in answer["candidates"] if entry["family"] == "weibull")
    assert answer["goodness"] == own["goodness"]
    assert 0 < answer["goodness"]["anderson_darling"]["p_value"] <= 1
    assert answer["verdict"].endswith(".")


def test_without_units_there_is_nothing_to_compare() -> None:
    assert compare_families(analysed([])) is None


def test_the_reason_for_a_missing_p_value_is_said_once() -> None:
    found_failed = {"life": "100", "until": "200", "state": "found failed"}
    compared = compare_families(analysed([*NIST_ROWS, found_failed]))
    assert [one.anderson_darling for one in compared.candidates] == [None, None]
    _, first, _, reason, _ = table_lines(compared)
    assert first.split()[4] == "-"
    assert reason.startswith("Anderson-Darling and plot correlation are not given")
