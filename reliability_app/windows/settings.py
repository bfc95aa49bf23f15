"""What the window remembers between starts: geometry, recent files, hidden columns, and what the user prefers."""

from __future__ import annotations

from dataclasses import asdict, dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, cast

from PySide6.QtCore import QByteArray, QSettings

from reliability_app.session.number_style import USUAL_DIGITS, NumberStyle
from reliability_app.windows.text_size import LARGEST_STEP, SMALLEST_STEP
from reliability_app.windows.theme import Scheme

if TYPE_CHECKING:  # the engine is not to be imported before the first paint
    from reliability_app.engine.paper import AgeScaleKind
    from reliability_app.session.document import Basis, Session, Side

_MOST_RECENT = 10
SCHEMES: dict[Scheme, str] = {"system": "As the system", "light": "Light", "dark": "Dark"}


@dataclass(frozen=True)
class PictureChoice:
    """How a picture was exported last: the suffix of its format, width and height in mm, dots an inch."""

    suffix: str = ".svg"
    width: float = 160.0
    height: float = 110.0
    dpi: int = 200


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
    def first_age_scale(self) -> AgeScaleKind | None:
        """The age axis that pages are to start with; None where each keeps its own."""
        kind = self._store.value("preferences/age_scale", "", type=str)
        return kind if kind in ("log", "linear") else None

    @first_age_scale.setter
    def first_age_scale(self, kind: AgeScaleKind | None) -> None:
        self._store.setValue("preferences/age_scale", kind or "")

    @property
    def confidence(self) -> float:
        """The confidence that new sets are given."""
        level = cast(float, self._store.value("preferences/confidence", 0.95, type=float))
        return level if 0.5 < level < 1.0 else 0.95

    @confidence.setter
    def confidence(self, level: float) -> None:
        self._store.setValue("preferences/confidence", level)

    @property
    def side(self) -> Side:
        """The side of the bound that new sets are given."""
        side = self._store.value("preferences/side", "lower", type=str)
        return side if side in ("upper", "two") else "lower"

    @side.setter
    def side(self, side: Side) -> None:
        self._store.setValue("preferences/side", side)

    def new_session(self) -> Session:
        """Return an empty session with the basis that is preferred."""
        from reliability_app.session.document import Session, UnitSet

        return Session(sets=[UnitSet(name="Set 1", basis=self.preferred(UnitSet("").basis))])

    def preferred(self, basis: Basis) -> Basis:
        """Return a basis with the confidence and the side that are preferred."""
        return replace(basis, confidence=self.confidence, side=self.side)

    @property
    def number_style(self) -> NumberStyle:
        """How numbers are written."""
        digits = cast(int, self._store.value("preferences/digits", USUAL_DIGITS, type=int))
        return NumberStyle(digits, str(self._store.value("preferences/thousands", "space", type=str)))

    @number_style.setter
    def number_style(self, style: NumberStyle) -> None:
        self._store.setValue("preferences/digits", style.digits)
        self._store.setValue("preferences/thousands", style.thousands)

    @property
    def text_step(self) -> int:
        """By how many points text is larger than the system has it."""
        step = cast(int, self._store.value("preferences/text_step", 0, type=int))
        return min(max(step, SMALLEST_STEP), LARGEST_STEP)

    @text_step.setter
    def text_step(self, step: int) -> None:
        self._store.setValue("preferences/text_step", step)

    @property
    def hidden_columns(self) -> frozenset[str]:
        """The keys of the columns of units that are hidden."""
        keys = str(self._store.value("hidden_columns", "", type=str))
        return frozenset(key for key in keys.split("\t") if key)

    @hidden_columns.setter
    def hidden_columns(self, keys: frozenset[str]) -> None:
        self._store.setValue("hidden_columns", "\t".join(sorted(keys)))

    @property
    def scheme(self) -> Scheme:
        """light, dark or system."""
        name = self._store.value("scheme", "system", type=str)
        return name if name in ("light", "dark") else "system"

    @scheme.setter
    def scheme(self, name: Scheme) -> None:
        self._store.setValue("scheme", name)

    @property
    def picture(self) -> PictureChoice:
        """How a picture was exported last; the usual way where none was, or where that cannot be read."""
        usual = PictureChoice()
        return PictureChoice(
            cast(str, self._store.value("picture/suffix", usual.suffix, type=str)) or usual.suffix,
            cast(float, self._store.value("picture/width", usual.width, type=float)) or usual.width,
            cast(float, self._store.value("picture/height", usual.height, type=float)) or usual.height,
            cast(int, self._store.value("picture/dpi", usual.dpi, type=int)) or usual.dpi,
        )

    @picture.setter
    def picture(self, chosen: PictureChoice) -> None:
        for name, value in asdict(chosen).items():
            self._store.setValue(f"picture/{name}", value)

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
