"""Leaves no widget of one test alive into the next."""

import gc

import pytest
from PySide6.QtCore import QCoreApplication, QEvent


@pytest.fixture(autouse=True)
def nothing_left_behind():
    yield
    # Widgets given to deleteLater() go only with the event loop, which no test runs on its own.
    if QCoreApplication.instance() is not None:
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    gc.collect()
