"""The command's further readings, bases, comparisons and simulated plans, for people and for scripts."""

from __future__ import annotations

from math import exp, gamma, log
from pathlib import Path

import pytest

from reliability_app.command_line import main
from reliability_app.engine.coverage import coverage_of_life
from reliability_app.session import compared_families
from tests.session.test_simulated_plan import SMALL
from tests.test_command_line import NIST, read_json

LIKELIHOOD = ("--family", "weibull", "--bound", "likelihood", "--side", "lower")


def test_every_kind_of_reading_has_a_word(capsys: pytest.CaptureFixture[str]) -> None:
    _, answer = read_json(
        capsys, str(NIST), *LIKELIHOOD, "--age", "400", "--given", "200", "--residual", "200", "--hazard-age", "300",
        "--at-hazard", "0.002", "--mode", "--mean-life",
    )  # fmt: skip
    asked = [{k: r[k] for k in ("ask", "age", "given", "hazard") if k in r} for r in answer["sets"][0]["readings"]]
    assert asked == [
        {"ask": "conditional_reliability", "age": 400, "given": 200},
        {"ask": "hazard", "age": 300},
        {"ask": "residual_life", "age": 200},
        {"ask": "age_at_hazard", "hazard": 0.002},
        {"ask": "mode"},
        {"ask": "mean_life"},
    ]
    # The share by the mean of a Weibull distribution, at the Handbook's shape of 1.7208 (sec. 8.4.1.3).
    share = 1.0 - exp(-(gamma(1.0 + 1.0 / 1.7208) ** 1.7208))
    assert answer["sets"][0]["readings"][-1]["share_failed"] == pytest.approx(share, rel=1e-4)


def test_a_mean_life_comes_below_a_b_life(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["read", str(NIST), *LIKELIHOOD, "--mean-life"]) == 0
    lines = capsys.readouterr().out.splitlines()
    assert lines[1].startswith("  B10 life 164 h.")
    # 606.53 Gamma(1 + 1/1.7208), and 1 - exp(-Gamma(1 + 1/1.7208)^1.7208), from the Handbook's estimates.
    assert lines[2].startswith("  Mean life: 541 h, by which 56.0 % have failed. With 95 % confidence at least")


def test_units_without_a_failure_have_a_bound_at_a_held_shape(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    table = tmp_path / "rig.csv"
    table.write_text("life,state,qty\n1000,running,5\n1500,running,3\n", encoding="utf-8")
    basis = ("--family", "weibull", "--shape", "2", "--percent", "10")
    assert main(["read", str(table), *basis]) == 0
    assert "the B10 life is at least 642 h, if the Weibull shape is 2." in capsys.readouterr().out
    status, answer = read_json(capsys, str(table), *basis)
    (life,) = answer["sets"][0]["readings"]
    assert (status, life["estimate"], life["bound_used"]) == (0, None, "exact")
    # By hand: the scale is at least (sum of t^2 / -ln 0.05)^(1/2), the B10 life that times (-ln 0.9)^(1/2).
    by_hand = ((5 * 1000.0**2 + 3 * 1500.0**2) / -log(0.05) * -log(0.9)) ** 0.5
    assert life["lower"] == pytest.approx(by_hand, rel=1e-9)
    assert (answer["sets"][0]["shape"], answer["sets"][0]["parameters"]["scale"]) == (2.0, None)


def test_threshold_and_fit_method_are_chosen(capsys: pytest.CaptureFixture[str]) -> None:
    _, answer = read_json(capsys, str(NIST), *LIKELIHOOD, "--threshold")
    assert answer["sets"][0]["threshold"] is True
    assert set(answer["sets"][0]["parameters"]) == {"shape", "scale", "threshold"}
    _, answer = read_json(capsys, str(NIST), *LIKELIHOOD, "--fit", "median-rank regression of age")
    assert answer["sets"][0]["fit"] == "median-rank regression of age"
    assert answer["sets"][0]["readings"][0]["lower"] is None


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--given", "200"], "--age"),
        (["--given", "200", "--age", "100"], "--age"),
        (["--residual", "-1"], "positive"),
        (["--at-hazard", "0"], "A hazard rate of 0"),
        (["--shape", "0"], "A shape of 0"),
        (["--fit", "by eye"], "median-rank regression of rank"),
    ],
)
def test_wrong_usage_is_refused_by_name(capsys: pytest.CaptureFixture[str], words: list[str], said: str) -> None:
    assert main(["read", str(NIST), *words]) == 2
    captured = capsys.readouterr()
    assert said in captured.err
    assert captured.out == ""


def test_candidates_and_plan_come_when_asked_for(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(compared_families, "FAMILY_NAMES", ("lognormal", "weibull"))
    monkeypatch.setattr(coverage_of_life, "__kwdefaults__", SMALL)
    words = (str(NIST), *LIKELIHOOD, "--percent", "10")
    _, plain = read_json(capsys, *words)
    assert not {"candidates", "goodness", "verdict", "plan"} & set(plain["sets"][0])
    _, answer = read_json(capsys, *words, "--candidates", "--simulate-plan")
    (found,) = answer["sets"]
    assert [entry["family"] for entry in found["candidates"]] == ["weibull", "lognormal"]
    assert found["candidates"][0]["goodness"] == found["goodness"]
    assert [entry["kind"] for entry in found["plan"]["coverage"]] == ["wald", "likelihood", "calibrated"]
    assert main(["read", *words, "--candidates", "--simulate-plan"]) == 0
    out = capsys.readouterr().out
    assert "Weibull and lognormal fit alike" in out
    assert "Of 12 simulated tests like this one" in out
