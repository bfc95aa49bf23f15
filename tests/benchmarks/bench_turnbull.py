"""How long the estimate without a family takes on 10,000 distinct intervals, and against lifelines on fewer.

Run by hand: .venv/bin/python tests/benchmarks/bench_turnbull.py (lifelines is in the extra `benchmark`).
"""

from __future__ import annotations

import sys
import time
import warnings
from collections.abc import Callable
from functools import partial
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[2]))

from reliability_app.engine import LifeData, turnbull

_KINDS = ("one look each", "two looks each", "narrow", "half known", "narrow, late entry")


def sample(kind: str, size: int) -> LifeData:
    """Weibull lives seen through distinct looks, invented."""
    chance = np.random.default_rng(20260303)
    life = 1000.0 * chance.weibull(1.5, size)
    looks = np.sort(chance.uniform(0.0, 2500.0, (size, 1 if kind == "one look each" else 2)), axis=1)
    around = np.column_stack([np.zeros(size), looks, np.full(size, np.inf)])
    at = (around[:, 1:-1] < life[:, None]).sum(axis=1)
    lower, upper = around[np.arange(size), at], around[np.arange(size), at + 1]
    if kind.startswith("narrow"):
        width = chance.uniform(1.0, 100.0, size)
        lower = np.maximum(life - width * chance.uniform(size=size), 0.0)
        upper = lower + width
    if kind == "half known":
        lower[::2] = upper[::2] = life[::2]
    entered = np.clip(chance.uniform(-300.0, 300.0, size), 0.0, 0.9 * lower) if "late" in kind else None
    return LifeData.from_intervals(lower, upper, entered=entered)


def seconds(work: Callable[[], object]) -> float:
    """Return the least time of three."""
    times = []
    for _ in range(3):
        began = time.perf_counter()
        work()
        times.append(time.perf_counter() - began)
    return min(times)


def against_lifelines(size: int) -> str:
    """Return the ratio of the times, and how far the survivals are apart."""
    try:
        from lifelines import KaplanMeierFitter
    except ImportError:
        return "lifelines is not installed"
    data = sample("two looks each", size)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        other = seconds(lambda: KaplanMeierFitter().fit_interval_censoring(data.lower, data.upper))
    own = seconds(lambda: turnbull(data))
    return f"{size} intervals: {own * 1e3:.1f} ms, lifelines {other * 1e3:.0f} ms: {other / own:.0f} times"


if __name__ == "__main__":
    for kind in _KINDS:
        data = sample(kind, 10_000)
        estimate = seconds(partial(turnbull, data))
        errors = seconds(partial(lambda units: turnbull(units).standard_error, data))
        steps = turnbull(data)
        print(
            f"{kind:20} {steps.age.size:5} intervals hold mass; {steps.steps:3} steps, excess {steps.excess:.0e};"
            f" {estimate:.3f} s, with errors {errors:.3f} s"
        )
    print(against_lifelines(300))
