"""Start-up as ratios within one run: python tests/benchmarks/bench_start.py

From process start to the first painted window, and to the first painted chart, against a bare PySide6
window; and the whole of `rigpaper read` on a small CSV against a Python that only imports numpy and scipy.
All under the offscreen platform, with settings and state in a folder of their own, best of several runs.
"""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).parents[2]
RUNS = 7
HEAVY = ("PySide6", "pyqtgraph", "pandas", "scipy.stats", "jinja2", "openpyxl")

# Watches paint events from inside the process: the first on a top-level window, the first on a chart.
WATCH = """
import os, sys, time
from PySide6 import QtCore, QtWidgets
PAINT = QtCore.QEvent.Type.Paint
STARTED = float(os.environ["BENCHMARK_STARTED"])
WANTED = os.environ["BENCHMARK_WANTED"]
def is_chart(widget):
    owner = widget.parentWidget()
    return any(k.__module__.startswith("pyqtgraph") for w in (widget, owner) if w for k in type(w).__mro__)
class Watched(QtWidgets.QApplication):
    def notify(self, receiver, event):
        painted = event.type() == PAINT and isinstance(receiver, QtWidgets.QWidget)
        done = super().notify(receiver, event)
        if painted and (receiver.isWindow() if WANTED == "window" else is_chart(receiver)):
            print(time.time() - STARTED, flush=True)
            os._exit(0)
        return done
"""
BARE = """
app = Watched([])
window = QtWidgets.QMainWindow()
window.resize(1200, 800)
window.show()
app.exec()
"""
PROGRAM = """
QtWidgets.QApplication = Watched
from reliability_app.command_line import main
main(sys.argv[1:])
"""
READ = """
import sys
from reliability_app.command_line import main
status = main(["read", sys.argv[1]])
loaded = [name for name in sys.argv[2].split(",") if name in sys.modules]
print("status", status, "loaded", ",".join(loaded) or "none", file=sys.stderr)
"""
TABLE = "Unit,Life,State\n" + "".join(
    f"P-{number:02d},{life},{state}\n"  # invented lives
    for number, (life, state) in enumerate(
        [
            (412, "failed"),
            (655, "failed"),
            (730, "running"),
            (812, "failed"),
            (990, "failed"),
            (1500, "running"),
        ]
    )
)


def python(script: str, *words: str, wanted: str = "") -> tuple[float, str, str]:
    """Run a script in a new process, at home in a new folder; return seconds, standard output and error."""
    with tempfile.TemporaryDirectory() as home:
        table = Path(home, "rig.csv")
        table.write_text(TABLE, encoding="utf-8")
        environment = os.environ | {
            "QT_QPA_PLATFORM": "offscreen",
            "PYTHONPATH": str(ROOT),
            "HOME": home,
            "XDG_CONFIG_HOME": str(Path(home, "config")),
            "XDG_STATE_HOME": str(Path(home, "state")),
            "XDG_DATA_HOME": str(Path(home, "data")),
            "BENCHMARK_WANTED": wanted,
            "BENCHMARK_STARTED": repr(time.time()),
        }
        command = [sys.executable, "-c", script, *(word.format(table=table) for word in words)]
        start = time.perf_counter()
        try:
            run = subprocess.run(
                command, env=environment, cwd=home, capture_output=True, text=True, timeout=20, check=False
            )
        except subprocess.TimeoutExpired:
            return float("inf"), "", "nothing of the kind was painted within 20 s"
        return time.perf_counter() - start, run.stdout, run.stderr


def first_paint(script: str, wanted: str, *words: str) -> float:
    """Shortest time from process start to the paint wanted, in seconds; infinite if there was none."""
    best = float("inf")
    for _ in range(RUNS):
        _, out, trouble = python(WATCH + script, *words, wanted=wanted)
        try:
            best = min(best, float(out.split()[-1]))
        except (IndexError, ValueError):
            print(f"  no {wanted} was painted: {trouble.strip().splitlines()[-1:]}")
            return float("inf")
    return best


def windows() -> None:
    """First paints."""
    print("Process start to first paint (offscreen)")
    bare = first_paint(BARE, "window")
    print(f"  bare PySide6 window                {bare:7.3f} s")
    for what, wanted, words in (
        ("Rigpaper, frame, empty", "window", ()),
        ("Rigpaper, frame, given a table", "window", ("{table}",)),
        ("Rigpaper, chart of that table", "chart", ("{table}",)),
    ):
        seconds = first_paint(PROGRAM, wanted, *words)
        print(f"  {what:34s} {seconds:7.3f} s   {seconds / bare:5.2f} x the bare window")


def reading() -> None:
    """`rigpaper read` on a CSV, the whole process."""
    print("Reading a CSV of six units without a window, whole process")
    empty = min(python("pass")[0] for _ in range(RUNS))
    imports = min(python("import numpy, scipy.special, scipy.optimize")[0] for _ in range(RUNS))
    runs = [python(READ, "{table}", ",".join(HEAVY)) for _ in range(RUNS)]
    seconds = min(run[0] for run in runs)
    print(f"  an empty Python                    {empty:7.3f} s")
    print(f"  numpy, scipy.special and optimize  {imports:7.3f} s")
    print(f"  rigpaper read                      {seconds:7.3f} s   {seconds / imports:5.2f} x those imports")
    print(f"  {runs[-1][2].strip().splitlines()[-1]} (of {', '.join(HEAVY)})")


if __name__ == "__main__":
    reading()
    windows()
