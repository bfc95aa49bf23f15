"""What must be known of a fit with a further parameter, and why there is none, in words."""

from __future__ import annotations

import numpy as np

from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.shaped.profile import Profile, profile
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate
from reliability_app.engine.shaped.sheaf import End, Sheaf
from reliability_app.engine.shaped.threshold_sheaf import ThresholdSheaf

# Where the log-likelihood falls by less than this towards an end, a likelihood-ratio bound at two-sided 95 % takes the
# end in: half of the 95 % point of chi-square with 1 degree of freedom.
_HARDLY = 1.9207
_HIGHER_BY = 1e-6


def no_maximum(sheaf: Sheaf, seen: Profile, title: str) -> Caution:
    """Say towards which end the likelihood keeps rising where it has no maximum inside."""
    value = seen.value
    sides = ((sheaf.ends[0], value[0], value[1]), (sheaf.ends[1], value[-1], value[-2]))
    rising = sorted((not end.is_limit, -at_end, end.code, end) for end, at_end, before in sides if at_end >= before)
    ends = [side[-1] for side in rising]
    named = ends[0]
    text = (
        f"The likelihood has no maximum within the {title} family: it keeps rising as {' and as '.join(_texts(ends))}. "
        f"No estimate exists; choose {named.advice}."
    )
    return Caution(named.code, Severity.SERIOUS, text)


def _texts(ends: list[End]) -> list[str]:
    return [end.text for end in ends]


def cautions_of_shape(found: ShapedEstimate) -> tuple[Caution, ...]:
    """Return the cautions that the further parameter calls for."""
    if found.is_edge:
        return (_at_first_failure(),)
    said = [*_several(found), *_ends(found)]
    if isinstance(found.sheaf, ThresholdSheaf):
        said.extend(_threshold(found, found.sheaf))
    return tuple(said)


def _at_first_failure() -> Caution:
    text = (
        "The likelihood is highest with the threshold at the first failure itself, which is later than the true one "
        "for certain; neither Wald nor likelihood-ratio bounds hold there, so none are given."
    )
    return Caution("threshold-at-first-failure", Severity.SERIOUS, text)


def _several(found: ShapedEstimate) -> list[Caution]:
    if not found.others:
        return []
    name, next_best = found.sheaf.coordinates[-1].name, found.others[0]
    text = (
        f"The likelihood has {1 + len(found.others)} maxima; the highest is reported, the next differs in {name} and "
        f"has a log-likelihood lower by {found.log_likelihood - next_best.value:.2g}: compare with simpler families."
    )
    return [Caution("several-maxima", Severity.CAUTION, text)]


def _ends(found: ShapedEstimate) -> list[Caution]:
    """Say where the likelihood is higher still at an end, or hardly falls towards it."""
    said = []
    values_at_ends = found.seen.value[[0, -1]].tolist()
    for end, at_end, value in zip(found.sheaf.ends, values_at_ends, _least_towards(found), strict=True):
        if end.is_limit and at_end > found.log_likelihood + _HIGHER_BY:
            text = f"The estimate is a local maximum only: the likelihood is higher still as {end.text}."
            said.append(Caution(f"higher-as-{end.code}", Severity.CAUTION, f"{text[:-1]}; choose {end.advice}."))
        elif found.log_likelihood - value < _HARDLY:
            text = (
                f"The units hardly determine the {found.sheaf.coordinates[-1].name}: the likelihood falls by less than "
                f"a factor of 7 as {end.text}; prefer a family with fewer parameters."
            )
            said.append(Caution(f"hardly-determined-{end.code}", Severity.CAUTION, text))
    return said


def _least_towards(found: ShapedEstimate) -> tuple[float, float]:
    """Return the lowest log-likelihood of the profile on the way to either end."""
    seen, kappa = found.seen, found.point[2]
    sides = (seen.value[seen.kappa < kappa], seen.value[seen.kappa > kappa])
    low, high = (float(side.min(initial=np.inf)) for side in sides)
    return low, high


def _threshold(found: ShapedEstimate, sheaf: ThresholdSheaf) -> list[Caution]:
    """Say what a threshold is estimated as, and whether the units ask for one."""
    said = [_LOCAL]
    at_zero = profile(sheaf, np.array([np.arcsinh(sheaf.range / sheaf.first)]))
    without = float(at_zero.value[0]) if sheaf.first > 0 else -np.inf
    if without > found.log_likelihood:
        text = f"Without a threshold the likelihood is higher: choose the {sheaf.family.title} family itself."
        said.append(Caution("better-without-threshold", Severity.CAUTION, text))
    threshold = float(np.asarray(sheaf.parts(found.point[2:])[-1][0])[0])
    if threshold < 0 < sheaf.first:
        z = found.point[0] + found.point[1] * sheaf.to_y(np.zeros(1), found.point[2:])
        share = 100.0 * float(sheaf.family.standard.cdf(z)[0])
        text = (
            f"The threshold is negative, so it is no age before which nothing fails, and {share:.2g} % of the lives "
            f"are put below age 0: choose the {sheaf.family.title} family itself."
        )
        said.append(Caution("negative-threshold", Severity.CAUTION, text))
    return said


_LOCAL = Caution(
    "threshold-is-local",
    Severity.NOTE,
    "With a threshold the likelihood has no upper limit as it nears the first failure; the estimate is the highest "
    "maximum before that.",
)
