"""Builds the units of the published examples, each from the data of its entry in published.json."""

from __future__ import annotations

from typing import Any

import numpy as np

from tests.reference.reference_data import Units, interval_units, published, right_censored_units


def failed_and_running(failed: list[float], running: list[float], count: list[int] | None = None) -> Units:
    """Units failed at these ages and units running at those, `count` of them each."""
    quantity = [1] * len(failed) + (count or [1] * len(running))
    flags = [1] * len(failed) + [0] * len(running)
    return right_censored_units([*failed, *running], flags, quantity)


def complete(lives: list[float]) -> Units:
    """Units that all failed."""
    return failed_and_running(lives, [])


def nist_8413() -> Units:
    """10 failures of 20 units, test stopped at 500 h."""
    columns = _data("nist-8.4.1.3-weibull-mle")
    return right_censored_units(columns["time"], columns["status"], columns["n"])


def locomotive_controls() -> Units:
    """37 failures of 96, the rest running at 135 thousand miles."""
    columns = _data("locomotive-controls-lognormal")
    stop = columns["right_censored"]
    return failed_and_running(columns["failures"], [stop["value"]], [stop["count"]])


def ball_bearings() -> Units:
    """23 complete lives, the version with 48.48 and 68.64."""
    return complete(_data("ball-bearings-weibull")["values"])


def bearing_cages() -> Units:
    """6 failures of 1703, the others removed at many ages."""
    columns = _data("bearing-cage-weibull-B10-LR")
    ages, counts = zip(*columns["censored"], strict=True)
    return failed_and_running(columns["failures"], list(ages), list(counts))


def device_g(mode: str) -> Units:
    """One failure mode with the other censored, or both "pooled"."""
    columns = _data("device-G-competing-modes")
    surge, wear = columns["S"], columns["W"]
    failed = {"S": surge, "W": wear, "pooled": surge + wear}[mode]
    others = {"S": wear, "W": surge, "pooled": []}[mode]
    return failed_and_running(failed, [*others, *([300] * columns["censored_at_300"])])


def device_a(temperature: str) -> Units:
    """The units at 40, 60 or 80 degrees C, test stopped at 5000 h; with 925 where a public script has 95."""
    cell = _data("device-A-arrhenius-lognormal")[f"C{temperature}"]
    return failed_and_running(cell["failed"], [5000], [cell["censored_5000"]])


def cracks() -> Units:
    """167 parts looked at on up to eight days, the first time from day 0."""
    columns = _data("r-cracks-weibull-interval")
    days = columns["days"]
    return interval_units([0, *days], [*days, np.inf], [*columns["found"], columns["right_censored"]])


def alpha_particles(sample: str) -> Units:
    """Times in eight classes, the first from 0, the last open."""
    columns = _data("alpha-particle-exponential-grouped")
    edges = np.array([np.inf if edge is None else edge for edge in columns["edges"]])
    counts = np.array(columns[sample])
    seen = counts > 0
    return interval_units(edges[:-1][seen], edges[1:][seen], counts[seen])


def manganese() -> Units:
    """19 values and six below a detection limit."""
    columns = _data("epa-15-1-manganese-left-censored")
    exact, below = columns["exact"], columns["left_censored"]
    return interval_units([*exact, *([0] * len(below))], [*exact, *below])


def six_units() -> Units:
    """Six units of R survival's own test testreg, the covariate left out."""
    columns = _data("r-testreg-four-distributions")
    return right_censored_units(columns["time"], columns["status"])


def generated_weibull_lives() -> Units:
    """20 generated lives of a help page."""
    return complete(_data("envstats-weibull-gamma-complete")["weibull"])


def carcinogen() -> Units:
    """17 failures of 19."""
    columns = _data("weibull3-rats")
    return failed_and_running(columns["exact"], columns["right"])


def motorettes() -> Units:
    """40 motorettes at four temperatures, the temperature left out."""
    cells = _data("motorettes-weibull-linear").values()
    failed = [life for cell in cells for life in cell.get("failed", [])]
    return failed_and_running(failed, [life for cell in cells for life in cell["censored"]])


def _data(item: str) -> dict[str, Any]:
    data: dict[str, Any] = published(item)["data"]
    return data
