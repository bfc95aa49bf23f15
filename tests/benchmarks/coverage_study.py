"""How often bounds of each kind hold, a resumable study: python tests/benchmarks/coverage_study.py FILE

A cell is a family, a number of units and a plan; it gives one line of JSON. For each of its samples (those with
three failures or more) it is asked whether the true B1, B10 and B50 life lies inside the one-sided bounds of each kind
at 90 % and 95 %, both ways. For a calibrated bound that needs no search: the true value is inside when the observed
signed root for it does not exceed the quantile simulated at the fit constrained to it. A cell already in FILE is passed
over, so the study can be stopped and started again.
"""

from __future__ import annotations

import argparse
import json
import sys
import time
from dataclasses import asdict, dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import LifeData, fit
from reliability_app.engine.coverage import judge
from reliability_app.engine.families import family

Array = NDArray[np.float64]
PERCENTS = (1.0, 10.0, 50.0)
CONFIDENCES = (0.90, 0.95)


@dataclass(frozen=True)
class Cell:
    """One design: what is drawn, how many units, and how the test ends."""

    family: str
    units: int
    plan: str  # complete, fixed time, fixed number, staggered
    failing: float  # expected share failing

    @property
    def seed(self) -> int:
        """A seed of its own for every cell, the same on every machine."""
        return int.from_bytes(json.dumps(asdict(self)).encode()[-8:], "little") % 2**32


def cells() -> list[Cell]:
    """Return the designs, those of the engine's design table first."""
    designs = [
        (10, "complete", 1.0), (10, "fixed time", 0.5), (20, "fixed time", 0.25), (50, "fixed time", 0.1),
        (5, "complete", 1.0), (20, "staggered", 0.5), (20, "fixed number", 0.5), (50, "fixed time", 0.2),
        (30, "fixed time", 0.2), (50, "staggered", 0.2), (20, "complete", 1.0), (50, "fixed time", 0.5),
        (100, "fixed time", 0.1), (100, "staggered", 0.1), (5, "fixed time", 0.8), (100, "fixed number", 0.1),
    ]  # fmt: skip
    return [Cell(name, *design) for design in designs for name in ("weibull", "lognormal")]


def draw(cell: Cell, generator: np.random.Generator) -> tuple[Array, NDArray[np.bool_]]:
    """Draw ln lives as scores (a = 0, b = 1) and whether each unit failed."""
    standard = family(cell.family).standard
    z = standard.quantile(generator.random(cell.units))
    if cell.plan == "complete":
        return z, np.ones(cell.units, dtype=bool)
    if cell.plan == "fixed number":
        end = np.sort(z)[round(cell.failing * cell.units) - 1]
        return np.minimum(z, end), z <= end
    if cell.plan == "fixed time":
        end = float(standard.quantile(np.array([cell.failing]))[0])
        return np.minimum(z, end), z <= end
    ends = staggered_ends(cell, generator)
    return np.minimum(z, ends), z <= ends


def staggered_ends(cell: Cell, generator: np.random.Generator) -> Array:
    """Draw ln ages at leaving: uniform in failure probability, so that the wanted share fails on average."""
    standard = family(cell.family).standard
    share = (
        generator.uniform(0.0, 2.0 * cell.failing, cell.units)
        if cell.failing <= 0.5
        else generator.uniform(2.0 * cell.failing - 1.0, 1.0, cell.units)
    )
    return standard.quantile(np.clip(share, 1e-9, 1 - 1e-9))


def study(cell: Cell, repeats: int, batch: int) -> dict[str, object]:
    """Return the shares held of one cell."""
    generator = np.random.default_rng(cell.seed)
    held: dict[tuple[float, str, float, str], int] = {}
    used = passed_over = failed_to_fit = 0
    started = time.perf_counter()
    while used < repeats:
        y, failed = draw(cell, generator)
        if failed.sum() < 3:
            passed_over += 1
            continue
        found = fit(LifeData.right_censored(np.exp(y), failed), cell.family)
        if not found.converged:
            failed_to_fit += 1
            continue
        used += 1
        for percent in PERCENTS:
            score = found.family.standard.quantile(np.array([percent / 100.0]))
            # The lives were drawn with a = 0, b = 1: the true ln life is the score itself.
            judged = judge(found, score, float(score[0]), confidences=CONFIDENCES, batch=batch, seed=used)
            for (kind, confidence, side), is_inside in judged.items():
                key = (percent, kind, confidence, side)
                held[key] = held.get(key, 0) + is_inside
    rows = [
        {"percent": p, "kind": k, "confidence": c, "side": s, "held": round(count / used, 4)}
        for (p, k, c, s), count in sorted(held.items())
    ]
    return {
        **asdict(cell), "repeats": used, "batch": batch, "too_few_failures": passed_over,
        "not_fitted": failed_to_fit, "seconds": round(time.perf_counter() - started, 1), "rows": rows,
    }  # fmt: skip


def main() -> None:
    """Study every cell that FILE does not hold yet."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("file", type=Path)
    parser.add_argument("--repeats", type=int, default=2000)
    parser.add_argument("--batch", type=int, default=1000)
    parser.add_argument(
        "--part", type=int, nargs=2, default=(0, 1), metavar=("K", "OF"), help="every OF-th cell from K"
    )
    options = parser.parse_args()
    done = set()
    if options.file.exists():
        lines = [json.loads(line) for line in options.file.read_text().splitlines()]
        done = {(line["family"], line["units"], line["plan"], line["failing"]) for line in lines}
    part, of = options.part
    for cell in cells()[part::of]:
        if (cell.family, cell.units, cell.plan, cell.failing) in done:
            continue
        result = study(cell, options.repeats, options.batch)
        with options.file.open("a") as file:
            file.write(json.dumps(result) + "\n")
        headline = [row for row in result["rows"] if row["percent"] == 10 and row["confidence"] == 0.95]
        shown = ", ".join(f"{row['kind']} {row['side']} {row['held']:.3f}" for row in headline)
        print(f"{cell} {result['seconds']} s: {shown}", file=sys.stderr, flush=True)


if __name__ == "__main__":
    main()
