"""Run as a program: closes the window while it calibrates, simulates and compares, and tells how long that took."""

import json
import sys
import threading
import time
from pathlib import Path

from PySide6.QtCore import QEvent, QObject, QSettings, QTimer
from PySide6.QtWidgets import QApplication

from reliability_app.session.document import Basis, Session, UnitSet
from reliability_app.session.messages import Messages
from reliability_app.session.recovery import RecoveryCopy
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.main_window import MainWindow
from reliability_app.windows.settings import WindowSettings

GIVE_UP_AFTER_MS = 60_000

# Invented: units that left the test at any age, so that nothing exact is there and calibration takes its time.
ROWS = [{"life": f"{50 + 37 * place % 900}", "state": "failed" if place % 3 == 0 else "running"} for place in range(30)]


class Closing(QObject):
    """Closes the window as soon as all of its work is under way."""

    def __init__(self, folder: Path) -> None:
        super().__init__()
        settings = WindowSettings(QSettings(str(folder / "window.ini"), QSettings.Format.IniFormat))
        session = Session(sets=[UnitSet("Set 1", UnitTable.from_rows(ROWS), Basis(bound="calibrated"))])
        self.window = MainWindow(settings)
        self.window.show()
        self.window.fill(session, Messages(), recovery=RecoveryCopy(folder / "recovery"))
        self.window.installEventFilter(self)
        self.comparer = self.window.page_wiring.comparer
        self.workers = (self.window.analyst, self.window.simulator, self.comparer)
        self.started, self.hidden_at = False, 0.0
        for worker in self.workers:
            worker.advanced.connect(self.look)
        self.window.analyst.answered.connect(self.start_more)
        self.comparer.answered.connect(self.comparer.simulate)
        QTimer.singleShot(GIVE_UP_AFTER_MS, lambda: QApplication.exit(3))

    def start_more(self) -> None:
        if not self.started and self.window.analysis is not None:
            self.started = True
            self.window.simulator.simulate(self.window.analysis)
            self.comparer.compare(self.window.analysis)

    def look(self) -> None:
        if all(worker.is_busy for worker in self.workers):
            for worker in self.workers:
                worker.advanced.disconnect(self.look)
            QTimer.singleShot(0, self.close)

    def eventFilter(self, _: QObject, event: QEvent) -> bool:  # noqa: N802 - Qt's name
        if event.type() == QEvent.Type.Hide:
            self.hidden_at = time.perf_counter()
        return False

    def close(self) -> None:
        start = time.perf_counter()
        closed = self.window.close()
        ended = time.perf_counter()
        left = [thread.name for thread in threading.enumerate() if thread is not threading.main_thread()]
        told = {"closed": closed, "hidden": self.hidden_at - start, "ended": ended - start, "threads": left}
        print(json.dumps(told), flush=True)


if __name__ == "__main__":
    application = QApplication([])
    closing = Closing(Path(sys.argv[1]))
    sys.exit(application.exec())
