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


@pytest.hookimpl(trylast=True)
def pytest_sessionfinish(session, exitstatus):
    session.config.stash_exit = int(exitstatus)


@pytest.hookimpl(trylast=True)
def pytest_unconfigure(config):
    # PySide may destroy a widget after Python has ended and crash a run whose result is known already.
    status = getattr(config, "stash_exit", None)
    if status is not None and not hasattr(config, "workerinput"):
        sys.stdout.flush()
        sys.stderr.flush()
        os._exit(status)
