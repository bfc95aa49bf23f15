"""Anderson-Darling and plot positions by loops and quadrature, sharing no formula with the engine."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from scipy import integrate

from reliability_app.engine import LifeData


def naive_steps(data: LifeData) -> list[tuple[float, float, float]]:
    """Age, share running before and after, one failure age at a time (failures before leavers, entries last)."""
    steps, running = [], 1.0
    units = list(zip(data.lower, data.upper, data.quantity, data.entered, strict=True))
    for age in sorted({low for low, high, _, _ in units if low == high}):
        at_risk = sum(count for low, _, count, entry in units if entry < age <= low)
        failed = sum(count for low, high, count, _ in units if low == high == age)
        before, running = running, running * (1 - failed / at_risk)
        steps.append((age, before, running))
    return steps


def naive_anderson_darling(data: LifeData, cdf: Callable[[float], float]) -> float:
    """n times the integral of (F_KM - F)^2/(F (1 - F)) dF, piece by piece."""
    steps = naive_steps(data)
    last = float(data.lower.max())
    ends = [0.0, *(cdf(age) for age, _, _ in steps), 1.0 if data.is_complete else cdf(last)]
    levels = [0.0, *(1 - after for _, _, after in steps)]
    total = 0.0
    for low, high, level in zip(ends[:-1], ends[1:], levels, strict=True):
        if high > low:
            total += integrate.quad(
                lambda u, level=level: (level - u) ** 2 / (u * (1 - u)), low, high, epsabs=1e-12, epsrel=1e-10
            )[0]
    return data.unit_count * total


def naive_correlation(data: LifeData, quantile: Callable[[float], float]) -> float:
    """Correlation of ln life and quantile over the failed units, each at the mid-point of its age's step."""
    ages, scores = [], []
    for age, before, after in naive_steps(data):
        count = int(data.quantity[data.is_failed & (data.lower == age)].sum())
        ages += [np.log(age)] * count
        scores += [quantile(1 - 0.5 * (before + after))] * count
    return float(np.corrcoef(ages, scores)[0, 1])
