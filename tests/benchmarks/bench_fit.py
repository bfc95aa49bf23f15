"""Speeds of a fit as ratios within one run: python tests/benchmarks/bench_fit.py

One two-parameter fit of 30 units against scipy.stats and lifelines, and one fit of 1,000,000 distinct units,
half of them running, against six bare passes of the family's own special function over the data (and against
R's survreg where R is there).
"""

from __future__ import annotations

import shutil
import subprocess
import sys
import tempfile
import time
import warnings
from collections.abc import Callable
from pathlib import Path

import numpy as np
from numpy.typing import NDArray
from scipy.special import log_ndtr, ndtri

sys.path.insert(0, str(Path(__file__).parents[2]))

from reliability_app.engine import Fit, LifeData, fit

Array = NDArray[np.float64]
MANY = 1_000_000
R_SCRIPT = """
suppressMessages(library(survival))
d <- read.csv(commandArgs(TRUE)[1])
s <- Surv(d$life, d$failed)
for (family in c("lognormal", "weibull")) {
  took <- min(sapply(1:2, function(i) system.time(survreg(s ~ 1, dist = family))["elapsed"]))
  cat(family, took, "\\n")
}
"""


def best_of(work: Callable[[], object], times: int) -> float:
    """Shortest of several runs, in seconds."""
    best = np.inf
    for _ in range(times):
        start = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - start)
    return best


def rig_lives(family: str, count: int, seed: int = 20) -> tuple[Array, NDArray[np.bool_]]:
    """Invented lives, half of them running: each unit is removed at an age of its own."""
    draw = np.random.default_rng(seed)
    z = ndtri(draw.random(count)) if family == "lognormal" else np.log(draw.exponential(size=count))
    other = ndtri(draw.random(count)) if family == "lognormal" else np.log(draw.exponential(size=count))
    life, removal = np.exp(6.5 + 0.6 * z), np.exp(6.5 + 0.6 * other)
    return np.minimum(life, removal), life <= removal


def report(what: str, seconds: float, against: str, other: float, target: str) -> None:
    """One line: both times, their ratio, and what ENGINE asks for."""
    ratio = other / seconds
    shown = f"{ratio:8.1f} x faster" if ratio >= 1 else f"{1 / ratio:8.2f} x the time"
    print(f"  {what:34s} {1e3 * seconds:10.3f} ms   {against:28s} {1e3 * other:10.3f} ms  {shown}  {target}")


def against_scipy(family: str, life: Array, failed: NDArray[np.bool_]) -> float:
    """Seconds of scipy.stats' own censored fit with its location fixed at 0."""
    from scipy import stats

    data = stats.CensoredData(uncensored=life[failed], right=life[~failed])
    distribution = stats.lognorm if family == "lognormal" else stats.weibull_min
    return best_of(lambda: distribution.fit(data, floc=0), 5)


def against_lifelines(family: str, life: Array, failed: NDArray[np.bool_]) -> float | None:
    """Seconds of lifelines' fitter, or None where it is not installed."""
    try:
        import lifelines
    except ImportError:
        return None
    fitter = lifelines.LogNormalFitter if family == "lognormal" else lifelines.WeibullFitter
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # another library's own warnings are not ours to judge
        return best_of(lambda: fitter().fit(life, failed), 5)


def small_fit() -> None:
    """30 units."""
    print("One fit of 30 units")
    for family in ("lognormal", "weibull"):
        life, failed = rig_lives(family, 30)
        data = LifeData.right_censored(life, failed)
        seconds = best_of(lambda data=data, family=family: checked(fit(data, family)), 300)
        other = against_scipy(family, life, failed)
        report(family, seconds, "scipy.stats, CensoredData", other, "(at least 50)")
        lines = against_lifelines(family, life, failed)
        if lines is None:
            print("  lifelines is not installed: pip install lifelines to compare")
        else:
            report(family, seconds, "lifelines", lines, "(at least 100)")


def large_fit() -> None:
    """1,000,000 distinct units."""
    print(f"One fit of {MANY:,} distinct units, half running")
    for family in ("lognormal", "weibull"):
        life, failed = rig_lives(family, MANY)
        data = LifeData.right_censored(life, failed)
        z = (np.log(life) - 6.5) / 0.6
        bare: Callable[[Array], Array] = log_ndtr if family == "lognormal" else np.exp
        seconds = best_of(lambda data=data, family=family: checked(fit(data, family)), 5)
        passes = best_of(lambda bare=bare, z=z: [bare(z) for _ in range(6)], 5)
        name = f"six passes of {getattr(bare, '__name__', 'log_ndtr')}"
        report(family, seconds, name, passes, "(at most 2 x the time)")
        built = 1e3 * best_of(lambda life=life, failed=failed: LifeData.right_censored(life, failed), 3)
        print(f"  (building and checking the data beforehand: {built:.1f} ms)")
        against_r(family, life, failed, seconds)


def against_r(family: str, life: Array, failed: NDArray[np.bool_], seconds: float) -> None:
    """R's survreg on the same lives, where R and its survival package are there."""
    if shutil.which("Rscript") is None:
        print("  R is not here: no comparison with survreg")
        return
    with tempfile.TemporaryDirectory() as folder:
        table, script = Path(folder, "lives.csv"), Path(folder, "fit.R")
        np.savetxt(table, np.column_stack([life, failed]), delimiter=",", header="life,failed", comments="")
        script.write_text(R_SCRIPT, encoding="utf-8")
        run = subprocess.run(["Rscript", script, table], capture_output=True, text=True, check=False)
    times = dict(line.split() for line in run.stdout.splitlines())
    if family not in times:
        print(f"  R's survreg did not run: {run.stderr.strip()}")
        return
    report(family, seconds, "R survreg", float(times[family]), "(at least 15)")


def checked(done: Fit) -> Fit:
    """A fit that did not converge is no fit to time."""
    if not done.converged:
        raise RuntimeError("the timed fit did not converge")
    return done


if __name__ == "__main__":
    small_fit()
    large_fit()
