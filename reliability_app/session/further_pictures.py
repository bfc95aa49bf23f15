"""FurtherPicture: what the pages beside Paper, Hazard and Survival draw of a set, computed when first shown."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.special import betaincinv, ndtri

from reliability_app.engine import Curve, Fit
from reliability_app.engine.bounds.kinds import tail_of
from reliability_app.engine.empirical import nelson_aalen
from reliability_app.engine.errors import RigpaperError
from reliability_app.engine.fit_curves import cumulative_hazard_curve, density_curve, hazard_step_curve
from reliability_app.engine.parameter_region import ParameterOutline, joint_root, parameter_outline
from reliability_app.engine.residuals import quantile_residuals
from reliability_app.session.analysis import SetAnalysis

Floats = NDArray[np.float64]
Integers = NDArray[np.intp]

_MOST_RESIDUALS, _MOST_DRAWN = 1_000_000, 2000
_ENVELOPE = 0.95


@dataclass(frozen=True, eq=False)
class RegionPicture:
    """The likelihood region of a set's two parameters.

    Attributes
    ----------
    family : str
    maximum : (float, float)
        The parameters at the maximum, in customary order.
    joint, cut : ParameterOutline
        The region that holds both parameters at once, and the one over which a bound is an extreme.
    confidence : float
        Of the joint region, and of a bound on the side of the basis.
    side : str
        "lower", "upper" or "two".
    """

    family: str
    maximum: tuple[float, float]
    joint: ParameterOutline
    cut: ParameterOutline
    confidence: float
    side: str


@dataclass(frozen=True, eq=False)
class ResidualPicture:
    """Quantile residuals in rising order against the normal quantiles of their ranks; arrays of shape (n,).

    Attributes
    ----------
    expected, value : ndarray
        Normal quantile of the rank, and the residual.
    low, high : ndarray
        Between which a residual of that rank lies with 95 % probability under the family, rank by rank.
    is_drawn : ndarray of bool
        True where the unit's life is only known to lie in an interval, and the residual is drawn from it at random.
    rows : ndarray of int
        The row of the unit table each belongs to.
    names : tuple of str
        The unit of that row.
    units : int
        How many units there are; of very many, evenly spaced ranks are kept.
    """

    expected: Floats
    value: Floats
    low: Floats
    high: Floats
    is_drawn: NDArray[np.bool_]
    rows: Integers
    names: tuple[str, ...]
    units: int


@dataclass(frozen=True, eq=False)
class FurtherPicture:
    """What further pages draw of one set; each part is computed when first asked for, and kept.

    Attributes
    ----------
    analysis : SetAnalysis
        Its fit, units and basis count; a reading moved since then does not.
    """

    analysis: SetAnalysis

    def is_of(self, analysis: SetAnalysis) -> bool:
        """True where an analysis has the same fit under the same basis, so that everything here still holds."""
        mine = self.analysis
        return (
            mine.fit is analysis.fit
            and mine.question is analysis.question
            and mine.picture.failure is (analysis.picture.failure)
        )

    @property
    def fit(self) -> Fit | None:
        """The fit, where there is an estimate."""
        found = self.analysis.fit
        return found if found is not None and found.converged else None

    @property
    def density_band(self) -> str:
        """The kind of the density's band: Wald where the basis has it, else the likelihood ratio."""
        return "wald" if self.analysis.question.basis.bound == "wald" else "likelihood"

    @cached_property
    def density(self) -> Curve | None:
        """The density over the ages of the other curves, with a two-sided band where there is one."""
        failure = self.analysis.picture.failure
        if self.fit is None or failure is None:
            return None
        confidence = self.analysis.question.basis.confidence
        return density_curve(self.fit, failure.x, confidence=confidence, kind=self.density_band)

    @cached_property
    def cumulative_hazard(self) -> Curve | None:
        """The cumulative hazard of the fit, with the band of the failure probability carried over."""
        picture = self.analysis.picture
        if picture.failure is None or picture.survival is None:
            return None
        return cumulative_hazard_curve(picture.failure, picture.survival)

    @cached_property
    def hazard_steps(self) -> Curve | None:
        """Nelson-Aalen's steps; -ln of Turnbull's estimate where units were found failed; None without units."""
        steps = self.analysis.picture.steps
        if steps is None:
            return None
        if self.analysis.fit is not None and not self.has_found_failed:
            data = self.analysis.fit.data
            return hazard_step_curve(nelson_aalen(data), float(steps.x[0]), data.last_observation)
        with np.errstate(divide="ignore"):
            hazard = -np.log(steps.y)
        return Curve(steps.x, np.where(np.isfinite(hazard), hazard, np.nan))

    @property
    def has_found_failed(self) -> bool:
        """True where the steps are Turnbull's."""
        return self.analysis.question.counts.found_failed > 0

    @cached_property
    def region(self) -> RegionPicture | str:
        """The likelihood region, or a sentence that says why there is none."""
        found, basis = self.fit, self.analysis.question.basis
        if found is None:
            return "These units give no estimate, so there is no region. The cautions below say why."
        try:
            joint = parameter_outline(found, joint_root(basis.confidence))
            cut = parameter_outline(found, -float(ndtri(tail_of(basis.side, basis.confidence))))
        except RigpaperError as trouble:
            return str(trouble)
        first, second = (found.parameters[name] or 0.0 for name in joint.names)
        return RegionPicture(found.family.name, (first, second), joint, cut, basis.confidence, basis.side)

    @cached_property
    def residuals(self) -> ResidualPicture | str:
        """The quantile residuals, or a sentence that says why there are none."""
        found, question = self.fit, self.analysis.question
        if found is None:
            return "These units give no estimate, so there are no residuals. The cautions below say why."
        units = found.data.unit_count
        if units > _MOST_RESIDUALS:
            return f"Residuals are given for {_MOST_RESIDUALS} units at the most; these are {units}."
        residuals = quantile_residuals(found)
        order = np.argsort(residuals.value, kind="stable")
        n = order.size
        rank = np.unique(np.linspace(1, n, min(n, _MOST_DRAWN)).round())
        kept = order[rank.astype(np.intp) - 1]
        rest = 0.5 * (1.0 - _ENVELOPE)
        low, high = (
            np.asarray(ndtri(betaincinv(rank, n - rank + 1.0, share)), np.float64) for share in (rest, 1.0 - rest)
        )
        rows = np.asarray(question.units.rows, dtype=np.intp)[residuals.record[kept]]
        return ResidualPicture(
            expected=ndtri((rank - 0.5) / n),
            value=residuals.value[kept],
            low=low,
            high=high,
            is_drawn=residuals.lower[kept] < residuals.upper[kept],
            rows=rows,
            names=tuple(question.names.get(row, "") for row in rows.tolist()),
            units=n,
        )


def further_of(analysis: SetAnalysis, before: FurtherPicture | None = None) -> FurtherPicture:
    """Return the further picture of an analysis: the one there was, where it still holds."""
    return before if before is not None and before.is_of(analysis) else FurtherPicture(analysis)
