"""Unsaved work is found again after a crash, and only then."""

import os
import subprocess
import sys
from datetime import datetime, timedelta
from pathlib import Path

import pytest

from reliability_app.session.document import Session, UnitSet
from reliability_app.session.recovery import RecoveryCopy, found_copies, recovery_folder
from reliability_app.session.session_errors import NotSaved, SessionUnreadable
from reliability_app.session.unit_table import UnitTable

CRASH = """
import os, signal, sys
from pathlib import Path
from reliability_app.session.document import Session
from reliability_app.session.recovery import RecoveryCopy
copy = RecoveryCopy(Path(sys.argv[1]))
for title in ("first state", "unsaved work"):
    copy.keep(Session(title=title), Path("/rigs/pump.json"))
os.kill(os.getpid(), signal.SIGKILL)
"""


def crash_with_unsaved_work(folder):
    killed = subprocess.run([sys.executable, "-c", CRASH, folder], check=False)
    assert killed.returncode == -9


def test_the_work_of_a_killed_window_is_found_and_opened(tmp_path):
    crash_with_unsaved_work(tmp_path)

    (copy,) = found_copies(tmp_path)

    assert copy.load().title == "unsaved work"
    assert copy.original == Path("/rigs/pump.json")
    assert abs(datetime.now().astimezone() - copy.written) < timedelta(minutes=1)
    copy.remove()
    assert found_copies(tmp_path) == []
    assert os.listdir(tmp_path) == []


def test_the_copy_of_a_window_that_is_alive_is_not_offered(tmp_path):
    copy = RecoveryCopy(tmp_path)
    copy.keep(Session(), None)
    assert found_copies(tmp_path) == []
    copy.discard()


def test_a_clean_close_leaves_nothing(tmp_path):
    copy = RecoveryCopy(tmp_path)
    copy.keep(Session(), None)
    copy.discard()
    copy.discard()
    assert os.listdir(tmp_path) == []


def test_work_goes_on_after_a_discarded_copy(tmp_path):
    copy = RecoveryCopy(tmp_path)
    copy.keep(Session(title="before saving"), None)
    copy.discard()
    copy.keep(Session(title="after saving"), None)
    assert len(list(tmp_path.glob("*.recovery"))) == 1
    assert found_copies(tmp_path) == []
    copy.discard()


def test_a_session_that_was_never_saved_has_no_original(tmp_path):
    copy = RecoveryCopy(tmp_path)
    table = UnitTable.from_rows([{"unit": "P-01", "life": "12,5?", "state": "failed"}])
    copy.keep(Session(sets=[UnitSet("A", table)]), None)
    copy._lock.release()  # as the end of the process does

    (found,) = found_copies(tmp_path)

    assert found.original is None
    assert found.load().sets[0].table.text(0, "life") == "12,5?"


def test_the_latest_copy_comes_first(tmp_path):
    for title, age in (("old", 300), ("new", 0)):
        copy = RecoveryCopy(tmp_path)
        copy.keep(Session(title=title), None)
        copy._lock.release()
        then = datetime.now().timestamp() - age
        os.utime(copy._path, (then, then))
    assert [found.load().title for found in found_copies(tmp_path)] == ["new", "old"]


@pytest.mark.parametrize(
    "content", [b"", b"\xff\xfe\x00", b"no json\n{}", b'{"original": 5}\n{"format": "x"}', b"[]\n"]
)
def test_a_damaged_copy_is_offered_and_refused_with_a_sentence(tmp_path, content):
    (tmp_path / "abc.recovery").write_bytes(content)
    (found,) = found_copies(tmp_path)
    assert found.original is None
    with pytest.raises(SessionUnreadable, match="cannot be opened"):
        found.load()


def test_no_folder_yet_means_no_copies(tmp_path):
    assert found_copies(tmp_path / "none") == []


def test_the_usual_folder_is_in_the_users_state(monkeypatch, tmp_path):
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path))
    assert recovery_folder() == tmp_path / "rigpaper" / "recovery"
    copy = RecoveryCopy()
    copy.keep(Session(), None)
    assert recovery_folder().stat().st_mode & 0o777 == 0o700
    copy.discard()


def test_a_folder_that_cannot_be_made_is_said(tmp_path):
    (tmp_path / "file").write_text("")
    with pytest.raises(NotSaved, match=r"No recovery copy is kept.*Save your work often"):
        RecoveryCopy(tmp_path / "file" / "recovery").keep(Session(), None)
