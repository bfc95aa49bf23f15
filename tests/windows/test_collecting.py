"""Garbage is collected on the window's thread, and on no other."""

import gc
import threading
import weakref

import pytest
from PySide6.QtCore import QObject

from reliability_app.windows import collecting
from reliability_app.windows.collecting import Collector


@pytest.fixture
def python_collects_afterwards():
    was = gc.isenabled()
    yield
    if was:
        gc.enable()


class Ring:
    """Refers to itself, so that only a collection frees it."""

    def __init__(self) -> None:
        self.own = self


@pytest.mark.usefixtures("python_collects_afterwards")
def test_garbage_made_on_a_worker_is_freed_on_the_windows_thread(qtbot, monkeypatch):
    monkeypatch.setattr(collecting, "_LOOK_EVERY_MS", 5)
    owner = QObject()
    Collector(owner)
    freed_on = []

    def work() -> None:
        ring = Ring()
        weakref.finalize(ring, lambda: freed_on.append(threading.current_thread()))
        del ring
        for _ in range(20_000):  # far beyond what makes Python collect by itself
            Ring()

    worker = threading.Thread(target=work)
    worker.start()
    worker.join()
    assert freed_on == []
    qtbot.waitUntil(lambda: bool(freed_on), timeout=5000)
    assert freed_on == [threading.main_thread()]
    owner.deleteLater()
