"""Median-rank regression: a straight line by least squares through the failures on probability paper.

The failures stand at exact median ranks, with Johnson's adjusted ranks where units are still running (Johnson 1964,
from memory). The residuals are those of the age on its line ("of age") or those of the rank, as a score z ("of rank").
"""

from __future__ import annotations

import numpy as np

from reliability_app.engine.empirical import plotting_positions
from reliability_app.engine.families import Family
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.sample import Sample


def line_through_ranks(data: LifeData, sample: Sample, chosen: Family, *, of_age: bool) -> tuple[float, float]:
    """Return (a, b), in the standardised places of a sample, of the line z = a + b y through the median ranks.

    Parameters
    ----------
    of_age : bool
        Make the squared residuals of y small, given z; else those of z, given y. Where sigma is fixed both are one.
    """
    points = plotting_positions(data, method="median_rank")
    y, z = sample.to_y(points.age), chosen.standard.quantile(points.fraction)
    from_y, from_z = y - y.mean(), z - z.mean()
    if chosen.fixed_sigma is not None:
        b = sample.spread / chosen.fixed_sigma
    elif of_age:
        b = float(from_z @ from_z) / float(from_z @ from_y)
    else:
        b = float(from_z @ from_y) / float(from_y @ from_y)
    return float(z.mean() - b * np.mean(y)), b
