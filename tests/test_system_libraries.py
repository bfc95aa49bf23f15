"""Why no window can open is said in a sentence with its remedy, and never by Qt's abort."""

import os
import shutil
import socket
import subprocess
import sys
import tempfile
from pathlib import Path

import pytest

from reliability_app import system_libraries
from reliability_app.system_libraries import display_reason, find_missing, platforms_to_try

on_linux = pytest.mark.skipif(sys.platform != "linux", reason="only Linux leaves libraries to the system")


def without(monkeypatch, *names):
    """Let the named libraries be missing, whatever this machine has."""
    monkeypatch.setattr(system_libraries, "_can_be_loaded", lambda name: name not in names)
    monkeypatch.setattr(system_libraries, "_a_font_is_installed", lambda: True)


def in_a_new_process(code, **environment):
    """Run `code` with no screen but what `environment` names; return what it printed."""
    clean = {k: v for k, v in os.environ.items() if k not in {"DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"}}
    return subprocess.run(
        [sys.executable, "-c", code],
        env=clean | environment,
        capture_output=True,
        text=True,
        timeout=60,
        check=True,
    ).stdout.strip()


SAY_THE_REASON = "from reliability_app.system_libraries import display_reason; print(display_reason())"


@pytest.mark.parametrize(
    ("environment", "platforms"),
    [
        ({}, ()),
        ({"DISPLAY": ":0"}, ("xcb",)),
        ({"DISPLAY": ""}, ()),
        ({"WAYLAND_DISPLAY": "wayland-0"}, ("wayland",)),
        ({"DISPLAY": ":0", "WAYLAND_DISPLAY": "wayland-0"}, ("xcb", "wayland")),
        (
            {"DISPLAY": ":0", "WAYLAND_DISPLAY": "wayland-0", "XDG_SESSION_TYPE": "wayland"},
            ("wayland", "xcb"),
        ),
        ({"QT_QPA_PLATFORM": "offscreen", "DISPLAY": ":0"}, ("offscreen",)),
        ({"QT_QPA_PLATFORM": "offscreen:fontdb=freetype"}, ("offscreen",)),
        ({"QT_QPA_PLATFORM": "wayland-egl;xcb"}, ("wayland", "xcb")),
    ],
)
def test_the_platforms_are_those_that_qt_will_try(environment, platforms):
    assert platforms_to_try(environment) == platforms


@on_linux
def test_no_screen_is_said_with_what_to_do():
    reason = display_reason({})
    assert reason is not None
    assert "neither DISPLAY nor WAYLAND_DISPLAY" in reason
    assert "desktop session" in reason


@on_linux
def test_a_missing_library_is_named_with_the_line_that_installs_it(monkeypatch):
    without(monkeypatch, "libxcb-cursor.so.0", "libxkbcommon-x11.so.0")
    reason = display_reason({"DISPLAY": ":0"})
    assert reason is not None
    assert "libxcb-cursor.so.0, libxkbcommon-x11.so.0" in reason
    assert reason.endswith("sudo apt-get install -y libxcb-cursor0 libxkbcommon-x11-0")


@on_linux
def test_libraries_of_another_platform_are_not_asked_for(monkeypatch):
    without(monkeypatch, "libxcb-cursor.so.0", "libwayland-client.so.0")
    assert display_reason({"QT_QPA_PLATFORM": "offscreen"}) is None
    assert find_missing(["xcb"]).packages == ("libxcb-cursor0",)
    assert find_missing(["xcb", "wayland"]).packages == ("libxcb-cursor0", "libwayland-client0")


def test_a_system_without_any_font_is_told_to_install_one(monkeypatch):
    monkeypatch.setattr(system_libraries, "_can_be_loaded", lambda _: True)
    monkeypatch.setattr(system_libraries, "_a_font_is_installed", lambda: False)
    missing = find_missing(["offscreen"])
    assert missing.names == ("a font",)
    assert missing.sentence.endswith("apt-get install -y fonts-dejavu-core")


def test_a_font_counts_by_its_file(monkeypatch, tmp_path):
    monkeypatch.setattr(system_libraries, "_FONT_FOLDERS", (str(tmp_path),))
    (tmp_path / "deep").mkdir()
    (tmp_path / "deep" / "readme.txt").touch()
    assert not system_libraries._a_font_is_installed()
    (tmp_path / "deep" / "Some.TTF").touch()
    assert system_libraries._a_font_is_installed()


@on_linux
def test_the_loader_itself_is_asked():
    assert system_libraries._can_be_loaded("libc.so.6")
    assert not system_libraries._can_be_loaded("librigpaper-no-such-library.so.0")


def test_pyside_missing_is_said_with_the_line_that_installs_it(monkeypatch):
    monkeypatch.setattr(system_libraries, "_pyside_is_installed", lambda: False)
    reason = display_reason({"DISPLAY": ":0"})
    assert reason is not None
    assert reason.startswith("No window: PySide6 is not installed")
    assert "pip install PySide6-Essentials" in reason


def test_other_systems_bring_their_own_screen(monkeypatch):
    monkeypatch.setattr(sys, "platform", "win32")
    assert display_reason({}) is None


@on_linux
def test_one_working_screen_of_two_is_enough(monkeypatch):
    without(monkeypatch, "libwayland-client.so.0")
    monkeypatch.setattr(system_libraries, "_x_server_answers", lambda _: True)
    both = {"DISPLAY": ":0", "WAYLAND_DISPLAY": "wayland-0", "XDG_SESSION_TYPE": "wayland"}
    assert display_reason(both) is None


@on_linux
def test_a_display_that_does_not_answer_is_no_screen():
    if find_missing(["xcb"]):
        pytest.skip("the X libraries themselves are missing here")
    assert "no X server answers at DISPLAY=':4711'" in in_a_new_process(SAY_THE_REASON, DISPLAY=":4711")


@on_linux
def test_a_wayland_name_counts_only_when_something_listens(monkeypatch):
    without(monkeypatch)
    # A socket's path may have some 100 characters at most: shorter than pytest's folders can be.
    with tempfile.TemporaryDirectory() as folder:
        environment = {"WAYLAND_DISPLAY": "wayland-7", "XDG_RUNTIME_DIR": folder}
        reason = display_reason(environment)
        assert reason is not None
        assert "nothing answers at WAYLAND_DISPLAY='wayland-7'" in reason
        with socket.socket(socket.AF_UNIX) as screen:
            screen.bind(str(Path(folder) / "wayland-7"))
            screen.listen()
            assert display_reason(environment) is None


@on_linux
@pytest.mark.skipif(shutil.which("xvfb-run") is None, reason="needs xvfb-run (Debian: xvfb xauth)")
def test_where_no_reason_is_given_qt_opens_a_window_on_the_screen():
    if find_missing(["xcb"]):
        pytest.skip("the X libraries themselves are missing here")
    open_it = "from PySide6.QtWidgets import QApplication; print(QApplication([]).platformName())"
    run = subprocess.run(
        [
            "xvfb-run",
            "-a",
            "env",
            "-u",
            "QT_QPA_PLATFORM",
            "-u",
            "WAYLAND_DISPLAY",
            sys.executable,
            "-c",
            f"{SAY_THE_REASON}; {open_it}",
        ],
        capture_output=True,
        text=True,
        timeout=120,
        check=True,
    )
    assert run.stdout.split() == ["None", "xcb"]


def test_the_question_is_asked_without_qt():
    code = "import sys, reliability_app.system_libraries as s; s.display_reason(); print(*sys.modules)"
    assert not any(name.startswith("PySide6.Qt") for name in in_a_new_process(code).split())
