"""Leaves no widget of one test alive into the next, and knows what the offscreen platform says about itself."""

import gc

import pytest
from PySide6.QtCore import QCoreApplication, QEvent
from PySide6.QtGui import QGuiApplication


def pytest_collection_modifyitems(items):
    for item in items:
        if "windows" in item.path.parts:
            # Said at every window by the platform without a screen; it is no fault of the program.
            item.add_marker(pytest.mark.qt_log_ignore("This plugin does not support", extend=True))


@pytest.fixture(autouse=True, scope="module")
def standing_objects_set_aside():
    # What stands before a window opens is not searched again after each test: late in a whole run that took a second.
    gc.collect()
    gc.freeze()
    # After each test only, and never in a thread at work: to free a widget there can wait for Qt for ever.
    gc.disable()
    yield
    gc.enable()


@pytest.fixture(autouse=True)
def nothing_left_behind():
    yield
    # Widgets given to deleteLater() go only with the event loop, which no test runs on its own.
    if QCoreApplication.instance() is not None:
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
        # The platform without a screen keeps what was copied in a static of Qt's, which goes after Python has ended.
        QGuiApplication.clipboard().clear()
    gc.collect()
