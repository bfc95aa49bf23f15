"""The installed versions are ones under which the program survives."""

import sys

from PySide6.QtCore import QObject


def test_void_calls_into_qt_do_not_lose_references_to_none():
    # PySide6 6.12.0 on Python 3.11 and older drops one reference to None per call that returns None, until
    # the process aborts. From Python 3.12 on None is immortal and its count stands still (PEP 683).
    item = QObject()
    item.parent()
    before = sys.getrefcount(None)
    for _ in range(500):
        item.parent()
    lost = before - sys.getrefcount(None)
    assert lost < 100, f"{lost} references to None lost in 500 calls: this PySide6 must not run on this Python"
