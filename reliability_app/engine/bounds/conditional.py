"""Exact bounds of location-scale families, conditional on the ancillaries, by quadrature.

For complete data and tests stopped at a fixed number of failures the distribution of the pivots, given the ancillaries
(how the lives lie relative to each other), makes a bound of a life, a reliability or a spread hold with exactly its
confidence (Fisher 1934; Lawless 1978, Technometrics 20, 355-364; cited from memory). That distribution is the
posterior under the density 1/sigma for mu and sigma, which is how it is computed: in a and s = ln b its density is
the likelihood divided by b.

For each s on Gauss-Legendre nodes the distribution of a is held as polynomials on panels, so that the probability of
any half plane {a + b y <= z} is one sum over the nodes. There is no simulation, and no noise.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.panels import NODES, Panels, node_weights, nodes_of
from reliability_app.engine.bounds.wald import wald_end
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.life_measures import LifeMeasure, ScoreMeasure, SlopeMeasure
from reliability_app.engine.likelihood import Terms
from reliability_app.engine.newton import maximise

Array = NDArray[np.float64]

# Width of the panels of s in its standard errors.
_WIDEST, _NARROWEST = 1.0, 0.125
# So much of s, in its standard errors, is integrated at a time.
_STRETCH = 2.0
# Rows whose share of the whole is smaller than this are left out; densities so far below their top in ln as well.
_LEAST_SHARE, _DEEP = 1e-14, 30.0
_MOST_STRETCHES = 200
_REACHES = np.array([5.0, 6.0, 7.0, 8.0, 9.5, 12.0, 15.0, 19.0, 24.0, 30.0, 38.0, 50.0, 70.0])
# An edge of a half plane that cuts across s within so many standard errors is resolved by a panel as wide.
_EDGE_RESOLVED = 5.0
_MOST_STEPS, _STEP_REACHED, _ROUNDING = 100, 1e-10, 1e-10


@dataclass(frozen=True, eq=False)
class Posterior:
    """The distribution of (a, s): the share of each row of one s, and that of a within it."""

    b: Array
    share: Array
    rows: Panels
    of_s: Panels

    def below(self, y: Array, z: Array) -> tuple[Array, Array, Array]:
        """Return the probability of a + b y <= z with its derivatives in y and z, each of shape (points,)."""
        part, density = self.rows.up_to(z[:, None] - self.b * y[:, None])
        return part @ self.share, -(density @ (self.share * self.b)), density @ self.share


@dataclass(frozen=True, eq=False)
class ConditionalBounds:
    """Ends of exact bounds of one estimate; what has been integrated once serves every later question."""

    estimate: Estimate
    _posteriors: dict[float, Posterior] = field(default_factory=dict)

    def life_end(self, measure: LifeMeasure, tail: float, sign: float) -> Array:
        """Return the ends of lives: where the probability of a longer life is 1 - tail (lower end) or tail (upper)."""
        start, z = wald_end(self.estimate, measure, -float(ndtri(tail)), sign), measure.z
        posterior = self._posterior(np.abs(z - self._ridge.pivot))

        def below(y: Array) -> tuple[Array, Array]:
            value, in_y, _ = posterior.below(y, z)
            return value, in_y

        return _solve(below, start, self._width(measure), level=1.0 - tail if sign < 0 else tail, direction=-1.0)

    def score_end(self, measure: ScoreMeasure, tail: float, sign: float) -> Array:
        """Return the ends of scores, whose distribution function is the failure probability.

        Far from the data a score is as uncertain as b is; the further out, the more nearly its ends are those of b, and
        are taken so where failure probabilities are 0 or 1 to all digits.
        """
        along = measure.y + self._ridge.slope
        b_low, b_high = (np.exp(self.slope_end(tail, way)) for way in (-1.0, 1.0))
        b_end = np.where(sign * along > 0, b_high, b_low)
        ends = self._ridge.pivot + b_end * along
        near = np.abs(b_end * along) <= self._furthest
        if near.any():
            ends[near] = self._near_score_end(measure.at(np.flatnonzero(near)), tail, sign, b_end[near] * along[near])
        return ends

    def _near_score_end(self, measure: ScoreMeasure, tail: float, sign: float, steepness: Array) -> Array:
        start = wald_end(self.estimate, measure, -float(ndtri(tail)), sign)
        posterior, y = self._posterior(np.abs(steepness)), measure.y

        def below(z: Array) -> tuple[Array, Array]:
            value, _, in_z = posterior.below(y, z)
            return value, in_z

        return _solve(below, start, self._width(measure), level=tail if sign < 0 else 1.0 - tail, direction=1.0)

    def slope_end(self, tail: float, sign: float) -> Array:
        """Return the end of ln b."""
        measure = SlopeMeasure()
        start = wald_end(self.estimate, measure, -float(ndtri(tail)), sign)
        of_s = self._posterior(np.zeros(1)).of_s

        def below(s: Array) -> tuple[Array, Array]:
            part, density = of_s.up_to(s[:, None])
            return part[:, 0], density[:, 0]

        return _solve(below, start, self._width(measure), level=tail if sign < 0 else 1.0 - tail, direction=1.0)

    def _width(self, measure: LifeMeasure | ScoreMeasure | SlopeMeasure) -> Array:
        return wald_end(self.estimate, measure, 1.0, 1.0) - wald_end(self.estimate, measure, 0.0, 1.0)

    @cached_property
    def _ridge(self) -> _Ridge:
        return _Ridge.of(self.estimate)

    @property
    def _furthest(self) -> float:
        return _EDGE_RESOLVED * self._ridge.spread_a / (_NARROWEST * self._ridge.spread_s)

    def _posterior(self, steepness: Array) -> Posterior:
        """Return the distribution on panels narrow enough for half planes whose edges cut s so steeply.

        At the ridge, which it crosses at a score z, the edge of a half plane moves by z less the pivot for a unit of s.
        """
        steepest = max(float(steepness.max()), 1e-300)
        wanted = min(_WIDEST, _EDGE_RESOLVED * self._ridge.spread_a / (steepest * self._ridge.spread_s))
        width = max(_NARROWEST, float(2.0 ** np.floor(np.log2(wanted))))
        for finer in (known for known in self._posteriors if known <= width):
            return self._posteriors[finer]
        self._posteriors[width] = _integrated(self.estimate, width)
        return self._posteriors[width]


@dataclass(frozen=True)
class _Ridge:
    """The best a for each b, near the estimate a straight line pivot + slope b, and the spreads of a there and s."""

    slope: float
    pivot: float
    spread_a: float
    spread_s: float

    @classmethod
    def of(cls, estimate: Estimate) -> _Ridge:
        (aa, ab), (_, bb) = estimate.covariance_ab
        slope = ab / bb
        spread_a, spread_s = np.sqrt(aa - slope * ab), np.sqrt(bb) / estimate.b
        return cls(float(slope), float(estimate.a - slope * estimate.b), float(spread_a), float(spread_s))


def _integrated(estimate: Estimate, width: float) -> Posterior:
    """Integrate stretch after stretch of s, away from the estimate, until hardly anything is left on either side."""
    step = width * _Ridge.of(estimate).spread_s
    panels = round(_STRETCH / width)
    first = np.log(estimate.b) - 0.5 * panels * step
    found: dict[int, _Stretch] = {}
    for direction in (1, -1):
        place = 0 if direction > 0 else -1
        while not found or len(found) < _MOST_STRETCHES:
            found[place] = _stretch(estimate, first + place * panels * step, step, panels)
            shares = {at: float(rows.density.sum()) for at, rows in found.items()}
            if place != 0 and shares[place] < _LEAST_SHARE * sum(shares.values()):
                break
            place += direction
    return _joined([found[place] for place in sorted(found)], first + min(found) * panels * step, step)


def _joined(stretches: list[_Stretch], start: float, step: float) -> Posterior:
    density = np.concatenate([stretch.density for stretch in stretches])
    parts = [stretch.rows for stretch in stretches]
    rows = Panels(
        np.concatenate([part.start for part in parts]),
        np.concatenate([part.width for part in parts]),
        np.concatenate([part.powers / part.total[:, None] for part in parts], axis=1),
        np.ones_like(density),
    )
    share = density * np.tile(node_weights(step), density.size // NODES)
    whole = float(share.sum())
    of_s = Panels.through(np.array([start]), np.array([step]), (density / whole).reshape(1, -1, NODES))
    return Posterior(np.concatenate([stretch.b for stretch in stretches]), share / whole, rows, of_s)


@dataclass(frozen=True, eq=False)
class _Stretch:
    """Some panels of s: b at their nodes, the density of s there (to a common factor), that of a along each row."""

    b: Array
    density: Array
    rows: Panels


def _stretch(estimate: Estimate, start: float, step: float, panels: int) -> _Stretch:
    s = nodes_of(np.array([start]), np.array([step]), panels).ravel()
    b = np.exp(s)
    centre, spread, height = _along_ridge(estimate, b)
    low, reach = _extent(estimate, b, centre, spread, height)
    across = _panels_across(estimate)
    nodes = nodes_of(low, reach / across, across)
    drop = _heights(estimate, nodes.reshape(s.size, -1), b) - height[:, None]
    rows = Panels.through(low, reach / across, np.exp(drop).reshape(nodes.shape))
    top = float(estimate.terms.value[0]) - np.log(estimate.b)
    return _Stretch(b, rows.total * np.exp(height - s - top), rows)


def _panels_across(estimate: Estimate) -> int:
    """Return how many panels of two standard errors a row needs: with few failures one tail of a is exponential."""
    failures = float(estimate.sample.failed.total[0])
    return int(np.ceil(0.5 * (max(8.0, _DEEP / np.sqrt(failures)) + 8.0)))


def _extent(estimate: Estimate, b: Array, centre: Array, spread: Array, height: Array) -> tuple[Array, Array]:
    """Return where each row begins and how far it reaches: as far as its density is above nothing."""
    reach = []
    for sign in (-1.0, 1.0):
        drop = _heights(estimate, centre[:, None] + sign * spread[:, None] * _REACHES, b) - height[:, None]
        drop[:, -1] = -np.inf
        reach.append(_REACHES[np.argmax(~(drop >= -_DEEP), axis=1)] * spread)
    return centre - reach[0], reach[0] + reach[1]


def _along_ridge(estimate: Estimate, b: Array) -> tuple[Array, Array, Array]:
    """Return the best a for each b, about its standard error there, and the log-likelihood."""
    ridge = _Ridge.of(estimate)
    start = ridge.pivot + ridge.slope * b

    def evaluate(_: NDArray[np.intp], a: Array, at_b: Array) -> Terms:
        return estimate.evaluate(a, at_b)

    failures = np.full(b.size, float(estimate.sample.failed.total[0]))
    best = maximise(evaluate, start, b.copy(), failures=failures, b_is_fixed=True)
    # Far out the top may be as flat as the failures are apart.
    widest = 3.0 + b * np.ptp(estimate.sample.failed.y)
    return best.a, 1.0 / np.sqrt(np.maximum(-best.terms.d_aa, widest**-2.0)), best.terms.value


def _heights(estimate: Estimate, a: Array, b: Array) -> Array:
    """Return the log-likelihood, of failures and units still running, at points in rows of one b."""
    sample, standard = estimate.sample, estimate.family.standard
    heights: Array = sample.failed.total[0] * np.log(b)[:, None] + np.zeros_like(a)
    for part, function in ((sample.failed, standard.log_density), (sample.running, standard.log_survival)):
        for y, weight, *_ in part.blocks(a.size):
            with np.errstate(over="ignore", under="ignore"):
                heights += np.asarray(function(a[:, :, None] + b[:, None, None] * y[0]).value @ weight[0])
    return heights


def _solve(
    below: Callable[[Array], tuple[Array, Array]], start: Array, width: Array, *, level: float, direction: float
) -> Array:
    """Solve below(x) = level by Newton's method in normal scores; probabilities rise (direction 1) or fall (-1)."""
    x, low, high = start.copy(), np.full_like(start, -np.inf), np.full_like(start, np.inf)
    settled = np.zeros(x.shape, dtype=bool)
    target, most = float(ndtri(level)), float(-ndtri(1e-15))
    for _ in range(_MOST_STEPS):
        value, slope = below(x)
        score = np.clip(ndtri(np.clip(value, 0.0, 1.0)), -most, most)
        gap = score - target
        too_far = gap * direction > 0
        high, low = np.where(too_far, x, high), np.where(too_far, low, x)
        with np.errstate(divide="ignore", invalid="ignore"):
            step = -gap * np.exp(-0.5 * score * score) / np.sqrt(2.0 * np.pi) / slope
        # The tails of the heaviest distributions (two failures) lie many times further out than those of the lightest.
        reach = np.maximum(3.0 * width, 2.0 * np.abs(x - start))
        # Beyond all but rounding the slope says nothing: go back towards the middle.
        useful = np.isfinite(step) & (slope * direction > 0) & (np.minimum(value, 1.0 - value) > _ROUNDING)
        settled |= (useful & (np.abs(step) <= _STEP_REACHED * reach)) | (high - low <= _STEP_REACHED * reach)
        if settled.all():
            return x
        step = np.where(useful, np.clip(step, -reach, reach), -np.sign(gap) * direction * reach)
        moved = x + step
        inside = (moved > low) & (moved < high)
        between = np.where(np.isfinite(high - low), 0.5 * (low + high), moved)
        x = np.where(settled, x, np.where(inside, moved, between))
    raise BoundUnavailable("The exact bound was not reached for these units: choose the likelihood bound.")
