"""Times of the whole window, printed: python tests/benchmarks/bench_window.py

From a typed cell to the repainted sentence and page, at 20, 1,000 and 20,000 units with likelihood bounds; a paste of
100,000 rows against pandas reading the same text; and the memory of the program with 100,000 units against without.
"""

from __future__ import annotations

import io
import os
import resource
import sys
import tempfile
import time
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[2]))
os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

import numpy as np
import pandas as pd
from PySide6.QtCore import QSettings
from PySide6.QtWidgets import QApplication

from reliability_app.session.document import Basis, Session, UnitSet
from reliability_app.session.edits import BlockEdit, PasteRows
from reliability_app.session.messages import Messages
from reliability_app.session.pasted_text import understand
from reliability_app.session.recovery import RecoveryCopy
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.main_window import MainWindow
from reliability_app.windows.settings import WindowSettings

ROWS = 100_000
EDITS = 7


def units(count: int) -> list[dict[str, str]]:
    """Return rows of made-up units, half of them running."""
    lives = 1000.0 * np.random.default_rng(1).weibull(2.0, count)
    return [
        {"unit": f"U-{row}", "life": f"{min(life, 900.0):.3f}", "state": "failed" if life < 900.0 else "running"}
        for row, life in enumerate(lives)
    ]


def opened(folder: Path, rows: list[dict[str, str]]) -> MainWindow:
    """Return a window on one set with likelihood bounds."""
    window = MainWindow(WindowSettings(QSettings(str(folder / "window.ini"), QSettings.Format.IniFormat)))
    window.resize(1240, 780)
    window.show()
    first = UnitSet("Set 1", UnitTable.from_rows(rows), Basis("weibull", bound="likelihood"))
    window.fill(Session(sets=[first]), Messages(), recovery=RecoveryCopy(folder / "recovery"))
    settle(window)
    return window


def settle(window: MainWindow) -> None:
    """Let the window work until its answer is painted."""
    QApplication.processEvents()
    while window.analyst.is_busy:
        QApplication.processEvents()
    QApplication.processEvents()
    window.grab()


def time_edits(folder: Path, count: int) -> None:
    """Print how long a typed life takes to be seen."""
    window = opened(folder, units(count))
    taken = []
    for number in range(EDITS):
        start = time.perf_counter()
        window.push_edit(BlockEdit(0, 0, ("life",), ((str(400 + number),),)))
        settle(window)
        taken.append(time.perf_counter() - start)
    print(f"{count:>7,} units: edit to repaint {1000 * min(taken):.0f} ms")
    close(window)


def time_paste(folder: Path) -> None:
    """Print a paste of many rows against pandas reading the same text, and the memory that the units take."""
    rows = units(ROWS)
    text = "Unit\tLife\tState\n" + "\n".join("\t".join(row.values()) for row in rows)
    start = time.perf_counter()
    pd.read_csv(io.StringIO(text), sep="\t")
    bare = time.perf_counter() - start
    window = opened(folder, [])
    before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    start = time.perf_counter()
    understood = understand(text)
    read = time.perf_counter() - start
    window.push_edit(PasteRows(0, understood.rows, understood.extra_columns))
    settle(window)
    whole = time.perf_counter() - start
    after = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"{ROWS:,} rows: understood in {read:.2f} s, {read / bare:.1f} times pandas; shown after {whole:.2f} s")
    print(f"memory at its highest: {before:.0f} MB empty, {after:.0f} MB with {ROWS:,} units and their analysis")
    close(window)


def close(window: MainWindow) -> None:
    """Close without a question."""
    window.undo.setClean()
    window.close()


def main() -> None:
    """Print everything."""
    application = QApplication([])
    with tempfile.TemporaryDirectory() as name:
        for count in (20, 1000, 20_000):
            time_edits(Path(name), count)
        time_paste(Path(name))
    del application


if __name__ == "__main__":
    main()
