"""Records of every kind pass the whole way: file or typed cells, table of units, fit, `rigpaper read --json`."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from reliability_app.command_line import main
from reliability_app.engine import LifeData, fit
from reliability_app.session.unit_table import UnitTable
from tests.reference.reference_data import reference_set, units_of

# Invented: every kind of record, once in columns of their own and once in the short forms of the Life column.
IN_COLUMNS = """Unit,Life,Until,State,Qty,Entered
P-1,812,,failed,1,
P-2,200,400,found failed,2,
P-3,0,350,found failed,1,
P-4,1500,,running,3,
P-5,1500,,running,1,700
P-6,900,,failed,2,250
P-7,500,700,found failed,1,500
P-8,640,,failed,1,
"""
IN_SHORT = """Unit;Life;Qty;Entered
P-1;812;1;
P-2;200-400;2;
P-3;<350;1;
P-4;1500+;3;
P-5;>1500;1;700
P-6;900;2;250
P-7;500 to 700;;500
P-8;640;;0
"""


def read(capsys: pytest.CaptureFixture[str], tmp_path: Path, text: str, *words: str) -> dict[str, Any]:
    table = tmp_path / "rig.csv"
    table.write_text(text, encoding="utf-8")
    assert main(["read", str(table), "--bound", "likelihood", "--json", *words]) == 0
    (found,) = json.loads(capsys.readouterr().out)["sets"]
    assert isinstance(found, dict)
    return found


def invented() -> LifeData:
    """The same units as arrays."""
    inf = np.inf
    return LifeData.from_intervals(
        [812, 200, 0, 1500, 1500, 900, 500, 640],
        [812, 400, 350, inf, inf, 900, 700, 640],
        quantity=[1, 2, 1, 3, 1, 2, 1, 1],
        entered=[0, 0, 0, 0, 700, 250, 500, 0],
    )


@pytest.mark.parametrize("text", [IN_COLUMNS, IN_SHORT], ids=["columns", "short forms"])
def test_columns_and_short_forms_give_what_the_engine_gives(
    capsys: pytest.CaptureFixture[str], tmp_path: Path, text: str
) -> None:
    found, direct = read(capsys, tmp_path, text, "--family", "weibull", "--percent", "10"), fit(invented(), "weibull")
    assert (found["failed"], found["running"], found["found_failed"], found["unread"]) == (4, 4, 4, 0)
    assert found["parameters"] == direct.parameters
    assert found["log_likelihood"] == direct.log_likelihood
    (life,) = found["readings"]
    lower, _ = direct.life_bounds(0.10, confidence=0.95, side="lower", kind="likelihood")
    assert (life["estimate"], life["lower"]) == (direct.life(0.10), pytest.approx(lower, rel=1e-9))
    assert "points-not-drawn" not in {caution["code"] for caution in found["cautions"]}


def turbine_rows(style: str) -> str:
    """The turbine wheels, one inspection each: cracked by then, or not yet."""
    columns = reference_set("turbine")["units"]
    ends = zip(columns["lower"], columns["upper"], columns["quantity"], strict=True)
    headings = {"signs": "Life\tQty", "columns": "Life,Until,State,Qty", "interval": "lower;upper;count"}
    forms = {
        "signs": lambda low, high, count: f"{low}+\t{count}" if high is None else f"<{high}\t{count}",
        "columns": lambda low, high, count: (
            f"{low},,running,{count}" if high is None else f"0,{high},found failed,{count}"
        ),
        "interval": lambda low, high, count: f"{'' if low is None else low};{'' if high is None else high};{count}",
    }
    return "\n".join([headings[style], *(forms[style](*row) for row in ends)])


@pytest.mark.parametrize("family", ["weibull", "lognormal"])
@pytest.mark.parametrize("style", ["signs", "columns", "interval"])
def test_found_failed_and_running_turbine_wheels(
    capsys: pytest.CaptureFixture[str], tmp_path: Path, style: str, family: str
) -> None:
    """R survival's data set `turbine`, computed by survreg and independently; see tests/reference/turbine.json."""
    found = read(capsys, tmp_path, turbine_rows(style), "--family", family)
    expected = reference_set("turbine")["fits"][family]
    assert found["found_failed"] == sum(reference_set("turbine")["units"]["quantity"][1::2])
    assert found["log_likelihood"] == pytest.approx(expected["log_likelihood"], abs=1e-6)
    assert location_and_scale(found) == pytest.approx((expected["mu"], expected["sigma"]), rel=1e-6)


def test_late_entry_in_a_column_of_its_own(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    """Synthetic, left-truncated; computed independently, see tests/reference/syn14_left_truncated.json."""
    columns = reference_set("syn14_left_truncated")["units"]
    rows = zip(columns["life"], columns["failed"], columns["entered"], strict=True)
    text = "\n".join(
        ["Hours,Result,Age at entry", *(f"{life},{'F' if ok else 'S'},{start}" for life, ok, start in rows)]
    )
    found = read(capsys, tmp_path, text, "--family", "weibull")
    expected = reference_set("syn14_left_truncated")["fits"]["weibull"]
    assert found["log_likelihood"] == pytest.approx(expected["log_likelihood"], abs=1e-6)
    assert location_and_scale(found) == pytest.approx((expected["mu"], expected["sigma"]), rel=1e-6)


def location_and_scale(found: dict[str, Any]) -> tuple[float, float]:
    """Location and scale of ln life, whatever the family calls its parameters."""
    parameters = found["parameters"]
    if "mu" in parameters:
        return parameters["mu"], parameters["sigma"]
    return float(np.log(parameters["scale"])), 1.0 / parameters["shape"]


def test_typed_cells_give_the_same_units_as_files() -> None:
    table = UnitTable()
    for row, (life, quantity, entered) in enumerate(
        (cells.split(";")[1:] for cells in IN_SHORT.splitlines()[1:]), start=0
    ):
        state = "" if any(sign in life for sign in "-+<>t") else "failed"
        table.set_block(row, ("life", "state", "quantity", "entered"), [[life, state, quantity, entered]])
    assert table.faults() == []
    typed, direct = table.life_data(), invented()
    for column in ("lower", "upper", "quantity", "entered"):
        assert getattr(typed, column).tolist() == getattr(direct, column).tolist()


def test_what_contradicts_itself_is_left_out_and_said(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    rows = ["Life,Until,State,Entered", "400-200,,,", "1500+,,failed,", "300,,found failed,", "500,,failed,600"]
    good = ["100,,failed,", "180,,failed,", "260,,failed,", "400,,running,"]
    found = read(capsys, tmp_path, "\n".join([*rows, *good]))
    assert (found["failed"], found["running"], found["found_failed"], found["unread"]) == (3, 1, 0, 4)
    assert "rows-unread" in {caution["code"] for caution in found["cautions"]}


def test_units_of_the_reference_turbine_are_those_of_the_table() -> None:
    """The short forms say 0 where the reference says that nothing is known: for ln life the two are one."""
    columns = [line.split("\t") for line in turbine_rows("signs").splitlines()[1:]]
    table = UnitTable.from_rows([{"life": life, "quantity": count} for life, count in columns])
    data, expected = table.life_data(), units_of("turbine")
    assert data.lower.tolist() == np.maximum(expected.lower, 0.0).tolist()
    assert data.upper.tolist() == expected.upper.tolist()
