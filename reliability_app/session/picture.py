"""SetPicture and Reading: what the pages of the window draw and state of one set, finished numbers only."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.cautions import Caution
from reliability_app.engine.curves import Curve

if TYPE_CHECKING:  # the document carries the whole unit table with it; a picture needs the names only
    from reliability_app.session.document import Ask, Basis

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class Reading:
    """One statement read off a fit.

    Attributes
    ----------
    ask : Ask
        What was asked.
    estimate : float or None
        The answer: an age, a share running or a hazard rate; None where there is none. Infinite for a mean of a tail
        too heavy to have one, and for the age at a hazard that is never reached.
    lower, upper : float or None
        The bound; None on the open side, or where no bound exists.
    basis : Basis
        What the reading rests on.
    cautions : tuple of Caution
        What must be known before relying on it, worst first.
    bound_used : str
        The kind of bound given, where the basis leaves the choice open ("automatic"); empty without a bound.
    is_provisional : bool
        True while a quick bound stands in for the one of the basis, which is still being computed.
    share_failed : float or None
        Beside a mean life: the share of the units that have failed by then.
    measured : str
        How often bounds of this kind held in simulated tests of the nearest design studied; empty where none is near.
    """

    ask: Ask
    estimate: float | None
    lower: float | None
    upper: float | None
    basis: Basis
    cautions: tuple[Caution, ...] = ()
    bound_used: str = ""
    is_provisional: bool = False
    share_failed: float | None = None
    measured: str = ""

    @property
    def is_given(self) -> bool:
        """True where there is an estimate, or at least a bound."""
        return any(value is not None for value in (self.estimate, self.lower, self.upper))


@dataclass(frozen=True, eq=False)
class SetPicture:
    """Everything a page draws of one set.

    Attributes
    ----------
    name : str
        The set's name.
    colour : int
        Index into the palette of the theme.
    family : str
        The family of the basis; it decides the paper.
    point_age, point_fraction : ndarray of float, shape (n,)
        Plotting positions: age and fraction failed.
    point_begin, point_end : ndarray of float, shape (n,)
        The ages between which the units of a point failed; equal where the age is known.
    point_quantity : ndarray of int, shape (n,)
        Units that failed at each point; to the nearest whole number where intervals overlap.
    point_is_shared : ndarray of bool, shape (n,)
        Where a unit of the point may have failed at another point as well.
    point_rows : tuple of tuple of int
        For each point the rows of the unit table it stands for: all whose units may have failed there.
    point_names : tuple of tuple of str
        For each point the names of those rows' units; empty where a unit has none.
    running_age, running_quantity : ndarray, shape (m,)
        Ages at which units were still running, and how many.
    running_rows, running_names : tuple of tuple
        For each such age the rows of the unit table and the names of their units.
    failure, hazard, survival : Curve or None
        Over age: fraction failed, hazard rate, fraction running; None without an estimate.
    steps : Curve or None
        The estimate of the fraction running without a family (Kaplan-Meier's, or Turnbull's where units were found
        failed), from age 0 and 1.0; None without units.
    reading : Reading or None
        The main reading, a B-life with its bound.
    """

    name: str
    colour: int
    family: str
    point_age: Floats
    point_fraction: Floats
    point_begin: Floats
    point_end: Floats
    point_quantity: Integers
    point_is_shared: NDArray[np.bool_]
    point_rows: tuple[tuple[int, ...], ...]
    point_names: tuple[tuple[str, ...], ...]
    running_age: Floats
    running_quantity: Integers
    failure: Curve | None
    hazard: Curve | None
    survival: Curve | None
    steps: Curve | None
    reading: Reading | None
    running_rows: tuple[tuple[int, ...], ...] = ()
    running_names: tuple[tuple[str, ...], ...] = ()

    @property
    def is_empty(self) -> bool:
        """True where there is nothing to draw."""
        return self.point_age.size == 0 and self.running_age.size == 0 and self.failure is None
