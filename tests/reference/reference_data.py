"""Reads the reference files of this folder and builds the engine's LifeData from their units."""

from __future__ import annotations

import json
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import LifeData

FOLDER = Path(__file__).parent
SET_NAMES = tuple(sorted(path.stem for path in FOLDER.glob("*.json") if path.stem != "published"))


@dataclass(frozen=True)
class Units:
    """Units as intervals: exact if lower == upper, running if upper is infinite, left if lower is 0 or -inf."""

    lower: NDArray[np.float64]
    upper: NDArray[np.float64]
    quantity: NDArray[np.float64]
    entered: NDArray[np.float64]

    def life_data(self) -> LifeData:
        """The same units as the engine takes them."""
        return LifeData.from_intervals(self.lower, self.upper, quantity=self.quantity.astype(int), entered=self.entered)


@cache
def reference_set(name: str) -> dict[str, Any]:
    """One computed set with its units and figures."""
    content: dict[str, Any] = json.loads((FOLDER / f"{name}.json").read_text(encoding="utf-8"))
    return content


@cache
def published(item: str) -> dict[str, Any]:
    """One published worked example: source, data, expected, recomputed."""
    content = json.loads((FOLDER / "published.json").read_text(encoding="utf-8"))
    example: dict[str, Any] = content["items"][item]
    return example


def units_of(name: str) -> Units:
    """The units of a computed set."""
    columns = reference_set(name)["units"]
    if "life" in columns:
        return right_censored_units(columns["life"], columns["failed"], columns.get("quantity"), columns.get("entered"))
    lower = [-np.inf if value is None else value for value in columns["lower"]]
    upper = [np.inf if value is None else value for value in columns["upper"]]
    return interval_units(lower, upper, columns.get("quantity"), columns.get("entered"))


def right_censored_units(life: Any, failed: Any, quantity: Any = None, entered: Any = None) -> Units:
    """Units that failed at their life, or run on at it where `failed` is 0."""
    ages = np.asarray(life, dtype=float)
    upper = np.where(np.asarray(failed, dtype=bool), ages, np.inf)
    return interval_units(ages, upper, quantity, entered)


def interval_units(lower: Any, upper: Any, quantity: Any = None, entered: Any = None) -> Units:
    """Units known to have failed between two ages."""
    low = np.asarray(lower, dtype=float)
    count = np.ones_like(low) if quantity is None else np.asarray(quantity, dtype=float)
    entry = np.zeros_like(low) if entered is None else np.asarray(entered, dtype=float)
    return Units(low, np.asarray(upper, dtype=float), count, entry)


def figures(values: Any) -> NDArray[np.float64]:
    """Figures as an array, with NaN where the file says that a value does not exist."""
    return np.array([np.nan if value is None else value for value in values], dtype=float)
