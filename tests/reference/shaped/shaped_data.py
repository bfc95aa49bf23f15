"""Reads the figures of families with a further parameter."""

from __future__ import annotations

import json
from functools import cache
from pathlib import Path
from typing import Any

THRESHOLD = "_threshold"


@cache
def _figures() -> dict[str, dict[str, Any]]:
    path = Path(__file__).parent / "further_parameter.json"
    sets: dict[str, dict[str, Any]] = json.loads(path.read_text(encoding="utf-8"))["sets"]
    return sets


def shaped_figures(units: str, family: str) -> dict[str, Any]:
    """The figures of a family (with a threshold: `family_threshold`) for the units of a set."""
    figures: dict[str, Any] = _figures()[units][family]
    return figures


def shaped_cases() -> list[tuple[str, str]]:
    """All pairs of set and family for which there are figures."""
    return [(units, family) for units, families in _figures().items() for family in families]
