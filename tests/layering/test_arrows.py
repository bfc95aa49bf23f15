"""The floors import downwards only; a violation planted on purpose is caught and named by its contract."""

import shutil
import subprocess
import sys
import sysconfig
import tomllib
from pathlib import Path

import pytest

PROJECT = Path(__file__).parents[2]
RUFF = [sys.executable, "-m", "ruff", "check", "--no-cache", "--output-format=concise"]
SETTINGS = tomllib.loads((PROJECT / "pyproject.toml").read_text("utf-8"))["tool"]
CONTRACTS = [contract["name"] for contract in SETTINGS["importlinter"]["contracts"]]


def verdicts(folder):
    """Run the import contracts of the project in `folder`; return the run and each contract's verdict."""
    command = shutil.which("lint-imports", path=sysconfig.get_path("scripts"))
    assert command is not None, "lint-imports is missing: install the project with its extra 'test'"
    run = subprocess.run([command, "--no-cache"], cwd=folder, capture_output=True, text=True, timeout=120, check=False)
    lines = run.stdout.splitlines()
    return run, {name: verdict for name in CONTRACTS for verdict in ("KEPT", "BROKEN") if f"{name} {verdict}" in lines}


@pytest.fixture
def copy_of_the_project(tmp_path):
    """Copy what the contracts look at, to plant in."""
    shutil.copy(PROJECT / "pyproject.toml", tmp_path)
    shutil.copytree(
        PROJECT / "reliability_app",
        tmp_path / "reliability_app",
        ignore=shutil.ignore_patterns("__pycache__", "shipped"),
    )
    return tmp_path


def test_every_contract_is_kept():
    run, found = verdicts(PROJECT)
    assert found == dict.fromkeys(CONTRACTS, "KEPT"), run.stdout + run.stderr
    assert run.returncode == 0


@pytest.mark.parametrize(
    ("place", "line", "broken"),
    [
        ("engine", "from PySide6.QtCore import QObject", {"No Qt below the reports"}),
        ("session", "import pyqtgraph", {"No Qt below the reports"}),
        ("session", "import reliability_app.windows", {"Arrows run down only"}),
        ("engine", "def late():\n    import reliability_app.session.states", {"Arrows run down only"}),
        ("engine", "import pandas", {"The engine is numbers only"}),
        ("", "", {"Arrows run down only"}),
    ],
    ids=[
        "Qt in the engine",
        "charts in the session",
        "windows in the session",
        "the session in the engine, even late",
        "pandas in the engine",
        "a room without a floor",
    ],
)
def test_a_planted_violation_breaks_its_contract_and_no_other(copy_of_the_project, place, line, broken):
    (copy_of_the_project / "reliability_app" / place / "planted.py").write_text(f'"""Planted."""\n\n{line}\n')
    run, found = verdicts(copy_of_the_project)
    assert {name for name, verdict in found.items() if verdict == "BROKEN"} == broken, run.stdout + run.stderr
    assert run.returncode == 1
    assert "planted" in run.stdout


@pytest.mark.parametrize(
    ("line", "rule"),
    [("from scipy import stats", "TID251"), ("import pandas", "TID253"), ("import jinja2", "TID253")],
)
def test_an_import_that_costs_start_up_time_is_caught_by_ruff(line, rule):
    # import-linter can neither name a part of another package nor tell a late import from an early one.
    run = subprocess.run(
        [*RUFF, "--stdin-filename", "reliability_app/session/planted.py", "-"],
        input=f'"""Planted."""\n\n{line}\n',
        cwd=PROJECT,
        capture_output=True,
        text=True,
        timeout=60,
        check=False,
    )
    assert rule in run.stdout, run.stdout + run.stderr
