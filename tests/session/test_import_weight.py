"""Loading a session is quick to start: it imports neither Qt nor pandas nor anything else that is heavy."""

import subprocess
import sys
from pathlib import Path

SAMPLE = Path(__file__).parent / "old_versions" / "version_1.json"
LOAD = """
import sys
from pathlib import Path
from reliability_app.session.json_file import load, save
session = load(Path(sys.argv[1]))
assert session.sets[0].table.counts().running == 3
save(session, Path(sys.argv[2]))
print(*sorted({name.partition(".")[0] for name in sys.modules} | {name for name in sys.modules if "stats" in name}))
"""


def test_loading_and_saving_a_session_imports_nothing_heavy(tmp_path):
    run = subprocess.run(
        [sys.executable, "-c", LOAD, SAMPLE, tmp_path / "copy.json"], check=True, capture_output=True, text=True
    )
    imported = set(run.stdout.split())
    assert "reliability_app" in imported
    heavy = {"PySide6", "pyqtgraph", "pandas", "scipy.stats", "jinja2", "openpyxl", "python_calamine", "matplotlib"}
    assert not imported & heavy
