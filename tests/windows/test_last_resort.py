"""An exception nobody caught: the work is kept before anything is said, and the same fault is told once."""

import sys

import pytest
from PySide6.QtCore import QObject, Signal

from reliability_app.engine.cautions import Severity
from reliability_app.session.messages import Messages
from reliability_app.windows.crash import AGAIN_AFTER_S, LastResort, install_last_resort


class Bell(QObject):
    rung = Signal()


@pytest.fixture
def said():
    return []


@pytest.fixture
def messages(said):
    messages = Messages()
    messages.listen(said.append)
    return messages


@pytest.fixture
def own_hook():
    before = sys.excepthook
    yield
    sys.excepthook = before


def raised(text="spring", kind=ValueError):
    try:
        raise kind(text)
    except kind as trouble:
        return kind, trouble, trouble.__traceback__


def raised_elsewhere(line):
    code = compile("\n" * line + "raise ValueError('x')", "elsewhere.py", "exec")
    try:
        exec(code)
    except ValueError as trouble:
        return ValueError, trouble, trouble.__traceback__


@pytest.mark.usefixtures("qapp", "own_hook")
def test_a_slot_that_raises_keeps_the_work_before_it_is_told(messages, said, capsys):
    order = []

    def rescue():
        order.append(len(said))
        return "Your work was kept."

    install_last_resort(rescue, messages)
    # Straight to the hook Qt's binding calls: pytest-qt would take it for a failure of the test.
    bell = Bell()
    bell.rung.connect(lambda: sys.excepthook(*raised()))
    bell.rung.emit()
    assert order == [0]
    assert [(one.severity, one.text) for one in said] == [
        (Severity.SERIOUS, "Something went wrong inside the program (ValueError: spring). Your work was kept.")
    ]
    assert "ValueError: spring" in capsys.readouterr().err


@pytest.mark.usefixtures("capsys")
def test_the_same_fault_is_told_once_and_again_only_after_a_while(messages, said):
    now = [0.0]
    rescues = []
    handle = LastResort(lambda: rescues.append(1) or "Kept.", messages, clock=lambda: now[0])
    for _ in range(100):
        handle(*raised())
    assert (len(said), len(rescues)) == (1, 1)
    handle(*raised_elsewhere(3))
    assert len(said) == 2
    now[0] = AGAIN_AFTER_S + 1
    handle(*raised())
    assert len(said) == 3


@pytest.mark.usefixtures("capsys")
def test_many_different_faults_at_once_do_not_flood_the_window(messages, said):
    handle = LastResort(lambda: "Kept.", messages, clock=lambda: 0.0)
    for line in range(50):
        handle(*raised_elsewhere(line))
    assert len(said) == 5


def test_a_rescue_that_fails_is_said_and_does_not_lead_here_again(messages, said, capsys):
    def rescue():
        handle(*raised("within"))
        raise OSError("disk full")

    handle = LastResort(rescue, messages)
    handle(*raised())
    assert len(said) == 1
    assert "could not be kept" in said[0].text
    assert "disk full" in capsys.readouterr().err


def test_a_window_that_cannot_speak_does_not_end_the_program(capsys):
    messages = Messages()

    def broken(_):
        raise RuntimeError("no window")

    messages.listen(broken)
    handle = LastResort(lambda: "Kept.", messages)
    handle(*raised())
    assert "no window" in capsys.readouterr().err
