"""The designs of the coverage study, and how tests are drawn under each: lives whose ln are scores (a = 0, b = 1)."""

from __future__ import annotations

import zlib
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import LifeData
from reliability_app.engine.families import StandardDistribution, family

Array = NDArray[np.float64]

DRAWN_AT_ONCE = ("complete", "fixed number", "fixed time")
"""Plans under which the distribution of a test depends on nothing that differs from test to test."""
_COUNTED = ((10, 0.5), (20, 0.5), (20, 0.25), (50, 0.1), (100, 0.1))
_FIXED_ENDS = {
    5: (0.3, 0.4, 0.5, 0.6, 0.8),
    10: (0.15, 0.2, 0.25, 0.3, 0.4, 0.45, 0.5, 0.6, 0.8),
    20: (0.1, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5, 0.6, 0.8),
    30: (0.1, 0.15, 0.2, 0.3, 0.5),
    50: (0.1, 0.15, 0.2, 0.3, 0.5),
    100: (0.1, 0.2, 0.5),
}
_UNIT_BY_UNIT = (
    (20, "staggered", 0.5), (20, "inspections", 0.5), (20, "late entry", 0.5), (20, "staggered", 0.25),
    (50, "staggered", 0.2), (10, "staggered", 0.5), (10, "inspections", 0.8), (10, "late entry", 0.8),
    (50, "inspections", 0.2), (30, "late entry", 0.25), (20, "staggered", 0.8), (100, "staggered", 0.1),
    (100, "inspections", 0.1), (50, "late entry", 0.1),
)  # fmt: skip
_LOOKS = 6
_LATEST_ENTRY = 0.3


@dataclass(frozen=True)
class Cell:
    """One design: what is drawn, how many units, how the test ends, the share expected to fail by then."""

    family: str
    units: int
    plan: str
    failing: float

    @property
    def seed(self) -> int:
        """A seed of its own for every cell, the same on every machine."""
        return zlib.crc32(f"{self.family} {self.units} {self.plan} {self.failing}".encode())

    @property
    def standard(self) -> StandardDistribution:
        """The distribution of the scores."""
        return family(self.family).standard

    def place(self, fraction: float) -> float:
        """Return the score by which a fraction has failed."""
        return float(self.standard.quantile(np.array([fraction]))[0])


SLOWEST = Cell("weibull", 10, "complete", 1.0)
"""Exact bounds by quadrature are computed for every one of its tests."""

HEADLINE = tuple(Cell(name, *design) for design in _UNIT_BY_UNIT[:3] for name in ("weibull", "lognormal"))
"""The designs judged one by one that are studied with twice as many tests."""


def cells() -> list[Cell]:
    """Return the designs by importance."""
    at_once = [(units, "complete", 1.0) for units in (5, 10, 20, 50, 100)]
    at_once += [(units, "fixed number", share) for units, share in _COUNTED]
    at_once += [(units, "fixed time", share) for units, shares in _FIXED_ENDS.items() for share in shares]
    first, second = ([Cell(name, *design) for design in at_once] for name in ("weibull", "lognormal"))
    by_one = [Cell(name, *design) for design in _UNIT_BY_UNIT for name in ("weibull", "lognormal")]
    others = [Cell("loglogistic", 10, "fixed time", 0.5), Cell("loglogistic", 20, "fixed time", 0.25)]
    first.remove(SLOWEST)
    return [*first, *by_one[:4], *second, *others, *by_one[4:], Cell("loglogistic", 20, "staggered", 0.5), SLOWEST]


def draw(cell: Cell, generator: np.random.Generator) -> LifeData:
    """Draw one test under a plan that goes unit by unit."""
    match cell.plan:
        case "staggered":
            z, ends = cell.standard.quantile(generator.random(cell.units)), _ends(cell, generator)
            return LifeData.right_censored(np.exp(np.minimum(z, ends)), z <= ends)
        case "inspections":
            z = cell.standard.quantile(generator.random(cell.units))
            return _inspected(np.exp(z), float(np.exp(cell.place(cell.failing))))
        case "late entry":
            return _entered_late(cell, generator)
    raise ValueError(f"{cell.plan} is not drawn test by test.")


def _ends(cell: Cell, generator: np.random.Generator) -> Array:
    """Draw scores at leaving: uniform in failure probability, so that the wanted share fails on average."""
    low, high = (0.0, 2.0 * cell.failing) if cell.failing <= 0.5 else (2.0 * cell.failing - 1.0, 1.0)
    return cell.standard.quantile(np.clip(generator.uniform(low, high, cell.units), 1e-9, 1 - 1e-9))


def _inspected(life: Array, end: float) -> LifeData:
    """Look at all units at equal steps of ln age: found failed between two looks, or running at the last."""
    looks = end * np.exp(np.linspace(-2.0, 0.0, _LOOKS))
    step = np.searchsorted(looks, life)
    before, after = np.concatenate([[0.0], looks]), np.concatenate([looks, [np.inf]])
    return LifeData.from_intervals(before[step], after[step])


def _entered_late(cell: Cell, generator: np.random.Generator) -> LifeData:
    """Let half of the units come at an age uniform in failure probability, each alive then, up to a fixed end.

    The wanted share of the units seen fails by that end, on average.
    """
    late = np.arange(cell.units) < cell.units // 2
    share = np.where(late, generator.uniform(0.0, _LATEST_ENTRY * cell.failing, cell.units), 0.0)
    end = cell.place(cell.failing)
    z = cell.standard.quantile(share + (1.0 - share) * generator.random(cell.units))
    entered = np.where(late, np.exp(cell.standard.quantile(np.where(late, share, 0.5))), 0.0)
    lower = np.exp(np.minimum(z, end))
    return LifeData.from_intervals(lower, np.where(z <= end, lower, np.inf), entered=entered)
