"""How often the foretold limits hold, a resumable study: python tests/benchmarks/foretold_study.py FILE

A cell is a family, a number of units, how many are expected to have failed at the first look and by the second, and
how the hazard goes on: as before, or raised by a factor from the first look on (then the share of "not what was
foretold" is the power of the check). Each test stops at a fixed age, or its units were put on test at ages of their own
("staggered"). A cell already in FILE is passed over. Beside them stand the limits with the fitted parameters put in as
if known. The results of a full run are kept
beside this file, as foretold_study.json.
"""

from __future__ import annotations

import argparse
import json
import time
from dataclasses import asdict, dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray
from scipy.stats import poisson

from reliability_app.engine import Fit, LifeData, fit
from reliability_app.engine import foretold as foretelling
from reliability_app.engine.families import family
from reliability_app.engine.foretold import Watch, foretell

Array = NDArray[np.float64]
REFITS = 1000
CONFIDENCE = 0.95


@dataclass(frozen=True)
class Cell:
    """One design."""

    family: str
    units: int
    failures: int
    then_by: int
    plan: str
    hazard: float

    @property
    def key(self) -> str:
        """What names it."""
        return json.dumps(asdict(self))


def cells() -> list[Cell]:
    """Return the designs."""
    sizes = [(100, 5, 15), (100, 10, 20), (100, 40, 60), (500, 5, 15), (500, 20, 40), (2000, 5, 15), (2000, 40, 80)]
    held = [Cell(name, *size, plan="fixed time", hazard=1.0) for size in sizes for name in ("weibull", "lognormal")]
    held += [Cell(name, 100, 20, 40, "staggered", 1.0) for name in ("weibull", "lognormal")]
    changed = [Cell("weibull", *size, "fixed time", factor) for size in sizes[1:5:2] for factor in (2.0, 3.0)]
    return held + changed


def survival_score(cell: Cell, then: Array, uniform: Array) -> Array:
    """Draw scores of lives whose cumulative hazard grows `hazard` times as fast beyond the scores `then`."""
    standard = family(cell.family).standard
    exposure = -np.log(uniform)
    before = -standard.log_survival(then).value
    stretched = np.where(exposure <= before, exposure, before + (exposure - before) / cell.hazard)
    return standard.quantile(-np.expm1(-stretched))


def ages(cell: Cell, generator: np.random.Generator) -> tuple[Array, Array]:
    """Return the scores of age at the first and the second look, shape (units,)."""
    standard = family(cell.family).standard
    share_then, share_by = cell.failures / cell.units, cell.then_by / cell.units
    if cell.plan == "fixed time":
        then, by = standard.quantile(np.array([share_then, share_by]))
        return np.full(cell.units, then), np.full(cell.units, by)
    age = generator.uniform(0.0, 2.0, cell.units)
    gain = share_by / share_then
    then = standard.quantile(np.clip(share_then * age, 1e-9, 0.999))
    return then, standard.quantile(np.clip(share_then * age * gain, 1e-9, 0.9995))


def study(cell: Cell, repeats: int) -> dict[str, object]:
    """Return how often the limits held in one cell."""
    generator = np.random.default_rng(list(cell.key.encode()))
    counts = dict.fromkeys(("at_most", "at_least", "plug_in_at_most", "plug_in_at_least", "outside"), 0)
    used, started = 0, time.perf_counter()
    while used < repeats:
        then, by = ages(cell, generator)
        z = survival_score(cell, then, generator.random(cell.units))
        failed = z <= then
        if failed.sum() < 3:
            continue
        found = fit(LifeData.right_censored(np.exp(np.minimum(z, then)), failed), cell.family)
        if not found.converged:
            continue
        used += 1
        watched = ~failed
        told = foretell(found, Watch.of(np.exp(then[watched]), np.exp(by[watched])), seed=used)
        number = int((z[watched] <= by[watched]).sum())
        least, most = told.at_least(CONFIDENCE), told.at_most(CONFIDENCE)
        counts["at_most"] += number <= most
        counts["at_least"] += number >= least
        counts["outside"] += not least <= number <= most
        mean = plug_in_mean(found, then[watched], by[watched])
        counts["plug_in_at_most"] += number <= poisson.ppf(CONFIDENCE, mean)
        counts["plug_in_at_least"] += number >= poisson.ppf(1 - CONFIDENCE, mean)
    shares = {name: round(count / used, 4) for name, count in counts.items()}
    return {**asdict(cell), "repeats": used, **shares, "seconds": round(time.perf_counter() - started, 1)}


def plug_in_mean(found: Fit, then: Array, by: Array) -> float:
    """Return the number foretold with the fitted parameters taken as if known."""
    start, end = found.reliability(np.exp(then)), found.reliability(np.exp(by))
    return float(np.sum(1.0 - np.asarray(end) / np.asarray(start)))


def main() -> None:
    """Study every cell that FILE does not hold yet."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("file", type=Path)
    parser.add_argument("--repeats", type=int, default=2000)
    chosen = parser.parse_args()
    foretelling._MOST_REFITS = foretelling._FEWEST_REFITS = REFITS  # enough beside the count's own spread
    done = json.loads(chosen.file.read_text()) if chosen.file.exists() else []
    names = {Cell(*(row[name] for name in Cell.__dataclass_fields__)).key for row in done}
    for cell in cells():
        if cell.key not in names:
            done.append(study(cell, chosen.repeats))
            chosen.file.write_text("[\n" + ",\n".join(json.dumps(row) for row in done) + "\n]\n")
            print(json.dumps(done[-1]), flush=True)


if __name__ == "__main__":
    main()
