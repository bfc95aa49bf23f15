"""What the window remembers between starts: geometry, splitters, recent files, light or dark."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, QSettings

from reliability_app.windows.theme import Scheme

if TYPE_CHECKING:  # the engine is not to be imported before the first paint
    from reliability_app.engine.paper import AgeScaleKind

_MOST_RECENT = 10


class WindowSettings:
    """A typed face over QSettings, which gives back text for everything it stored."""

    def __init__(self, store: QSettings | None = None) -> None:
        self._store = store or QSettings(QSettings.Format.IniFormat, QSettings.Scope.UserScope, "rigpaper", "window")

    def layout(self, name: str) -> QByteArray:
        """Return the stored geometry or splitter state called `name`, empty where there is none."""
        value = self._store.value(f"layout/{name}")
        return value if isinstance(value, QByteArray) else QByteArray()

    def keep_layout(self, name: str, state: QByteArray) -> None:
        """Store a geometry or splitter state."""
        self._store.setValue(f"layout/{name}", state)

    def age_scale(self, page: str) -> AgeScaleKind | None:
        """Return the age axis last chosen on a page, None where none was."""
        kind = self._store.value(f"age_scale/{page}", "", type=str)
        return kind if kind in ("log", "linear") else None

    def keep_age_scale(self, page: str, kind: str) -> None:
        """Store the age axis chosen on a page."""
        self._store.setValue(f"age_scale/{page}", kind)

    @property
    def scheme(self) -> Scheme:
        """light, dark or system."""
        name = self._store.value("scheme", "system", type=str)
        return name if name in ("light", "dark") else "system"

    @scheme.setter
    def scheme(self, name: Scheme) -> None:
        self._store.setValue("scheme", name)

    @property
    def recent(self) -> list[Path]:
        """Files opened or saved last, the latest first."""
        size = self._store.beginReadArray("recent")
        paths = []
        for place in range(size):
            self._store.setArrayIndex(place)
            paths.append(Path(str(self._store.value("path", "", type=str))))
        self._store.endArray()
        return paths

    def note_recent(self, path: Path) -> None:
        """Put a file first among the recent ones."""
        absolute = path.absolute()
        self._keep_recent([absolute, *(other for other in self.recent if other != absolute)][:_MOST_RECENT])

    def forget_recent(self, path: Path) -> None:
        """Take a file that is gone out of the recent ones."""
        self._keep_recent([other for other in self.recent if other != path])

    def _keep_recent(self, paths: list[Path]) -> None:
        self._store.remove("recent")
        self._store.beginWriteArray("recent", len(paths))
        for place, path in enumerate(paths):
            self._store.setArrayIndex(place)
            self._store.setValue("path", str(path))
        self._store.endArray()
        self._store.sync()
