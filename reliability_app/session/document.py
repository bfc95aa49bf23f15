"""The session: the sets of units, the basis of each, the readings asked for; the single source of truth."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import TYPE_CHECKING, Literal

from reliability_app.session.unit_table import UnitTable

if TYPE_CHECKING:  # they are made of the sets, the basis and the asks defined here
    from reliability_app.session.held_requirement import HeldRequirement, RequirementChange
    from reliability_app.session.visit import Visit

Side = Literal["lower", "upper", "two"]
ChangeKind = Literal[
    "units", "basis", "asks", "sets", "title", "notes", "life_unit", "visits", "requirement", "everything"
]


def _nothing_kept() -> Mapping[str, object]:
    return MappingProxyType({})


@dataclass(frozen=True)
class Basis:
    """Everything a number rests on besides the units themselves.

    `fit` names the method. With `threshold` no life is shorter than a threshold that is estimated too; `shape` is a
    Weibull shape that is held instead of estimated. `kept` holds what a file said under keys this program does not
    know; it is written back unchanged.
    """

    family: str = "lognormal"
    fit: str = "maximum likelihood"
    bound: str = "automatic"
    confidence: float = 0.95
    side: Side = "lower"
    threshold: bool = False
    shape: float | None = None
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


@dataclass(frozen=True)
class ConditionalReliabilityAsk:
    """Ask for the share of the units running at `given` that are still running at `age`."""

    age: float
    given: float


@dataclass(frozen=True)
class ResidualLifeAsk:
    """Ask for the mean life that units running at `age` still have before them."""

    age: float


@dataclass(frozen=True)
class MeanLifeAsk:
    """Ask for the mean life."""


@dataclass(frozen=True)
class ModeAsk:
    """Ask for the mode: the age around which most units fail."""


@dataclass(frozen=True)
class AgeAtHazardAsk:
    """Ask for the first age at which the hazard rate reaches `hazard`."""

    hazard: float


Ask = (
    LifeAsk
    | ReliabilityAsk
    | HazardAsk
    | ConditionalReliabilityAsk
    | ResidualLifeAsk
    | MeanLifeAsk
    | ModeAsk
    | AgeAtHazardAsk
)

ASK_NAMES: Mapping[type[Ask], str] = {
    LifeAsk: "life",
    ReliabilityAsk: "reliability",
    HazardAsk: "hazard",
    ConditionalReliabilityAsk: "conditional_reliability",
    ResidualLifeAsk: "residual_life",
    MeanLifeAsk: "mean_life",
    ModeAsk: "mode",
    AgeAtHazardAsk: "age_at_hazard",
}
"""What each kind of reading is called in files and in the answers for scripts."""

USUAL_ASKS: tuple[Ask, ...] = (LifeAsk(10.0), LifeAsk(1.0), LifeAsk(5.0), LifeAsk(50.0))


def with_headline(asks: tuple[Ask, ...]) -> tuple[Ask, ...]:
    """Return the asks with one in front that can be the main reading.

    A mean life is never that: it says nothing of the early failures, and hides how few units reach it.
    """
    if not asks or not isinstance(asks[0], MeanLifeAsk):
        return asks
    first = next((ask for ask in asks if not isinstance(ask, MeanLifeAsk)), USUAL_ASKS[0])
    return (first, *(ask for ask in asks if ask != first))


@dataclass
class UnitSet:
    """Units analysed together: one design, lot or supplier.

    A set that is `hidden` is drawn only while it is the one worked on.
    """

    name: str
    table: UnitTable = field(default_factory=UnitTable)
    basis: Basis = field(default_factory=Basis)
    colour: int = 0
    kept: dict[str, object] = field(default_factory=dict)
    hidden: bool = False


@dataclass(frozen=True)
class Change:
    """What an edit has just changed; `set_index` names the set where one set alone is concerned."""

    kind: ChangeKind
    set_index: int | None = None


class Session:
    """One document: its sets, the readings asked for, what is required, and what earlier visits recorded.

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
        visits: list[Visit] | None = None,
        requirement: HeldRequirement | None = None,
        requirement_log: tuple[RequirementChange, ...] = (),
        kept: dict[str, object] | None = None,
    ) -> None:
        self.title = title
        self.notes = notes
        self.life_unit = life_unit
        self.sets: list[UnitSet] = sets if sets is not None else [UnitSet(name="Set 1")]
        self.asks = asks
        self.visits: list[Visit] = visits if visits is not None else []
        self.requirement = requirement
        self.requirement_log = requirement_log
        self.kept: dict[str, object] = kept if kept is not None else {}
        self._listeners: list[Callable[[Change], None]] = []

    @property
    def asks(self) -> tuple[Ask, ...]:
        """The readings asked for; a mean life does not come first."""
        return self._asks

    @asks.setter
    def asks(self, asks: tuple[Ask, ...]) -> None:
        self._asks = with_headline(tuple(asks))

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
        self.requirement, self.requirement_log = other.requirement, other.requirement_log
        self.changed(Change("everything"))
