"""What was measured of bounds like the one in hand: the nearest design of the coverage study, said in words."""

from __future__ import annotations

import json
from dataclasses import dataclass
from functools import cache

import numpy as np

from reliability_app.engine import Fit
from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.censoring_plan import CensoringPlan, PlanKind, plan_of
from reliability_app.session.document import Ask, Basis, LifeAsk
from reliability_app.session.shipped import shipped

TABLE = "measured_coverage.json"
KEPT_WITHIN = 0.01
"""A bound keeps its promise where it held as often as promised to within this."""
EXACT_PLANS = ("complete", "fixed number")
FIT = Basis().fit

# Designs further away than this, as a factor of the units and in the logit of the share failing, are not like the set.
_UNITS_FACTOR, _LOGIT = 1.5, 0.55
# Below this share of tests with three failures those that have them are a lucky choice, which bends what is read off.
_FEW_READ = 0.9
# No design has as many units; a large table is not searched for its plan.
_MOST_UNITS = 1000


@dataclass(frozen=True)
class Cell:
    """One design of the study, and how often each bound held.

    Attributes
    ----------
    family : str
    units : int
    plan : str
        complete, fixed number, fixed time, staggered, inspections, late entry.
    failing : float
        Share of the units expected to fail before the test ends.
    share_read : float
        Share of the simulated tests with three failures or more: the others do not count.
    held : dict
        By percent, kind, confidence and side: share of the tests in which the true life lay inside, and their number.
    """

    family: str
    units: int
    plan: str
    failing: float
    share_read: float
    held: dict[tuple[float, str, float, str], tuple[float, int]]

    @property
    def design(self) -> str:
        """The design in words."""
        share = f"about {100 * self.failing:.0f} %"
        how = {
            "complete": "all run to failure",
            "fixed number": f"stopped after {round(self.failing * self.units)} failures",
            "fixed time": f"{share} failing before a fixed end",
            "staggered": f"{share} failing before they leave at ages of their own",
            "inspections": f"looked at now and then, {share} found failed",
            "late entry": f"half of them watched from a later age on, {share} failing before a fixed end",
        }[self.plan]
        return f"{self.units} units, {how}"


@dataclass(frozen=True)
class Promise:
    """How often one kind of bound held in simulated tests of the design nearest to a set.

    Attributes
    ----------
    cell : Cell
    percent, confidence : float
    side : str
    held : float
        Share of the tests.
    tests : int
    """

    cell: Cell
    percent: float
    confidence: float
    side: str
    held: float
    tests: int

    @property
    def keeps(self) -> bool:
        """True where it held as often as promised to within a point, and two standard errors of the measurement."""
        error = float(np.sqrt(self.confidence * (1.0 - self.confidence) / self.tests))
        return abs(self.held - self.confidence) <= KEPT_WITHIN + 2.0 * error

    @property
    def text(self) -> str:
        """What was measured, as a sentence."""
        counted = "." if self.cell.share_read >= _FEW_READ else f"; {self._few_read}."
        return (
            f"In simulated tests of the nearest design studied ({self.cell.design}) "
            f"one-sided {100 * self.confidence:g} % {self.side} B{self.percent:g} bounds of this kind held in "
            f"{100 * self.held:.1f} % of {self.tests:,}{counted}"
        )

    @property
    def _few_read(self) -> str:
        return f"only the {100 * self.cell.share_read:.0f} % of such tests count that see three failures or more"

    @property
    def cautions(self) -> tuple[Caution, ...]:
        """What must be said beside the bound: nothing where it keeps its promise."""
        if self.keeps:
            return ()
        subject = f"B{self.percent:g} life"
        if self.held < self.confidence:
            reading = "does not keep its promise here"
            code, severity, help_ = "promise-not-kept", Severity.CAUTION, "; more failures would help"
        else:
            reading = "holds more often than it promises here, so it is more cautious than need be"
            code, severity, help_ = "promise-exceeded", Severity.NOTE, ""
        few = f"; {self._few_read}" if self.cell.share_read < _FEW_READ else ""
        text = (
            f"{subject}: the bound {reading}: in simulated tests of the nearest design studied "
            f"({self.cell.design}) one-sided {100 * self.confidence:g} % {self.side} bounds held in "
            f"{100 * self.held:.1f} %{few}{help_}."
        )
        return (Caution(code, severity, text, subject),)


@cache
def measured() -> tuple[Cell, ...]:
    """Return the designs of the study.

    Raises
    ------
    RigpaperError
        When the installation is incomplete.
    """
    table = json.loads((shipped("resources") / TABLE).read_text(encoding="utf-8"))
    axes = [(float(p), kind) for p in table["percents"] for kind in table["kinds"]]
    tails = [(float(confidence), side) for confidence in table["confidences"] for side in table["sides"]]
    cells = []
    for line in table["cells"]:
        held = iter(line["held"])
        counted = {
            (*axis, *tail): (value / 1e4, tests)
            for axis, tests in zip(axes, line["repeats"], strict=True)
            for tail in tails
            if (value := next(held)) is not None
        }
        cells.append(Cell(line["family"], line["units"], line["plan"], line["failing"], line["share_read"], counted))
    return tuple(cells)


def promise_of(
    failures: int,
    units: int,
    plan: str,
    family: str,
    *,
    percent: float,
    confidence: float,
    side: str,
    kind: str = "automatic",
) -> Promise | None:
    """Say how often a bound held in the design nearest to a set; None where nothing like it was measured.

    Parameters
    ----------
    failures, units : int
        Of the set; units found failed count as failures.
    plan : str
        As in `Cell`.
    percent : float
        Of the B-life that is bounded.
    kind : str
        automatic, calibrated, exact, likelihood, wald. An automatic bound is exact where that exists, else calibrated.
    """
    if kind in ("calibrated", "exact"):
        if (kind == "exact") != (plan in EXACT_PLANS):
            return None
        kind = "automatic"
    key = (percent, kind, confidence, side)
    near = [
        (distance, cell)
        for cell in measured()
        if (cell.family, cell.plan) == (family, plan)
        and key in cell.held
        and (distance := _distance(cell, failures, units)) is not None
    ]
    if not near:
        return None
    cell = min(near, key=lambda one: one[0])[1]
    held, tests = cell.held[key]
    return Promise(cell, percent, confidence, side, held, tests)


def _distance(cell: Cell, failures: int, units: int) -> float | None:
    """Return how far a set is from a design, None where they are not alike."""
    by_units = abs(np.log(units / cell.units)) / np.log(_UNITS_FACTOR)
    share = float(np.clip(failures / units, 0.5 / units, 1.0 - 0.5 / units))
    by_share = 0.0 if cell.plan == "complete" else abs(_logit(share) - _logit(cell.failing)) / _LOGIT
    return float(np.hypot(by_units, by_share)) if max(by_units, by_share) <= 1.0 else None


def _logit(share: float) -> float:
    return float(np.log(share / (1.0 - share)))


def plan_name(plan: CensoringPlan) -> str:
    """Return the plan by the name it has in the study."""
    if plan.has_late_entry:
        return "late entry"
    if plan.looks.is_inspected.any():
        return "inspections"
    names = {
        PlanKind.COMPLETE: "complete",
        PlanKind.FIXED_TIME: "fixed time",
        PlanKind.FIXED_NUMBER: "fixed number",
        PlanKind.STAGGERED: "staggered",
    }
    return names[plan.kind]


def promise_for(fitted: Fit, ask: Ask, basis: Basis, used: str) -> Promise | None:
    """Return the promise of a reading whose bound is of the kind `used`; None where nothing like it was measured."""
    data = fitted.data
    units = int(data.quantity.sum())
    if not isinstance(ask, LifeAsk) or not used or not _is_studied(basis) or units > _MOST_UNITS:
        return None
    if not any((cell.family, ask.percent) == (fitted.family.name, key[0]) for cell in measured() for key in cell.held):
        return None
    failures = int(data.failed_count + data.found_failed_count)
    return promise_of(
        failures, units, plan_name(plan_of(data)), fitted.family.name,
        percent=ask.percent, confidence=basis.confidence, side=basis.side, kind=used,
    )  # fmt: skip


def _is_studied(basis: Basis) -> bool:
    """True for a one-sided bound of a plain fit by maximum likelihood, as the study has them."""
    return basis.side != "two" and basis.fit == FIT and not basis.threshold and basis.shape is None


def cautions_of_promise(promise: Promise | None, used: str) -> tuple[Caution, ...]:
    """Return the caution that a bound said to keep its promise was measured not to, in tests like the one in hand.

    Of likelihood and Wald bounds from few failures the engine's own cautions speak.
    """
    return promise.cautions if promise is not None and used in ("calibrated", "exact") else ()
