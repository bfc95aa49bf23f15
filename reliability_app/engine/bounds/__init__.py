"""Bounds of a measure at a confidence: one file a kind, chosen by name here."""

from reliability_app.engine.bounds.kinds import BOUND_KINDS, SIDES, Bounder, check_bound

__all__ = ["BOUND_KINDS", "SIDES", "Bounder", "check_bound"]
