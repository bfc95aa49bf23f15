"""Files through the real window: at most two seconds of work are lost, and nobody else's work is overwritten."""

import os
from pathlib import Path

from pytestqt.qtbot import QtBot

from reliability_app.session.document import Session
from reliability_app.session.edits import ChangeTitle
from reliability_app.session.json_file import backup_of, load, save
from tests.journeys.conftest import Desk

KEPT_WITHIN_MS = 2000


def test_edit_upon_edit_does_not_put_off_the_recovery_copy(desk: Desk, qtbot: QtBot) -> None:
    desk.window.undo.push_edit(desk.window.session, ChangeTitle("", "Pumps"))
    for _ in range(12):  # an edit every 0.2 s: never a quiet 1.5 s
        desk.window.files.note_edit()
        qtbot.wait(KEPT_WITHIN_MS // 10)
    assert list((desk.folder / "recovery").glob("*.recovery"))


def test_a_file_that_another_program_changed_is_told_and_then_saved_over_when_meant(desk: Desk, tmp_path: Path) -> None:
    path = tmp_path / "rig.json"
    save(Session(title="theirs"), path)
    assert desk.window.files.open(path)
    desk.wait_for_answer()
    save(Session(title="changed"), path)
    os.utime(path, ns=(0, path.stat().st_mtime_ns + 5_000_000_000))
    assert not desk.window.files.save()
    assert "another program has changed it" in desk.message
    assert load(path).title == "changed"
    assert desk.window.files.save()
    assert load(path).title == "theirs"
    assert load(backup_of(path)).title == "changed"
    assert desk.window.files.save()  # its own saving is no change by another
