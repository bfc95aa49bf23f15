"""Lets the tests run without a screen, and says in one sentence what the system lacks."""

import os
import sys

import pytest

from reliability_app.system_libraries import find_missing

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")


@pytest.hookimpl(tryfirst=True)
def pytest_configure():
    # Asked before pytest-qt imports PySide6, which would name one missing library at a time.
    missing = find_missing(["offscreen"]) if sys.platform == "linux" else None
    if missing is not None:
        raise pytest.UsageError(f"The tests cannot run. {missing.sentence}")
