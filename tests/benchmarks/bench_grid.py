"""Times of the Units grid with many rows, printed: python tests/benchmarks/bench_grid.py [rows]"""

from __future__ import annotations

import os
import sys
import time
from collections.abc import Callable
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[2]))
os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

from reliability_app.session.document import Session
from reliability_app.windows.undo import UndoStack
from reliability_app.windows.units_grid.units_grid import UnitsGrid

CONTROL = Qt.KeyboardModifier.ControlModifier


def clock(what: str, doing: Callable[[], object]) -> None:
    """Do something, repaint included, and print how long it took."""
    start = time.perf_counter()
    doing()
    QApplication.processEvents()
    print(f"{what:<44}{(time.perf_counter() - start) * 1000:10.1f} ms")


def main() -> None:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 100_000
    app = QApplication([])
    session, undo = Session(), UndoStack()
    grid = UnitsGrid(lambda edit: undo.push_edit(session, edit))
    session.listen(grid.refresh)
    grid.show_set(session, 0)
    grid.resize(700, 900)
    grid.show()
    app.processEvents()
    view = grid.view
    view.setFocus()

    lines = [f"P-{n}\t{100 + n % 977}.5\t{'broken' if n % 3 else 'ok'}\t{1 + n % 4}" for n in range(count)]
    QGuiApplication.clipboard().setText("Unit\tLife\tState\tQty\n" + "\n".join(lines))
    print(f"{count:,} rows of 4 columns pasted as text, with headings")
    clock("Ctrl+V: understand, one edit, repaint", lambda: QTest.keyClick(view, Qt.Key.Key_V, CONTROL))
    assert undo.count() == 1
    assert grid.model.rowCount() == count + 1
    clock("undo", undo.undo)
    clock("redo", undo.redo)
    clock("select everything", lambda: QTest.keyClick(view, Qt.Key.Key_A, CONTROL))
    clock("copy everything", lambda: QTest.keyClick(view, Qt.Key.Key_C, CONTROL))
    clock("paste it back over itself, cell by cell", lambda: QTest.keyClick(view, Qt.Key.Key_V, CONTROL))
    clock("clear everything", grid.clear)
    clock("undo", undo.undo)
    clock("sort by Life", grid.sort_down)
    view.go_to(0, 1)
    clock("sort by Life, from the first column on", grid.sort_up)
    view.go_to(0, 2)
    QTest.keyClick(view, Qt.Key.Key_Space, CONTROL)
    clock("fill the State column down", grid.fill_down)
    clock("undo", undo.undo)
    grid.find_text()
    grid.find_strip.wanted.setText("77")
    clock("find in all cells, go to the first", grid.find_next)
    clock("go to the next one", grid.find_next)
    clock("replace in all of them", grid.find_strip.replace_all_asked.emit)
    clock("undo", undo.undo)
    grid.find_strip.put_away()
    clock("hide a column", lambda: grid.shown_columns.set_hidden({"cause"}))
    view.go_to(count // 2, 1)
    clock("one cell edited", lambda: grid.model.setData(grid.model.index(count // 2, 1), "5"))
    clock("one row inserted in the middle", grid.insert_rows)
    clock("that row deleted", grid.delete_rows)
    clock("jump to the last row", lambda: view.go_to(count, 0))
    clock("next unread row, none there", grid.show_next_unread)
    for _ in range(3):
        clock("repaint of what is visible", view.viewport().repaint)
    # The platform without a screen keeps what was copied beyond the end of Python, and ends in a fault.
    QGuiApplication.clipboard().clear()


if __name__ == "__main__":
    main()
