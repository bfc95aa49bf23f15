"""The tree of errors that reach a user, each of whose texts says what is wrong, where, and what to do.

RigpaperError
├── DataError            lives, quantities or entry ages that cannot be analysed (all faults of one input together)
├── UnknownName          a family, bound or side that the program does not have
├── MethodUnavailable    a method of estimation that does not apply to these data or this family
├── NoEstimate           a question put to a fit that does not exist or did not converge
└── BoundUnavailable     a kind of bound that does not exist for this fit
    └── BoundWithoutEnd  a bound that has no end on its side

Cautions (what a reader must know before relying on a number that does exist) are in `cautions.py`.
"""

from __future__ import annotations

from collections.abc import Iterable


class RigpaperError(Exception):
    """Root of every error meant for the user; its text is made of whole sentences."""


class DataError(RigpaperError):
    """Input data that cannot be analysed.

    Parameters
    ----------
    faults : iterable of str
        One sentence for each fault found; all of them are shown together.
    """

    def __init__(self, faults: Iterable[str]) -> None:
        self.faults: tuple[str, ...] = tuple(faults)
        super().__init__(" ".join(self.faults))


class UnknownName(RigpaperError):
    """A family, bound, side or reading that the program does not have."""


class MethodUnavailable(RigpaperError):
    """This method of estimation does not apply to these data or this family."""


class NoEstimate(RigpaperError):
    """A fit that does not exist, or did not converge, was asked for a number."""


class BoundUnavailable(RigpaperError):
    """This kind of bound does not exist for this fit or this reading."""


class BoundWithoutEnd(BoundUnavailable):
    """The bound has no end on its side: no value, however far out, is ruled out."""
