"""Says before Qt starts why no window can open here: no screen, no PySide6, or system libraries missing.

Qt ends the whole process with an abort when a library of its screen plugin is missing or the screen does not
answer, so the question is asked beforehand. Standard library only: the command line, `.ci/run` and a machine
without PySide6 use this module too.
"""

from __future__ import annotations

import ctypes
import importlib.util
import os
import socket
import sys
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path

# File name -> package of Debian and Ubuntu: what the wheels of PySide6 leave to the system, read from the
# NEEDED entries of 6.11 and tried in a bare Debian 12. What these packages bring along is not listed again.
_EVERY_PLATFORM = {
    "libGL.so.1": "libgl1",
    "libEGL.so.1": "libegl1",
    "libglib-2.0.so.0": "libglib2.0-0",
    "libxkbcommon.so.0": "libxkbcommon0",
    "libfontconfig.so.1": "libfontconfig1",
    "libdbus-1.so.3": "libdbus-1-3",
    "libgssapi_krb5.so.2": "libgssapi-krb5-2",
}
_FURTHER: Mapping[str, Mapping[str, str]] = {
    "xcb": {
        "libX11-xcb.so.1": "libx11-xcb1",
        "libxcb-cursor.so.0": "libxcb-cursor0",
        "libxcb-icccm.so.4": "libxcb-icccm4",
        "libxcb-image.so.0": "libxcb-image0",
        "libxcb-keysyms.so.1": "libxcb-keysyms1",
        "libxcb-randr.so.0": "libxcb-randr0",
        "libxcb-render-util.so.0": "libxcb-render-util0",
        "libxcb-shape.so.0": "libxcb-shape0",
        "libxcb-shm.so.0": "libxcb-shm0",
        "libxcb-sync.so.1": "libxcb-sync1",
        "libxcb-xfixes.so.0": "libxcb-xfixes0",
        "libxcb-xkb.so.1": "libxcb-xkb1",
        "libxkbcommon-x11.so.0": "libxkbcommon-x11-0",
    },
    "wayland": {
        "libwayland-client.so.0": "libwayland-client0",
        "libwayland-cursor.so.0": "libwayland-cursor0",
        "libwayland-egl.so.1": "libwayland-egl1",
    },
}
_FONT_FOLDERS = ("/usr/share/fonts", "/usr/local/share/fonts", "~/.local/share/fonts", "~/.fonts")
_FONT_SUFFIXES = {".ttf", ".otf", ".ttc", ".pfb"}
_INSTALL_PYSIDE = (
    f"PySide6 is not installed for this Python. Install it with: {sys.executable} -m pip install PySide6-Essentials"
)
_GO_TO_A_SCREEN = "Start Rigpaper from a desktop session, or over ssh with -X."


@dataclass(frozen=True)
class Missing:
    """What Qt needs of the system and does not find: file names, and the packages that bring them."""

    names: tuple[str, ...]
    packages: tuple[str, ...]

    @property
    def sentence(self) -> str:
        """What is missing and the one line that puts it right."""
        return (
            f"Qt needs parts of the system that are not installed here: {', '.join(self.names)}. "
            f"On Debian or Ubuntu this line installs them: sudo apt-get install -y {' '.join(self.packages)}"
        )


def display_reason(environment: Mapping[str, str] = os.environ) -> str | None:
    """Say why no window can open here, in a sentence with the remedy; None when one can.

    Where several screen systems are offered (Wayland and X11) one that works is enough: Qt tries each.
    """
    if not _pyside_is_installed():
        return f"No window: {_INSTALL_PYSIDE}"
    if sys.platform != "linux":
        return None
    platforms = platforms_to_try(environment)
    if not platforms:
        return f"No window: neither DISPLAY nor WAYLAND_DISPLAY names a screen. {_GO_TO_A_SCREEN}"
    reasons = [_platform_reason(platform, environment) for platform in platforms]
    return None if None in reasons else reasons[0]


def drawing_reason() -> str | None:
    """Say why no picture can be drawn here, in a sentence with the remedy; None when one can. No screen is needed."""
    if not _pyside_is_installed():
        return f"No picture: {_INSTALL_PYSIDE}"
    missing = find_missing(["offscreen"]) if sys.platform == "linux" else None
    return None if missing is None else f"No picture: {missing.sentence}"


def platforms_to_try(environment: Mapping[str, str] = os.environ) -> tuple[str, ...]:
    """Name Qt's platform plugins in the order in which Qt on Linux will try them; empty without a screen."""
    chosen = environment.get("QT_QPA_PLATFORM", "")
    if chosen:
        # Qt's form is "name:options;name:options".
        return tuple(part.partition(":")[0].partition("-")[0] for part in chosen.split(";") if part)
    offered = []
    if environment.get("DISPLAY"):
        offered.append("xcb")
    if environment.get("WAYLAND_DISPLAY"):
        offered.append("wayland")
    if environment.get("XDG_SESSION_TYPE") == "wayland":
        offered.reverse()
    return tuple(offered)


def find_missing(platforms: Iterable[str]) -> Missing | None:
    """Try to load what Qt on Linux needs of the system for all of `platforms`.

    Parameters
    ----------
    platforms : names of Qt platform plugins ("offscreen", "xcb", "wayland"); one not known here needs only
        what every platform needs.

    Returns
    -------
    None when nothing is missing. A font counts: without one Qt draws no text.
    """
    needed = dict(_EVERY_PLATFORM)
    for platform in platforms:
        needed.update(_FURTHER.get(platform, {}))
    missing = {name: package for name, package in needed.items() if not _can_be_loaded(name)}
    if not _a_font_is_installed():
        missing["a font"] = "fonts-dejavu-core"
    return Missing(tuple(missing), tuple(missing.values())) if missing else None


def _platform_reason(platform: str, environment: Mapping[str, str]) -> str | None:
    missing = find_missing([platform])
    if missing is not None:
        return f"No window: {missing.sentence}"
    if platform == "xcb" and not _x_server_answers(environment.get("DISPLAY", "")):
        name = environment.get("DISPLAY", "")
        return f"No window: no X server answers at DISPLAY={name!r}. {_GO_TO_A_SCREEN}"
    if platform == "wayland" and not _wayland_answers(environment):
        name = environment.get("WAYLAND_DISPLAY", "")
        return f"No window: nothing answers at WAYLAND_DISPLAY={name!r}. {_GO_TO_A_SCREEN}"
    return None


def _pyside_is_installed() -> bool:
    spec = importlib.util.find_spec("PySide6")
    folders = spec.submodule_search_locations if spec is not None else None
    return any(any(Path(folder).glob("QtWidgets.*")) for folder in folders or ())


def _can_be_loaded(name: str) -> bool:
    try:
        ctypes.CDLL(name)
    except OSError:
        return False
    return True


def _a_font_is_installed() -> bool:
    for folder in _FONT_FOLDERS:
        for _, _, files in os.walk(os.path.expanduser(folder)):
            if any(os.path.splitext(file)[1].lower() in _FONT_SUFFIXES for file in files):
                return True
    return False


def _x_server_answers(display: str) -> bool:
    xcb = ctypes.CDLL("libxcb.so.1")
    xcb.xcb_connect.restype = ctypes.c_void_p
    xcb.xcb_connect.argtypes = [ctypes.c_char_p, ctypes.c_void_p]
    xcb.xcb_connection_has_error.restype = ctypes.c_int
    xcb.xcb_connection_has_error.argtypes = [ctypes.c_void_p]
    xcb.xcb_disconnect.argtypes = [ctypes.c_void_p]
    connection = xcb.xcb_connect(display.encode(), None)
    fault: int = xcb.xcb_connection_has_error(connection)
    xcb.xcb_disconnect(connection)
    return fault == 0


def _wayland_answers(environment: Mapping[str, str]) -> bool:
    path = Path(environment.get("XDG_RUNTIME_DIR", ""), environment.get("WAYLAND_DISPLAY") or "wayland-0")
    with socket.socket(socket.AF_UNIX, socket.SOCK_STREAM) as connection:
        try:
            connection.connect(str(path))
        except OSError:
            return False
    return True
