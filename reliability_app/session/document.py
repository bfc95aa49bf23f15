"""The session: the sets of units, the basis of each, the readings asked for; the single source of truth."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import Literal

from reliability_app.session.unit_table import UnitTable

Side = Literal["lower", "upper", "two"]
ChangeKind = Literal["units", "basis", "asks", "sets", "title", "notes", "life_unit", "everything"]


def _nothing_kept() -> Mapping[str, object]:
    return MappingProxyType({})


@dataclass(frozen=True)
class Basis:
    """Everything a number rests on besides the units themselves.

    `kept` holds what a file said under keys this program does not know; it is written back unchanged.
    """

    family: str = "lognormal"
    fit: str = "maximum likelihood"
    bound: str = "automatic"
    confidence: float = 0.95
    side: Side = "lower"
    kept: Mapping[str, object] = field(default_factory=_nothing_kept, compare=False)


@dataclass(frozen=True)
class LifeAsk:
    """Ask for the age by which `percent` % of the units have failed."""

    percent: float


@dataclass(frozen=True)
class ReliabilityAsk:
    """Ask for the share of units still running at `age`."""

    age: float


@dataclass(frozen=True)
class HazardAsk:
    """Ask for the hazard rate at `age`."""

    age: float


Ask = LifeAsk | ReliabilityAsk | HazardAsk

USUAL_ASKS: tuple[Ask, ...] = (LifeAsk(10.0), LifeAsk(1.0), LifeAsk(5.0), LifeAsk(50.0))


@dataclass
class UnitSet:
    """Units analysed together: one design, lot or supplier."""

    name: str
    table: UnitTable = field(default_factory=UnitTable)
    basis: Basis = field(default_factory=Basis)
    colour: int = 0
    kept: dict[str, object] = field(default_factory=dict)


@dataclass(frozen=True)
class Change:
    """What an edit has just changed; `set_index` names the set where one set alone is concerned."""

    kind: ChangeKind
    set_index: int | None = None


class Session:
    """One document: its sets, the readings asked for, and what earlier visits recorded.

    The first of `asks` is the main reading: the one the sentence states and the charts mark.
    Listeners are called with a `Change` after every edit.
    """

    def __init__(
        self,
        *,
        title: str = "",
        notes: str = "",
        life_unit: str = "h",
        sets: list[UnitSet] | None = None,
        asks: tuple[Ask, ...] = USUAL_ASKS,
        visits: list[dict[str, object]] | None = None,
        kept: dict[str, object] | None = None,
    ) -> None:
        self.title = title
        self.notes = notes
        self.life_unit = life_unit
        self.sets: list[UnitSet] = sets if sets is not None else [UnitSet(name="Set 1")]
        self.asks: tuple[Ask, ...] = asks
        self.visits: list[dict[str, object]] = visits if visits is not None else []
        self.kept: dict[str, object] = kept if kept is not None else {}
        self._listeners: list[Callable[[Change], None]] = []

    def listen(self, listener: Callable[[Change], None]) -> None:
        """Call `listener` with a `Change` after every edit."""
        self._listeners.append(listener)

    def changed(self, change: Change) -> None:
        """Tell every listener that `change` has happened; edits call this once each."""
        for listener in tuple(self._listeners):
            listener(change)

    def replace_with(self, other: Session) -> None:
        """Take over the whole content of `other` (a file just opened), keeping the listeners."""
        self.title, self.notes, self.life_unit = other.title, other.notes, other.life_unit
        self.sets, self.asks = other.sets, other.asks
        self.visits, self.kept = other.visits, other.kept
        self.changed(Change("everything"))
