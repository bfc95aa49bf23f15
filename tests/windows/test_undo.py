"""The undo stack: edits as steps, gestures merged, the mark of what is saved, faults kept out."""

import pytest

from reliability_app.session.document import Basis, LifeAsk, Session
from reliability_app.session.edits import Block, BlocksEdit, ChangeAsks, ChangeBasis, ChangeTitle, InsertRows
from reliability_app.windows.undo import UndoStack

pytestmark = pytest.mark.usefixtures("qapp")


def drag(session: Session, percent: float, key: str | None) -> ChangeAsks:
    return ChangeAsks(session.asks, (LifeAsk(percent), *session.asks[1:]), key)


def test_a_step_is_undone_redone_and_named():
    session, stack = Session(), UndoStack()
    stack.push_edit(session, ChangeTitle("", "Rig 4"))
    assert session.title == "Rig 4"
    assert stack.undoText() == "change of title"
    stack.undo()
    assert session.title == ""
    stack.redo()
    assert session.title == "Rig 4"


def test_the_session_is_told_once_per_step():
    session, stack = Session(), UndoStack()
    told = []
    session.listen(told.append)
    stack.push_edit(session, ChangeTitle("", "Rig 4"))
    assert len(told) == 1
    stack.undo()
    stack.redo()
    assert len(told) == 3


def test_the_parts_of_one_drag_are_one_step_and_two_drags_are_two():
    session, stack = Session(), UndoStack()
    for percent in (9.0, 8.0, 7.0):
        stack.push_edit(session, drag(session, percent, "drag 1"))
    for percent in (6.0, 5.0):
        stack.push_edit(session, drag(session, percent, "drag 2"))
    assert stack.count() == 2
    stack.undo()
    assert session.asks[0] == LifeAsk(7.0)
    stack.undo()
    assert session.asks[0] == LifeAsk(10.0)
    stack.redo()
    stack.redo()
    assert session.asks[0] == LifeAsk(5.0)


def test_nothing_merges_without_a_key_and_nothing_merges_across_kinds():
    session, stack = Session(), UndoStack()
    stack.push_edit(session, drag(session, 9.0, None))
    stack.push_edit(session, drag(session, 8.0, None))
    stack.push_edit(session, drag(session, 7.0, "typing"))
    stack.push_edit(session, ChangeBasis(0, Basis(), Basis(confidence=0.9), "typing"))
    stack.push_edit(session, ChangeBasis(0, Basis(confidence=0.9), Basis(confidence=0.99), "typing"))
    assert stack.count() == 4


def test_a_saved_state_is_clean_and_is_not_merged_away():
    session, stack = Session(), UndoStack()
    stack.push_edit(session, drag(session, 9.0, "drag"))
    stack.setClean()
    assert stack.isClean()
    stack.push_edit(session, drag(session, 8.0, "drag"))
    assert not stack.isClean()
    assert stack.count() == 2
    stack.undo()
    assert stack.isClean()
    assert session.asks[0] == LifeAsk(9.0)


def test_an_edit_that_fails_raises_and_leaves_no_step():
    session, stack = Session(), UndoStack()
    with pytest.raises(KeyError):
        stack.push_edit(session, BlocksEdit(0, [Block(0, ("no such column",), [["1"]])]))
    assert stack.count() == 0
    stack.push_edit(session, ChangeTitle("", "still works"))
    assert session.title == "still works"


def test_an_edit_pushed_from_within_an_edit_is_refused():
    session, stack = Session(), UndoStack()
    session.listen(lambda _: stack.push_edit(session, ChangeTitle("a", "b")))
    with pytest.raises(RuntimeError, match="while another was being carried out"):
        stack.push_edit(session, InsertRows(0, 0))


def test_only_the_latest_step_is_undone_on_request():
    session, stack = Session(), UndoStack()
    first, second = ChangeTitle("", "a"), ChangeTitle("a", "b")
    stack.push_edit(session, first)
    stack.push_edit(session, second)
    assert stack.latest() is second
    assert not stack.undo_if_latest(first)
    assert session.title == "b"
    assert stack.undo_if_latest(second)
    assert session.title == "a"
    assert stack.latest() is first
    stack.undo()
    assert stack.latest() is None


def test_undo_and_redo_tell_which_edit_but_a_first_push_does_not():
    session, stack = Session(), UndoStack()
    retraced = []
    stack.retraced.connect(retraced.append)
    edit = ChangeTitle("", "a")
    stack.push_edit(session, edit)
    assert retraced == []
    stack.undo()
    stack.redo()
    assert retraced == [edit, edit]


def test_the_actions_name_the_step_and_have_fixed_keys():
    session, stack = Session(), UndoStack()
    undo, redo = stack.make_actions(stack)
    assert not undo.isEnabled()
    stack.push_edit(session, ChangeTitle("", "a"))
    assert undo.text() == "Undo change of title"
    undo.trigger()
    assert redo.isEnabled()
    assert [key.toString() for key in undo.shortcuts()] == ["Ctrl+Z"]
    assert [key.toString() for key in redo.shortcuts()] == ["Ctrl+Y", "Ctrl+Shift+Z"]
