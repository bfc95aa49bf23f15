"""Each family of the catalogue answers through session and command line, and says when its lives run below age 0."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest

from reliability_app.command_line import main
from reliability_app.engine import FAMILY_NAMES
from reliability_app.engine.families import family
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import Basis, HazardAsk, LifeAsk, ReliabilityAsk, Session, UnitSet
from reliability_app.session.unit_table import UnitTable

# With three parameters the few units here have no maximum: tests/engine/test_shaped_outcomes.py.
EVERY = pytest.mark.parametrize("name", [name for name in FAMILY_NAMES if name != "generalized_gamma"])
PLAIN = [name for name in FAMILY_NAMES if not family(name).of_log_life]
# Invented lives of seals, spread over more than a decade, and of springs that hardly differ.
SEALS = [(life, "failed") for life in (40, 60, 95, 150, 310, 700)] + [(900, "running"), (900, "running")]
SPRINGS = [(life, "failed") for life in (1012, 1003, 998, 1007, 991, 1001, 1009, 996, 1004, 1010, 1000)]


def analysed(units: list[tuple[int, str]], name: str) -> SetAnalysis:
    table = UnitTable.from_rows({"life": str(life), "state": state} for life, state in units)
    basis = Basis(family=name, side="two", bound="likelihood")
    asks = (LifeAsk(10), LifeAsk(0.1), ReliabilityAsk(300), HazardAsk(300))
    return analyse(Question.about(Session(sets=[UnitSet("Seals", table, basis)], asks=asks), 0))


def codes(analysis: SetAnalysis) -> set[str]:
    return {caution.code for caution in analysis.cautions}


@EVERY
@pytest.mark.parametrize("units", [SEALS, SPRINGS])
def test_readings_and_curves_are_there(units: list[tuple[int, str]], name: str) -> None:
    analysis = analysed(units, name)
    assert all(reading.estimate is not None for reading in analysis.readings)
    for curve in (analysis.picture.failure, analysis.picture.hazard, analysis.picture.survival):
        assert np.all(curve.x > 0)
        assert np.all(np.diff(curve.x) > 0)
        assert np.all(np.isfinite(curve.y))
    failure = analysis.picture.failure
    assert np.all((failure.lower <= failure.y) & (failure.y <= failure.upper))


@pytest.mark.parametrize("name", PLAIN)
def test_a_life_below_zero_is_given_with_a_serious_caution(name: str) -> None:
    analysis = analysed(SEALS, name)
    negative = analysis.readings[1]
    assert negative.estimate < 0
    assert negative.cautions[0].code == "life-not-positive"
    assert negative.cautions[0].severity.name == "SERIOUS"
    assert "lives-below-zero" in codes(analysis)


@EVERY
def test_lives_far_from_zero_call_for_no_such_caution(name: str) -> None:
    analysis = analysed(SPRINGS, name)
    assert not codes(analysis) & {"lives-below-zero", "life-not-positive"}
    assert all("life-not-positive" not in {c.code for c in reading.cautions} for reading in analysis.readings)


@EVERY
def test_the_command_line_reads_with_every_family(
    name: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    table = tmp_path / "seals.csv"
    table.write_text("life,state\n" + "".join(f"{life},{state}\n" for life, state in SEALS), encoding="utf-8")
    assert main(["read", str(table), "--family", name, "--bound", "likelihood", "--json"]) == 0
    answer = json.loads(capsys.readouterr().out)["sets"][0]
    assert answer["family"] == name
    assert answer["converged"]
    assert list(answer["parameters"]) == list(family(name).parameter_names)
    assert all(value is not None for value in answer["parameters"].values())
