"""Speeds of a fit as ratios within one run: python tests/benchmarks/bench_fit.py

One two-parameter fit of 30 units against scipy.stats and lifelines; one fit of 1,000,000 distinct units, half of them
running, against six bare passes of the family's own special function over the data (and against R's survreg where R is
there); 10,000 refits of 30 units in one batch against one fit by scipy.stats; a calibrated bound of 50 units.
The passes are the cheapest there are: into memory already there.
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
from reliability_app.engine.families import family
from reliability_app.engine.fitting import fit_batch
from reliability_app.engine.sample import NO_INTERVALS, NO_PART, Part, Sample

Array = NDArray[np.float64]
MANY, REFITS = 1_000_000, 10_000
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


def rig_lives(name: str, count: int, seed: int = 20) -> tuple[Array, NDArray[np.bool_]]:
    """Invented lives, half of them running: each unit is removed at an age of its own."""
    draw = np.random.default_rng(seed)
    z = ndtri(draw.random(count)) if name == "lognormal" else np.log(draw.exponential(size=count))
    other = ndtri(draw.random(count)) if name == "lognormal" else np.log(draw.exponential(size=count))
    life, removal = np.exp(6.5 + 0.6 * z), np.exp(6.5 + 0.6 * other)
    return np.minimum(life, removal), life <= removal


def report(what: str, seconds: float, against: str, other: float, target: str) -> None:
    """One line: both times, their ratio, and what ENGINE asks for."""
    ratio = other / seconds
    shown = f"{ratio:8.1f} x faster" if ratio >= 1 else f"{1 / ratio:8.2f} x the time"
    print(f"  {what:34s} {1e3 * seconds:10.3f} ms   {against:28s} {1e3 * other:10.3f} ms  {shown}  {target}")


def against_scipy(name: str, life: Array, failed: NDArray[np.bool_]) -> float:
    """Seconds of scipy.stats' own censored fit with its location fixed at 0."""
    from scipy import stats

    data = stats.CensoredData(uncensored=life[failed], right=life[~failed])
    distribution = stats.lognorm if name == "lognormal" else stats.weibull_min
    return best_of(lambda: distribution.fit(data, floc=0), 5)


def against_lifelines(name: str, life: Array, failed: NDArray[np.bool_]) -> float | None:
    """Seconds of lifelines' fitter, or None where it is not installed."""
    try:
        import lifelines
    except ImportError:
        return None
    fitter = lifelines.LogNormalFitter if name == "lognormal" else lifelines.WeibullFitter
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # another library's own warnings are not ours to judge
        return best_of(lambda: fitter().fit(life, failed), 5)


def small_fit() -> None:
    """30 units."""
    print("One fit of 30 units")
    for name in ("lognormal", "weibull"):
        life, failed = rig_lives(name, 30)
        data = LifeData.right_censored(life, failed)
        seconds = best_of(lambda data=data, name=name: checked(fit(data, name)), 300)
        other = against_scipy(name, life, failed)
        report(name, seconds, "scipy.stats, CensoredData", other, "(at least 50)")
        lines = against_lifelines(name, life, failed)
        if lines is None:
            print("  lifelines is not installed: pip install lifelines to compare")
        else:
            report(name, seconds, "lifelines", lines, "(at least 100)")


def large_fit() -> None:
    """1,000,000 distinct units."""
    print(f"One fit of {MANY:,} distinct units, half running")
    for name in ("lognormal", "weibull"):
        life, failed = rig_lives(name, MANY)
        data = LifeData.right_censored(life, failed)
        z = (np.log(life) - 6.5) / 0.6
        bare: Callable[..., Array] = log_ndtr if name == "lognormal" else np.exp
        seconds = best_of(lambda data=data, name=name: checked(fit(data, name)), 5)
        out = np.empty_like(z)
        passes = best_of(lambda bare=bare, z=z, out=out: [bare(z, out=out) for _ in range(6)], 5)
        against = f"six passes of {getattr(bare, '__name__', 'log_ndtr')}"
        report(name, seconds, against, passes, "(at most 2 x the time)")
        built = 1e3 * best_of(lambda life=life, failed=failed: LifeData.right_censored(life, failed), 3)
        print(f"  (building and checking the data beforehand: {built:.1f} ms)")
        against_r(name, life, failed, seconds)


def against_r(name: str, life: Array, failed: NDArray[np.bool_], seconds: float) -> None:
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
    if name not in times:
        print(f"  R's survreg did not run: {run.stderr.strip()}")
        return
    report(name, seconds, "R survreg", float(times[name]), "(at least 15)")


def many_refits() -> None:
    """10,000 samples of 30 units, half running, fitted in one batch."""
    print(f"{REFITS:,} refits of 30 units")
    for name in ("lognormal", "weibull"):
        lives, failed = zip(*(rig_lives(name, 30, seed) for seed in range(REFITS)), strict=True)
        y, dead = (np.log(lives) - 6.5) / 0.6, np.array(failed)
        nothing = np.zeros(REFITS)
        batch = Sample(
            Part(np.where(dead, y, 0.0), dead.astype(float)),
            Part(np.where(dead, 0.0, y), (~dead).astype(float)),
            NO_INTERVALS,
            NO_PART,
            NO_PART,
            6.5,
            0.6,
            nothing,
        )
        seconds = best_of(lambda batch=batch, name=name: fit_batch(batch, family(name)), 3)
        share = float(fit_batch(batch, family(name)).converged.mean())
        other = against_scipy(name, lives[0], failed[0])
        print(f"  {name:34s} {1e3 * seconds:10.1f} ms   one fit by scipy.stats {1e3 * other:10.1f} ms", end="")
        print(f"   {seconds / other:6.2f} x the time (under 6); {100 * share:.2f} % have an estimate")


def calibrated_bound() -> None:
    """50 units, half running: one calibrated bound at the default number of repeats."""
    print("One calibrated bound of 50 units, B10, one-sided 95 % (within 1 s)")
    for name in ("lognormal", "weibull"):
        data = LifeData.right_censored(*rig_lives(name, 50))
        took = best_of(lambda data=data, name=name: fit(data, name).life_bounds(0.1, kind="calibrated"), 2)
        print(f"  {name:34s} {took:10.2f} s")


def checked(done: Fit) -> Fit:
    """A fit that did not converge is no fit to time."""
    if not done.converged:
        raise RuntimeError("the timed fit did not converge")
    return done


if __name__ == "__main__":
    small_fit()
    large_fit()
    many_refits()
    calibrated_bound()
