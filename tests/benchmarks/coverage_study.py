"""How often bounds of each kind hold, a resumable study.

    python tests/benchmarks/coverage_study.py FILE           study every design that FILE does not hold yet
    python tests/benchmarks/coverage_study.py FILE --table   make resources/measured_coverage.json anew from FILE

A cell is a family, a number of units and a plan; it gives one line of JSON. Of each of its tests with three failures or
more it is asked whether the true B1, B10 and B50 life lies inside the one-sided bounds of each kind at 90 % and 95 %,
both ways. No bound need be searched: the true value is inside a calibrated bound when the observed signed root for it
does not exceed the quantile simulated at the fit constrained to it; a bound that runs beyond all ages so counts as
holding. Complete tests, fixed numbers of failures and fixed
ends are judged 20,000 at once (`coverage_at_once`); the others one by one, each with its own simulation of 399 tests,
by the same function that answers for the set in hand (of 399 tests the 20th and 40th greatest root are unbiased; where
some of them cannot be read a share held comes out too small, by a quarter of a point at the most). Where automatic
bounds are exact they are taken at their word, except in MEASURED_EXACT, where 2,000 of them are computed. A cell
already in FILE is passed over, so the study can be stopped and started again; all of it takes somewhat over an hour of
one core. At the end the headline cells among those judged one by one are studied again with twice as many tests; the
last line of a cell counts.
"""

from __future__ import annotations

import argparse
import json
import sys
import time
from collections import Counter
from collections.abc import Iterable
from dataclasses import asdict
from pathlib import Path

import numpy as np
from coverage_at_once import judge_at_once
from coverage_designs import DRAWN_AT_ONCE, HEADLINE, SLOWEST, Cell, cells, draw

from reliability_app.engine import LifeData, fit
from reliability_app.engine.coverage import judge
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.refitting import FEWEST_FAILURES

PERCENTS, CONFIDENCES, SIDES = (1.0, 10.0, 50.0), (0.90, 0.95), ("lower", "upper")
KINDS = ("automatic", "likelihood", "wald")
AT_ONCE = 20_000
TABLE = Path(__file__).parents[2] / "resources" / "measured_coverage.json"
MEASURED_EXACT = (
    *(Cell("lognormal", units, "complete", 1.0) for units in (5, 10, 20, 50, 100)),
    SLOWEST,
)
ABOUT = (
    "Shares of simulated tests, each with three failures or more, in which one-sided bounds of a life held. `held`: in "
    "hundredths of a percent, in the order percents, kinds, confidences, sides; null where an exact bound was not "
    "measured. A bound that runs beyond all ages counts as holding. Made by tests/benchmarks/coverage_study.py."
)
Key = tuple[float, str, float, str]


def study(cell: Cell, repeats: int, batch: int) -> dict[str, object]:
    """Return the shares held of one cell."""
    started = time.perf_counter()
    found = _study_at_once(cell) if cell.plan in DRAWN_AT_ONCE else _study_one_by_one(cell, repeats, batch)
    if cell in MEASURED_EXACT:
        found["rows"] += _exact_rows(cell, repeats)
    return {**asdict(cell), **found, "seconds": round(time.perf_counter() - started, 1)}


def _study_at_once(cell: Cell) -> dict[str, list[dict[str, object]]]:
    rows, unread, unbound = [], 0, []
    for percent in PERCENTS:
        judged, unread, without = judge_at_once(cell, percent, CONFIDENCES, AT_ONCE)
        unbound.append(without)
        rows += [_row((percent, *key), int(inside.sum()), inside.size) for key, inside in judged.items()]
    return {"rows": rows, "drawn": AT_ONCE, "too_few_failures": unread, "without_bound": unbound}


def _study_one_by_one(cell: Cell, repeats: int, batch: int) -> dict[str, list[dict[str, object]]]:
    generator, held, used = np.random.default_rng(cell.seed), Counter[Key](), Counter[float]()
    drawn = unread = unfitted = 0
    while min(used[percent] for percent in PERCENTS) < repeats and drawn < 20 * repeats:
        drawn += 1
        data = draw(cell, generator)
        if data.failed_count + data.found_failed_count < FEWEST_FAILURES:
            unread += 1
            continue
        found = fit(data, cell.family)
        if not found.converged:
            unfitted += 1
            continue
        for percent in PERCENTS:
            score = np.array([cell.place(percent / 100.0)])
            try:
                judged = judge(found, score, float(score[0]), confidences=CONFIDENCES, batch=batch, seed=drawn)
            except BoundUnavailable:
                continue
            used[percent] += 1
            held.update({(percent, *key): int(inside) for key, inside in judged.items()})
    rows = [_row(key, count, used[key[0]]) for key, count in sorted(held.items())]
    given = drawn - unread - unfitted
    without = [given - used[percent] for percent in PERCENTS]
    return {"rows": rows, "drawn": drawn, "too_few_failures": unread, "not_fitted": unfitted, "without_bound": without}


def _exact_rows(cell: Cell, repeats: int) -> list[dict[str, object]]:
    """Compute exact bounds of complete tests by the public face, and count those that hold."""
    generator, held = np.random.default_rng(cell.seed), Counter[Key]()
    fractions = np.array(PERCENTS) / 100.0
    truth = np.exp(cell.standard.quantile(fractions))
    for _ in range(repeats):
        life = np.exp(cell.standard.quantile(generator.random(cell.units)))
        found = fit(LifeData.right_censored(life, np.ones(cell.units)), cell.family)
        for confidence in CONFIDENCES:
            for side in SIDES:
                lower, upper = found.life_bounds(fractions, confidence=confidence, side=side, kind="automatic")
                inside = truth >= lower if side == "lower" else truth <= upper
                held.update({(p, "automatic", confidence, side): int(i) for p, i in zip(PERCENTS, inside, strict=True)})
    return [_row(key, count, repeats) for key, count in sorted(held.items())]


def _row(key: Key, held: int, repeats: int) -> dict[str, object]:
    percent, kind, confidence, side = key
    return {
        "percent": percent, "kind": "automatic" if kind == "calibrated" else kind, "confidence": confidence,
        "side": side, "held": round(held / max(repeats, 1), 4), "repeats": repeats,
    }  # fmt: skip


def table_text(lines: Iterable[dict[str, object]]) -> str:
    """Return the table that ships with the program, a cell a line, in the order of the designs."""
    shown, studied = [], {cell_of(line): line for line in lines}
    for line in (studied[cell] for cell in cells() if cell in studied):
        held = {(row["percent"], row["kind"], row["confidence"], row["side"]): row["held"] for row in line["rows"]}
        repeats = {(row["percent"], row["kind"]): row["repeats"] for row in line["rows"]}
        share_read = 1.0 - line["too_few_failures"] / line["drawn"]
        shown.append({
            **{key: line[key] for key in ("family", "units", "plan", "failing")},
            "share_read": round(share_read, 4),
            "repeats": [repeats.get((p, kind), 0) for p in PERCENTS for kind in KINDS],
            "held": [
                None if (p, kind, c, s) not in held else round(1e4 * held[p, kind, c, s])
                for p in PERCENTS for kind in KINDS for c in CONFIDENCES for s in SIDES
            ],
        })  # fmt: skip
    axes = {"percents": PERCENTS, "kinds": KINDS, "confidences": CONFIDENCES, "sides": SIDES}
    head = ",\n".join(f"{json.dumps(key)}: {json.dumps(value)}" for key, value in {"about": ABOUT, **axes}.items())
    body = ",\n".join(json.dumps(cell, separators=(",", ":")) for cell in shown)
    return f'{{\n{head},\n"cells": [\n{body}\n]\n}}\n'


def main() -> None:
    """Study every cell that FILE does not hold yet, or make the table from it."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("file", type=Path)
    parser.add_argument("--table", action="store_true", help="write the table that ships with the program")
    parser.add_argument("--repeats", type=int, default=2000)
    parser.add_argument("--batch", type=int, default=399)
    options = parser.parse_args()
    lines = [json.loads(line) for line in options.file.read_text().splitlines()] if options.file.exists() else []
    if options.table:
        TABLE.write_text(table_text(lines), encoding="utf-8")
        return
    done = {cell_of(line): line["drawn"] for line in lines}
    for cell, repeats in [
        *((cell, options.repeats) for cell in cells()),
        *((c, 2 * options.repeats) for c in HEADLINE),
    ]:
        if done.get(cell, 0) >= repeats:
            continue
        result = study(cell, repeats, options.batch)
        done[cell] = result["drawn"]
        with options.file.open("a") as file:
            file.write(json.dumps(result) + "\n")
        headline = [row for row in result["rows"] if row["percent"] == 10 and row["confidence"] == 0.95]
        shown = ", ".join(f"{row['kind']} {row['side']} {row['held']:.3f}" for row in headline)
        print(f"{cell} {result['seconds']} s: {shown}", file=sys.stderr, flush=True)


def cell_of(line: dict[str, object]) -> Cell:
    """Return the design that a line of the file is about."""
    return Cell(line["family"], line["units"], line["plan"], line["failing"])


if __name__ == "__main__":
    main()
