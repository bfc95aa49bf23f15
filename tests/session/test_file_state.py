"""A file that another program has changed since it was opened is not overwritten unawares."""

import os

import pytest

from reliability_app.session.document import Session
from reliability_app.session.file_state import FileState
from reliability_app.session.json_file import backup_of, load_and_note, save
from reliability_app.session.opening import open_file
from reliability_app.session.recovery import FoundCopy, RecoveryCopy, found_copies
from reliability_app.session.session_errors import ChangedMeanwhile


@pytest.fixture
def path(tmp_path):
    save(Session(title="first"), tmp_path / "rig.json")
    return tmp_path / "rig.json"


def change(path):
    """What another program does: the same length, other bytes, a later time."""
    path.write_text(path.read_text(encoding="utf-8").replace("first", "fifth"), encoding="utf-8")
    os.utime(path, ns=(0, path.stat().st_mtime_ns + 5_000_000_000))


def test_a_file_changed_meanwhile_is_left_alone_and_told(path):
    session, seen = load_and_note(path)
    change(path)
    theirs = path.read_bytes()
    session.title = "mine"
    with pytest.raises(ChangedMeanwhile) as refusal:
        save(session, path, seen=seen)
    assert path.read_bytes() == theirs
    assert str(refusal.value).startswith(f"{path} was not saved: another program has changed it at 20")
    save(session, path)  # over the other changes, which stay as the backup
    assert backup_of(path).read_bytes() == theirs


def test_saving_again_and_again_is_no_change_by_another(path):
    session, seen = load_and_note(path)
    for title in ("second", "third", "third"):
        session.title = title
        seen = save(session, path, seen=seen)
    assert open_file(path).session.title == "third"
    assert open_file(path).seen == seen


def test_a_file_only_touched_or_gone_may_be_saved(path):
    session, seen = load_and_note(path)
    os.utime(path, ns=(0, 10))
    assert seen.still_holds(path)
    path.unlink()
    save(session, path, seen=seen)
    assert path.is_file()


def test_there_is_no_state_of_what_is_not_there(tmp_path):
    assert FileState.of(tmp_path / "none.json") is None


def test_unsaved_work_older_than_its_file_is_known_to_be(path, tmp_path):
    folder = tmp_path / "recovery"
    copy = RecoveryCopy(folder)
    copy.keep(Session(title="unsaved"), path)
    copy._lock.release()  # as if its process had ended
    found = found_copies(folder)
    assert isinstance(found[0], FoundCopy)
    assert not found[0].original_is_newer
    change(path)
    assert found[0].original_is_newer
