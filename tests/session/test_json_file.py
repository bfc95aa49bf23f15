"""Saving leaves the old file or the new one, keeps the state before, and says in a sentence why it failed."""

import errno
import os
import resource
import stat
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import pytest

from reliability_app.session.document import Session
from reliability_app.session.json_file import LARGEST, backup_of, is_session_file, load, save
from reliability_app.session.json_format import to_text
from reliability_app.session.session_errors import NotSaved, SessionUnreadable

as_root = pytest.mark.skipif(os.geteuid() != 0, reason="needs root to mount a disk or to drop privileges")


@pytest.fixture
def path(tmp_path):
    return tmp_path / "rig.json"


@pytest.fixture
def small_disk(tmp_path):
    disk = tmp_path / "disk"
    disk.mkdir()
    mounted = subprocess.run(
        ["mount", "-t", "tmpfs", "-o", "size=128k", "tmpfs", disk], check=False, capture_output=True
    )
    if mounted.returncode != 0:
        pytest.skip("no disk can be mounted here")
    yield disk
    subprocess.run(["umount", disk], check=True)


def saved(path, title="first"):
    session = Session(title=title)
    save(session, path)
    return session


def only_whole_files(folder):
    """The names of all files in `folder`, none of which may be left over from writing."""
    return sorted(name for name in os.listdir(folder) if not name.endswith((".json", ".json~")))


def test_what_was_saved_is_opened_again(path):
    session = saved(path)
    assert load(path).title == "first"
    assert path.read_text(encoding="utf-8") == to_text(session)
    assert os.listdir(path.parent) == ["rig.json"]


def test_the_previous_state_stays_as_a_backup(path):
    for title in ("first", "second", "third"):
        saved(path, title)
    assert load(path).title == "third"
    assert load(backup_of(path)).title == "second"
    assert only_whole_files(path.parent) == []


def test_saving_what_is_there_already_leaves_file_and_backup_alone(path):
    saved(path, "first")
    saved(path, "second")
    before = path.stat()
    saved(path, "second")
    assert (path.stat().st_ino, path.stat().st_mtime_ns) == (before.st_ino, before.st_mtime_ns)
    assert load(backup_of(path)).title == "first"


def test_a_backup_is_kept_where_files_cannot_be_linked(path, monkeypatch):
    def refuse(*_):
        raise OSError(errno.EPERM, "Operation not permitted")

    saved(path, "first")
    monkeypatch.setattr(os, "link", refuse)
    saved(path, "second")
    assert (load(path).title, load(backup_of(path)).title) == ("second", "first")
    assert only_whole_files(path.parent) == []


@pytest.mark.parametrize("mode", [0o600, 0o644, 0o664])
def test_the_mode_of_a_file_is_kept(path, mode):
    saved(path, "first")
    path.chmod(mode)
    saved(path, "second")
    assert stat.S_IMODE(path.stat().st_mode) == mode


def test_a_new_file_has_the_mode_that_the_user_set_for_new_files(path):
    before = os.umask(0o027)
    try:
        saved(path)
    finally:
        os.umask(before)
    assert stat.S_IMODE(path.stat().st_mode) == 0o640


def test_a_symbolic_link_stays_one(path, tmp_path):
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    path.symlink_to(elsewhere / "real.json")
    saved(path, "first")
    saved(path, "second")
    assert path.is_symlink()
    assert load(elsewhere / "real.json").title == "second"
    assert load(elsewhere / "real.json~").title == "first"


def test_files_left_over_from_a_killed_program_are_removed_when_they_are_old(path):
    old, fresh = (path.parent / f".rig.json.{name}.rigpaper-saving" for name in ("old", "fresh"))
    for left_over in (old, fresh):
        left_over.write_text("half a f")
    yesterday = time.time() - 86400
    os.utime(old, (yesterday, yesterday))
    saved(path)
    assert (old.exists(), fresh.exists()) == (False, True)


def refusal_to_save(path):
    with pytest.raises(NotSaved) as refusal:
        saved(path, "second" * 100_000)
    sentence = str(refusal.value)
    assert sentence.startswith(f"{path} was not saved: ")
    assert "your work is still open here. Put that right and save again, or save it in another place." in sentence
    return sentence


@as_root
def test_a_full_disk_leaves_the_old_file_and_is_said(small_disk):
    path = small_disk / "rig.json"
    saved(path, "first")
    assert "the disk is full. The file there is as it was" in refusal_to_save(path)
    assert load(path).title == "first"
    assert os.listdir(small_disk) == ["rig.json"]


@as_root
def test_a_disk_that_can_only_be_read_is_said(small_disk):
    path = small_disk / "rig.json"
    saved(path, "first")
    subprocess.run(["mount", "-o", "remount,ro", small_disk], check=True)
    assert "that disk can only be read" in refusal_to_save(path)
    assert "No file was written there" in refusal_to_save(small_disk / "new.json")
    assert load(path).title == "first"


def test_a_full_disk_without_one(path, monkeypatch):
    # As above, where no disk can be mounted: flushing is the last moment at which a file system can say so.
    def full(_):
        raise OSError(errno.ENOSPC, "No space left on device")

    saved(path, "first")
    monkeypatch.setattr(os, "fsync", full)
    assert "the disk is full" in refusal_to_save(path)
    assert load(path).title == "first"
    assert os.listdir(path.parent) == ["rig.json"]


def test_a_limit_on_the_size_of_files_is_said(path):
    saved(path, "first")
    soft, hard = resource.getrlimit(resource.RLIMIT_FSIZE)
    resource.setrlimit(resource.RLIMIT_FSIZE, (100_000, hard))
    try:
        assert "the system does not let the file grow that large" in refusal_to_save(path)
    finally:
        resource.setrlimit(resource.RLIMIT_FSIZE, (soft, hard))
    assert load(path).title == "first"


@pytest.mark.parametrize("step", ["link", "replace"])
def test_a_fault_between_the_steps_of_saving_leaves_the_old_file(path, monkeypatch, step):
    def interrupt(*_):
        raise KeyboardInterrupt

    saved(path, "first")
    with monkeypatch.context() as patch:
        patch.setattr(os, step, interrupt)
        with pytest.raises(KeyboardInterrupt):
            saved(path, "second")
    assert load(path).title == "first"
    assert only_whole_files(path.parent) == []


AS_NOBODY = """
import os, sys
from pathlib import Path
from reliability_app.session.document import Session
from reliability_app.session.json_file import load, save
load(Path(sys.argv[1]))  # so that all modules are there before privileges are dropped
os.setgid(65534); os.setuid(65534)
for action in (lambda: save(Session(title="mine"), Path(sys.argv[1])), lambda: load(Path(sys.argv[1]))):
    try:
        action()
    except Exception as error:
        print(type(error).__name__, error)
    else:
        print("done")
"""


@as_root
@pytest.mark.parametrize(
    ("file_mode", "folder_mode", "saving", "opening"),
    [
        (0o644, 0o755, "NotSaved", "done"),
        (0o444, 0o777, "NotSaved", "done"),
        (0o600, 0o777, "NotSaved", "SessionUnreadable"),
        (0o666, 0o777, "done", "done"),
    ],
    ids=["read-only folder", "write-protected file", "secret file", "shared file"],
)
def test_what_a_user_is_not_allowed_is_said(file_mode, folder_mode, saving, opening):
    with tempfile.TemporaryDirectory() as name:  # pytest's own folders are closed to other users
        folder, path = Path(name), Path(name) / "rig.json"
        saved(path, "first")
        path.chmod(file_mode)
        folder.chmod(folder_mode)
        run = subprocess.run([sys.executable, "-c", AS_NOBODY, path], capture_output=True, text=True, check=True)
        lines = run.stdout.splitlines()
        assert [line.partition(" ")[0] for line in lines] == [saving, opening]
        assert all("you are not allowed to" in line for line in lines if line != "done")
        assert load(path).title == ("mine" if saving == "done" else "first")
        assert only_whole_files(folder) == []


def test_a_folder_in_the_place_of_the_file_is_said(path):
    path.mkdir()
    assert "it is a folder" in refusal_to_save(path)
    assert path.is_dir()


def test_a_pipe_in_the_place_of_the_file_is_left_alone(path):
    os.mkfifo(path)
    assert "it is a device or pipe" in refusal_to_save(path)
    assert stat.S_ISFIFO(path.stat().st_mode)


@as_root
def test_a_device_in_the_place_of_the_file_is_left_alone(path):
    os.mknod(path, stat.S_IFCHR | 0o666, os.makedev(1, 3))  # what /dev/null is
    assert "it is a device or pipe" in refusal_to_save(path)
    assert stat.S_ISCHR(path.stat().st_mode)


def test_a_folder_that_is_not_there_is_said(tmp_path):
    assert "there is no such file or folder" in refusal_to_save(tmp_path / "none" / "rig.json")


def test_a_name_that_is_too_long_is_said(tmp_path):
    assert "the name is too long" in refusal_to_save(tmp_path / ("x" * 300 + ".json"))


def test_links_that_lead_in_a_circle_are_said(path):
    path.symlink_to(path)
    assert "its symbolic links lead in a circle" in refusal_to_save(path)


def refusal_to_open(path):
    with pytest.raises(SessionUnreadable) as refusal:
        load(path)
    assert str(refusal.value).startswith(f"{path} cannot be opened: ")
    return str(refusal.value)


def test_a_missing_file_is_said(path):
    assert "there is no such file or folder" in refusal_to_open(path)


def test_a_folder_is_not_opened(tmp_path):
    assert "it is a folder, not a file" in refusal_to_open(tmp_path)


def test_a_pipe_is_not_waited_for(path):
    os.mkfifo(path)
    assert "it is a device or pipe, not a file" in refusal_to_open(path)


def test_a_file_that_would_fill_the_memory_is_not_read(path):
    with path.open("wb") as file:
        file.truncate(LARGEST + 1)
    assert "no session above 500,000,000 bytes is opened" in refusal_to_open(path)


def test_a_file_that_is_not_utf_8_is_refused_with_its_line(path):
    saved(path)
    path.write_bytes(path.read_bytes().replace(b'"title": "first"', b'"title": "S\xfcd"'))
    assert "its text is not UTF-8, so it is no session (line 5)" in refusal_to_open(path)


def test_a_mark_of_utf_8_and_other_line_ends_are_no_obstacle(path):
    saved(path)
    path.write_bytes(b"\xef\xbb\xbf" + path.read_bytes().replace(b"\n", b"\r\n"))
    assert load(path).title == "first"


def test_the_backup_is_pointed_out_when_a_file_is_damaged(path):
    saved(path, "first")
    saved(path, "second")
    path.write_text(path.read_text()[:200])
    sentence = refusal_to_open(path)
    assert "the file breaks off in the middle" in sentence
    assert sentence.endswith(f"The state before its last saving is in {backup_of(path)}: open that instead.")
    assert load(backup_of(path)).title == "first"


@pytest.mark.parametrize(
    ("name", "content", "expected"),
    [
        ("rig.json", "", True),
        ("RIG.JSON", "unit,life\n", True),
        ("rig.json~", "", True),
        ("rig", ' \ufeff{"format"', False),
        ("rig", '\ufeff\n {"format"', True),
        ("rig.csv", "unit,life\n", False),
        ("rig.txt", "", False),
    ],
)
def test_sessions_are_told_from_tables(tmp_path, name, content, expected):
    (tmp_path / name).write_text(content, encoding="utf-8")
    assert is_session_file(tmp_path / name) is expected


def test_a_missing_file_is_told_by_its_name(tmp_path):
    assert is_session_file(tmp_path / "rig.json")
    assert not is_session_file(tmp_path / "rig.csv")


def test_a_pipe_is_told_by_its_name_without_waiting_for_it(tmp_path):
    os.mkfifo(tmp_path / "pipe")
    assert not is_session_file(tmp_path / "pipe")
