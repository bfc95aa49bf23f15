"""The requirement a session holds: when it was set, how often it has been judged, and every change of it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from datetime import datetime

from reliability_app.session.document import Change, Session
from reliability_app.session.edit import Edit
from reliability_app.session.requirement import Requirement


@dataclass(frozen=True)
class HeldRequirement:
    """A requirement as it is held in a session.

    Attributes
    ----------
    requirement : Requirement
    set_at : datetime
        When it was set, with its zone.
    looks : int
        Visits that have judged it so far. A visit that is deleted later was a look all the same.
    adjusted : bool
        True where it is judged with a bound adjusted for repeated looks.
    kept : mapping
        What a file said under keys this program does not know.
    """

    requirement: Requirement
    set_at: datetime
    looks: int = 0
    adjusted: bool = False
    kept: Mapping[str, object] = field(default_factory=dict, compare=False)


@dataclass(frozen=True)
class RequirementChange:
    """One entry of the log: what was required before, and what after; None: nothing."""

    at: datetime
    was: HeldRequirement | None
    became: HeldRequirement | None
    kept: Mapping[str, object] = field(default_factory=dict, compare=False)

    def sentence(self, life_unit: str) -> str:
        """The change in words."""
        day = f"{self.at:%Y-%m-%d}"
        if self.was is None:
            return f"{day}: set to {self.became.requirement.text(life_unit)}." if self.became else f"{day}: no change."
        looked = {0: "not judged at a visit yet", 1: "after 1 look"}.get(
            self.was.looks, f"after {self.was.looks} looks"
        )
        if self.became is None:
            return f"{day}: withdrawn, {looked}: {self.was.requirement.text(life_unit)}."
        if self.became.requirement == self.was.requirement:
            way = "adjusted for repeated looks" if self.became.adjusted else "at its own confidence"
            return f"{day}: judged {way} from here on, {looked}."
        before, after = (one.requirement.text(life_unit) for one in (self.was, self.became))
        return f"{day}: changed, {looked}, from {before} to {after}."


@dataclass(eq=False)
class SetRequirement(Edit):
    """Set, change or withdraw the requirement; the log of the session keeps what was there.

    Another requirement begins with no look taken; one that is only judged in another way keeps its looks.
    """

    requirement: Requirement | None
    adjusted: bool = False
    at: datetime = field(default_factory=lambda: datetime.now().astimezone().replace(microsecond=0))
    _before: tuple[HeldRequirement | None, tuple[RequirementChange, ...]] = field(
        default=(None, ()), init=False, repr=False
    )

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "withdrawal of the requirement" if self.requirement is None else "setting of the requirement"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("requirement")

    def _do(self, session: Session) -> None:
        was, log = self._before = session.requirement, session.requirement_log
        became = self._held(was)
        if became != was:
            session.requirement = became
            session.requirement_log = (*log, RequirementChange(self.at, was, became))

    def _undo(self, session: Session) -> None:
        session.requirement, session.requirement_log = self._before

    def _held(self, was: HeldRequirement | None) -> HeldRequirement | None:
        if self.requirement is None:
            return None
        if was is not None and was.requirement == self.requirement:
            return replace(was, adjusted=self.adjusted)
        return HeldRequirement(self.requirement, self.at, adjusted=self.adjusted)
