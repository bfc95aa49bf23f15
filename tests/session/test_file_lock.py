"""A second window is told that a file is open; a lock ends with its process, however that ends."""

import os
import signal
import subprocess
import sys

import pytest

from reliability_app.session.file_lock import FileInUse, FileLock

HOLD = """
import sys
from pathlib import Path
from reliability_app.session.file_lock import FileLock
lock = FileLock(Path(sys.argv[1]))
lock.take()
print("held" if lock.held else "not held", flush=True)
sys.stdin.read()
"""


@pytest.fixture
def session_file(tmp_path):
    path = tmp_path / "rig.json"
    path.write_text("{}")
    return path


@pytest.fixture
def other_process(session_file):
    process = subprocess.Popen(
        [sys.executable, "-c", HOLD, session_file], stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True
    )
    assert process.stdout.readline() == "held\n"
    yield process
    process.kill()
    process.communicate()


def test_a_second_window_of_the_same_process_is_told(session_file):
    with FileLock(session_file) as first, pytest.raises(FileInUse) as refusal:
        FileLock(session_file).take()
    assert str(refusal.value).startswith(f"{session_file} is open in another window already, since 20")
    assert "save this copy under another name" in str(refusal.value)
    assert not first.held


@pytest.mark.usefixtures("other_process")
def test_a_window_of_another_process_is_told(session_file):
    with pytest.raises(FileInUse, match="is open in another window already, since 20"):
        FileLock(session_file).take()


def test_two_names_of_one_file_share_its_lock(session_file, tmp_path):
    link = tmp_path / "link.json"
    link.symlink_to(session_file)
    with FileLock(session_file), pytest.raises(FileInUse, match=r"link\.json is open"):
        FileLock(link).take()


def test_the_lock_of_a_killed_process_is_recovered_at_once(session_file, other_process):
    other_process.send_signal(signal.SIGKILL)
    other_process.wait()
    assert list(session_file.parent.glob(".*.lock"))
    with FileLock(session_file) as lock:
        assert lock.held


def test_a_released_lock_leaves_nothing_behind_and_can_be_taken_again(session_file):
    lock = FileLock(session_file)
    for _ in range(2):
        lock.take()
        assert lock.held
        lock.release()
        lock.release()
        assert os.listdir(session_file.parent) == ["rig.json"]


def test_taking_a_lock_twice_keeps_it(session_file):
    with FileLock(session_file) as lock:
        lock.take()
        assert lock.held


def test_a_hidden_file_with_nonsense_in_it_does_no_harm(session_file):
    (session_file.parent / ".rig.json.lock").write_bytes(b"\xff\x00 nonsense" * 1000)
    with FileLock(session_file), pytest.raises(FileInUse, match="is open in another window"):
        FileLock(session_file).take()


def test_a_holder_that_left_no_name_is_still_respected(session_file):
    with FileLock(session_file):
        (session_file.parent / ".rig.json.lock").write_text("")
        with pytest.raises(FileInUse, match=r"is open in another window already\. What is shown"):
            FileLock(session_file).take()


def test_a_lock_file_removed_by_its_releaser_meanwhile_does_not_fool_the_next(session_file, monkeypatch):
    # The other window releases between our opening of the hidden file and our locking of it.
    first = FileLock(session_file)
    first.take()
    from reliability_app.session import file_lock

    real_lock = file_lock._lock

    def lock_after_release(descriptor):
        first.release()
        real_lock(descriptor)

    monkeypatch.setattr(file_lock, "_lock", lock_after_release)
    second = FileLock(session_file)
    second.take()
    monkeypatch.setattr(file_lock, "_lock", real_lock)
    with pytest.raises(FileInUse):
        FileLock(session_file).take()
    second.release()


def test_where_no_lock_can_be_made_nothing_is_raised(tmp_path):
    lock = FileLock(tmp_path / "no such folder" / "rig.json")
    lock.take()
    assert not lock.held
    lock.release()
