"""Question: a reading laid before one estimate; its answer, its bounds, and the kind of bound that each comes out as.

"automatic" leaves the kind to the data and to what is asked: exact where that is known, else calibrated by simulation,
and where neither can be computed the likelihood ratio. Which it was comes with the ends (Bound); here is the one place
that decides it.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import tail_of
from reliability_app.engine.errors import BoundUnavailable, BoundWithoutEnd

Array = NDArray[np.float64]
Number = float | Array
Ends = tuple[Number | None, Number | None]


@dataclass(frozen=True, eq=False)
class Bound:
    """The ends of a bound and the kind they are of.

    Attributes
    ----------
    lower, upper : ndarray or None
        None on an open side; infinite where the bound has no end there.
    kind : str
        "exact", "calibrated", "likelihood" or "wald".
    instead_of : BoundUnavailable or None
        Why the kind that was to be had first could not be computed.
    """

    lower: Array | None
    upper: Array | None
    kind: str
    instead_of: BoundUnavailable | None = None

    @property
    def both(self) -> tuple[Array | None, Array | None]:
        """The lower and the upper ends."""
        return self.lower, self.upper

    def ends(self, asked: ArrayLike) -> Ends:
        """Return (lower, upper), numbers where a number was asked."""
        lower, upper = (None if end is None else like(asked, end) for end in self.both)
        return lower, upper


@dataclass(frozen=True, eq=False)
class Question:
    """A measure laid before one estimate, and how it is read.

    Attributes
    ----------
    value : callable
        The measure at the estimate, an array.
    end : callable (kind, tail, sign) -> ndarray
        The lower (sign -1) or upper (sign 1) ends of the measure with probability `tail` beyond.
    to_reading : callable
        From the measure to what the user reads.
    kinds : callable (kind) -> tuple of str
        The kinds that a kind stands for, to be tried in turn.
    falling : bool
        True where the reading falls as the measure rises.
    """

    value: Callable[[], Array]
    end: Callable[[str, float, float], Array]
    to_reading: Callable[[Array], Array]
    kinds: Callable[[str], tuple[str, ...]]
    falling: bool = False

    def reading(self) -> Array:
        """Return what the user reads at the estimate."""
        with np.errstate(over="ignore", under="ignore"):
            return self.to_reading(self.value())

    def bound_used(self, kind: str) -> str:
        """Return the kind of bound that is tried first for `kind`."""
        return self.kinds(kind)[0]

    def bounds(self, *, confidence: float = 0.95, side: str = "lower", kind: str = "automatic") -> Bound:
        """Return the bounds, of the first kind that can be computed of those that `kind` stands for.

        A calibration that finds no end is an answer and no failure: nothing is tried in its place.

        Raises
        ------
        UnknownName, DataError
            Where kind, side or confidence do not name a bound.
        BoundUnavailable
            Where none can be computed.
        """
        check_bound(kind, side, confidence)
        tail, lowest = tail_of(side, confidence), 1.0 if self.falling else -1.0
        trouble: BoundUnavailable | None = None
        *earlier, last = self.kinds(kind)
        for used in earlier:
            try:
                return Bound(*self._ends(used, tail, side, lowest), used, trouble)
            except BoundWithoutEnd:
                raise
            except BoundUnavailable as found:
                trouble = found
        return Bound(*self._ends(last, tail, side, lowest), last, trouble)

    def _ends(self, kind: str, tail: float, side: str, lowest: float) -> tuple[Array | None, Array | None]:
        return sided_ends(lambda sign: self.to_reading(self.end(kind, tail, sign)), side, lowest=lowest)


def sided_ends(end: Callable[[float], Array], side: str, *, lowest: float) -> tuple[Array | None, Array | None]:
    """Return (lower, upper) of a reading from the ends that are needed; `lowest` is the sign of its lower end."""
    with np.errstate(over="ignore", under="ignore"):
        lower = None if side == "upper" else end(lowest)
        upper = None if side == "lower" else end(-lowest)
    return lower, upper


def like(asked: ArrayLike, values: Array) -> Number:
    """Return a number where a number was asked, else the array."""
    return float(values[0]) if np.ndim(asked) == 0 else values
