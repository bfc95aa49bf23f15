"""Engine and session run without a screen: importing all of them brings in no Qt and nothing slow."""

import subprocess
import sys

import pytest

# Each costs start-up time or needs a screen: installed perhaps, but not imported by these floors at start.
NOT_AT_START = {
    "PySide6",
    "shiboken6",
    "pyqtgraph",
    "pandas",
    "scipy.stats",
    "python_calamine",
    "openpyxl",
    "jinja2",
}

IMPORT_ALL_OF = """
import importlib, pkgutil, sys
floor = importlib.import_module(sys.argv[1])
for room in pkgutil.walk_packages(floor.__path__, floor.__name__ + "."):
    importlib.import_module(room.name)
print(*sys.modules)
"""


def modules_after_importing_all_of(floor):
    run = subprocess.run(
        [sys.executable, "-c", IMPORT_ALL_OF, floor], capture_output=True, text=True, timeout=60, check=False
    )
    assert run.returncode == 0, run.stderr
    return set(run.stdout.split())


@pytest.mark.parametrize(
    ("floor", "a_room_of_it"),
    [
        ("reliability_app.engine", "reliability_app.engine.life_data"),
        ("reliability_app.session", "reliability_app.session.document"),
    ],
)
def test_importing_a_lower_floor_brings_in_no_qt_and_nothing_slow(floor, a_room_of_it):
    modules = modules_after_importing_all_of(floor)
    assert a_room_of_it in modules
    assert not modules & NOT_AT_START


def test_the_engine_does_not_bring_in_the_session():
    modules = modules_after_importing_all_of("reliability_app.engine")
    assert not {name for name in modules if name.startswith(("reliability_app.session", "reliability_app.windows"))}
