"""CandidateLine: another family fitted to the units of a set, as a thin line on the paper."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.candidates import Candidate

Floats = NDArray[np.float64]

MOST_LINES = 4


@dataclass(frozen=True, eq=False)
class CandidateLine:
    """The failure probability of a candidate over age.

    Attributes
    ----------
    title : str
        The family.
    age, fraction : ndarray, shape (n,)
    """

    title: str
    age: Floats
    fraction: Floats


def candidate_lines(candidates: Sequence[Candidate], family_name: str, ages: Floats) -> tuple[CandidateLine, ...]:
    """Return the lines of the best candidates by AICc other than the family of the basis, at most four."""
    others = [one for one in candidates if one.is_fitted and one.aicc is not None and one.name != family_name]
    return tuple(
        CandidateLine(one.title, ages, np.asarray(one.fit.failure_probability(ages)))
        for one in others[:MOST_LINES]
        if one.fit is not None
    )
