"""The kinds and sides of bound by name, and what a confidence leaves beyond each end."""

from __future__ import annotations

from reliability_app.engine.errors import DataError, UnknownName

BOUND_KINDS = ("automatic", "calibrated", "likelihood", "wald", "exact")
SIDES = ("lower", "upper", "two")
OPPOSITE_SIDE = {"lower": "upper", "upper": "lower", "two": "two"}
LEAST_CONFIDENCE, MOST_CONFIDENCE = 0.5, 0.999999


def check_bound(kind: str, side: str, confidence: float) -> None:
    """Raise UnknownName or DataError where the three do not name a bound."""
    if kind not in BOUND_KINDS:
        raise UnknownName(
            f"There is no kind of bound called {kind!r}. The kinds of bound are: {', '.join(BOUND_KINDS)}."
        )
    if side not in SIDES:
        raise UnknownName(f"There is no side called {side!r}. The sides are: {', '.join(SIDES)}.")
    if not LEAST_CONFIDENCE < confidence <= MOST_CONFIDENCE:
        raise DataError(
            [f"A confidence of {confidence:g} cannot be used: give a number above 0.5 and below 1, such as 0.95."]
        )


def tail_of(side: str, confidence: float) -> float:
    """Return the probability left beyond each end: all of it on a one-sided bound's side, half of it on two sides."""
    return 0.5 * (1.0 - confidence) if side == "two" else 1.0 - confidence
