"""A window that is closed while it works goes at once, and the program ends in order."""

import json
import os
import subprocess
import sys
from pathlib import Path

PROGRAM = Path(__file__).with_name("closing_at_work.py")


def test_closing_while_all_workers_are_busy_ends_the_program_in_order(tmp_path):
    # A process of its own, for it is the exit status that counts; it takes some 3 s to start.
    environment = os.environ | {"QT_QPA_PLATFORM": "offscreen", "PYTHONPATH": str(PROGRAM.parents[2])}
    ended = subprocess.run(
        [sys.executable, str(PROGRAM), str(tmp_path)], env=environment, capture_output=True, text=True, timeout=120
    )
    assert ended.returncode == 0, ended.stderr
    told = json.loads(ended.stdout)
    assert told["closed"]
    assert told["threads"] == []
    assert told["hidden"] < 1.0
    # Measured 0.3 s: a step of a calibration. The bound is for a machine under load.
    assert told["ended"] < 5.0
    assert "Traceback" not in ended.stderr
