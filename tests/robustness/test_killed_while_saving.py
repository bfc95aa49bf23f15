"""kill -9 at any instant of a save leaves the old file or the new one, whole, and a whole backup."""

import subprocess
import sys
from collections import Counter

KILLS = 25


def test_a_save_that_is_killed_leaves_the_old_or_the_new_file(tmp_path):
    run = subprocess.run(
        [sys.executable, "-m", "tests.robustness.saving_until_killed", tmp_path / "rig.json", str(KILLS)],
        capture_output=True,
        text=True,
        check=False,
    )
    assert run.returncode == 0, run.stderr
    found = [line.split() for line in run.stdout.splitlines()]
    assert len(found) == KILLS
    # The kills did hit saves in different states, some of them in the middle of writing.
    assert len(Counter(number for number, _, _ in found)) == 3
    assert any(half_files != "0" for _, _, half_files in found)
